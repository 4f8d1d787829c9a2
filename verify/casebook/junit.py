"""JUnit XML in the plain form that strict readers accept.

No ``properties`` inside a test case, times with three decimals, a failure is ``differs`` or ``undecided``, an input
that cannot be used is an ``error``, and nothing is ever ``skipped`` (some servers show that green).
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Sequence
from itertools import groupby
from pathlib import Path
from xml.etree.ElementTree import Element, SubElement, indent, tostring

from verify.casebook.outcome import Outcome, Result
from verify.problem.casefile import SUFFIX

FAILURES = {Outcome.DIFFERS: "differs", Outcome.REFUTED: "differs", Outcome.UNDECIDED: "undecided"}
"""Outcome -> type of the ``failure``."""
ERRORS = {Outcome.UNUSABLE: "unusable", Outcome.INTERNAL: "internal"}
"""Outcome -> type of the ``error``."""
_FORBIDDEN = re.compile("[^\t\n\r\x20-\x7e\x85\xa0-\ud7ff\ue000-\ufdcf\ufdf0-\ufffd\U00010000-\U0010fffd]")


def clean(text: str) -> str:
    r"""Strip what XML 1.0 cannot hold or advises against: control characters, lone surrogates, noncharacters.

    Examples
    --------
    >>> clean("c1\x00 \x1b[31mred")
    'c1 [31mred'
    """
    return _FORBIDDEN.sub("", text)


def junit_xml(results: Sequence[Result]) -> bytes:
    """Return the report of a run: one suite a folder, in the order of the run."""
    root = Element("testsuites", {"name": "sidecheck", **_counts(results)})
    groups = [list(group) for _, group in groupby(results, _folder)]
    suites = unique_names([_name(_folder(group[0]).replace("/", ".")) for group in groups])
    for suite, group in zip(suites, groups, strict=True):
        element = SubElement(root, "testsuite", {"name": suite, **_counts(group)})
        names = unique_names([_name(Path(result.path).name.removesuffix(SUFFIX)) for result in group])
        for result, name in zip(group, names, strict=True):
            _case(element, suite, result, name)
    indent(root)
    return bytes(tostring(root, encoding="utf-8", xml_declaration=True)) + b"\n"


def _name(text: str) -> str:
    """A name on one line, never empty."""
    return " ".join(clean(text).split()) or "-"


def _folder(result: Result) -> str:
    return Path(result.path).parent.as_posix()


def _counts(results: Sequence[Result]) -> dict[str, str]:
    return {
        "tests": str(len(results)),
        "failures": str(sum(result.outcome in FAILURES for result in results)),
        "errors": str(sum(result.outcome in ERRORS for result in results)),
        "time": f"{sum(result.seconds for result in results):.3f}",
    }


def _case(suite: Element, classname: str, result: Result, name: str) -> None:
    attributes = {"classname": classname, "name": name, "time": f"{result.seconds:.3f}"}
    case = SubElement(suite, "testcase", attributes)
    if result.passed:
        return
    lines = [clean(str(message)) for message in result.messages] or [result.outcome.value]
    tag, kinds = ("failure", FAILURES) if result.outcome in FAILURES else ("error", ERRORS)
    reason = SubElement(case, tag, {"message": _name(lines[0])[:500], "type": kinds[result.outcome]})
    reason.text = "\n".join([clean(result.path), *lines])


def unique_names(names: Sequence[str]) -> list[str]:
    """Return the names with a number behind each that was there before.

    Examples
    --------
    >>> unique_names(["a", "b", "a"])
    ['a', 'b', 'a (2)']
    """
    seen: Counter[str] = Counter()
    taken, out = set(names), []
    for name in names:
        seen[name] += 1
        chosen, number = name, seen[name]
        while number > 1 and (chosen := f"{name} ({number})") in taken:
            number += 1
        taken.add(chosen)
        out.append(chosen)
    return out
