"""Holding what was found against what ``[expect]`` says, and against a claim that must not fail unnoticed."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from fractions import Fraction
from typing import Any

from verify.casebook.found import UNUSABLE, Found
from verify.casebook.outcome import Message, Outcome
from verify.errors import InputError
from verify.problem.keys import NUMBER_NAMES
from verify.problem.nearest import suggestion
from verify.review.printed import Match, read_printed

GREEN = ("proved", "enclosed", "checked numerically", "agrees", "last digit")
"""Verdicts that pass where nothing else is expected."""
RED = ("differs", "refuted", UNUSABLE)
"""Verdicts that pass only where they are expected."""
UNDECIDED = "undecided"
"""The verdict that never passes."""
SHOWN = 25
"""Digits of a number in a message."""


def expected_verdicts(expect: Mapping[str, Any]) -> tuple[str, ...]:
    """Return the verdicts that ``[expect]`` allows.

    The one that it names; else what its other keys imply (an error is about an unusable input, a step or a witness
    about a refutation, a status about the verdicts that have it); else any green one.

    Raises
    ------
    InputError
        For a verdict that does not exist.

    Examples
    --------
    >>> expected_verdicts({"step": "support"}), expected_verdicts({"c1": "91"})
    (('refuted',), ('proved', 'enclosed', 'checked numerically', 'agrees', 'last digit'))
    """
    if "verdict" in expect:
        return (_known(expect["verdict"]),)
    if "error" in expect or "key" in expect:
        return (UNUSABLE,)
    if "step" in expect or "witness" in expect:
        return ("refuted",)
    if "status" in expect:
        words = (*GREEN, *RED, UNDECIDED)
        return tuple(word for word in words if Found(word).status == int(expect["status"]))
    return GREEN


def _known(verdict: str) -> str:
    words = (*GREEN, *RED, UNDECIDED)
    if verdict in words:
        return verdict
    raise InputError(f"there is no verdict {verdict[:40]!r}", suggestion(verdict, words), key="expect.verdict")


def judge(expect: Mapping[str, Any], found: Found) -> tuple[Outcome, tuple[Message, ...]]:
    """Return how a case ended, and why it did not pass.

    An undecided run never passes, whatever is expected.

    Raises
    ------
    InputError
        When ``[expect]`` itself cannot be used.

    Examples
    --------
    >>> judge({}, Found("proved"))
    (<Outcome.PASS: 'pass'>, ())
    >>> judge({"verdict": "refuted"}, Found("refuted"))[0], judge({}, Found("refuted"))[0]
    (<Outcome.PASS: 'pass'>, <Outcome.REFUTED: 'refuted'>)
    >>> judge({"verdict": "undecided"}, Found("undecided"))[0]
    <Outcome.UNDECIDED: 'undecided'>
    """
    allowed = expected_verdicts(expect)
    if found.verdict == UNDECIDED:
        why = "; ".join(found.notes) or "a step stayed open within its budget"
        return Outcome.UNDECIDED, (Message("", f"undecided: {why}"),)
    if found.verdict not in allowed:
        return _unexpected(allowed, found)
    differences = tuple(_differences(expect, found))
    return (Outcome.DIFFERS if differences else Outcome.PASS), differences


def _unexpected(allowed: tuple[str, ...], found: Found) -> tuple[Outcome, tuple[Message, ...]]:
    outcome = {"refuted": Outcome.REFUTED, UNUSABLE: Outcome.UNUSABLE}.get(found.verdict, Outcome.DIFFERS)
    if outcome is Outcome.UNUSABLE:
        return outcome, (Message(found.key, found.error),)
    wanted = allowed[0] if len(allowed) == 1 else "a pass"
    why = f" ({'; '.join(found.notes)})" if found.notes else ""
    return outcome, (Message("expect.verdict", f"expected {wanted}, found {found.verdict}{why}"),)


def _differences(expect: Mapping[str, Any], found: Found) -> Iterable[Message]:
    for key, wanted in expect.items():
        text = _number(key, str(wanted), found) if key in NUMBER_NAMES else CHECKS[key](wanted, found)
        if text:
            yield Message(f"expect.{key}", text)


def _number(key: str, wanted: str, found: Found) -> str:
    """All digits that are printed must be right, rounded or cut; a fraction must be the number itself."""
    if key not in found.numbers:
        return f"expected {wanted}, found none; this test has {', '.join(found.numbers) or 'no numbers'}"
    true, printed = found.numbers[key], read_printed(wanted, f"expect.{key}")
    if not isinstance(printed.value, Fraction):
        raise InputError(f"{wanted} is no rational number", "write its decimals", key=f"expect.{key}")
    if printed.match(true) is Match.SAME or printed.truncates(true):
        return ""
    return f"expected {wanted}, found {true.text(SHOWN)}"


def _same(of: Callable[[Found], str]) -> Callable[[Any, Found], str]:
    def check(wanted: Any, found: Found) -> str:
        return "" if _bare(wanted) == _bare(of(found)) else f"expected {wanted}, found {of(found) or 'none'}"

    return check


def _bare(text: Any) -> str:
    return "".join(str(text).split())


def _law(wanted: str, found: Found) -> str:
    if _bare(wanted) in (_bare(found.law), _bare(found.law_text)):
        return ""
    return f"expected {wanted}, found {found.law_text or 'no law'}"


def _within(of: Callable[[Found], str]) -> Callable[[Any, Found], str]:
    def check(wanted: Any, found: Found) -> str:
        return "" if str(wanted) in of(found) else f"expected a text with {wanted!r}, found {of(found) or 'none'!r}"

    return check


def _step(wanted: str, found: Found) -> str:
    names = list(dict.fromkeys(name for name, _ in found.weak))
    return "" if wanted in names else f"expected the step {wanted} to fail, found {', '.join(names) or 'none'}"


def _named(what: str, of: Callable[[Found], tuple[str, ...]]) -> Callable[[Any, Found], str]:
    """Each name that is listed must be found; an empty list says that there is none."""

    def check(wanted: Any, found: Found) -> str:
        names = [wanted] if isinstance(wanted, str) else list(wanted)
        right = set(names) <= set(of(found)) if names else not of(found)
        return "" if right else f"expected {what} {', '.join(names) or 'none'}, found {', '.join(of(found)) or 'none'}"

    return check


CHECKS: dict[str, Callable[[Any, Found], str]] = {
    "verdict": lambda _, found: "",
    "status": _same(lambda found: str(found.status)),
    "error": _within(lambda found: found.error),
    "key": _same(lambda found: found.key),
    "grade": _same(lambda found: found.grade),
    "form": _same(lambda found: found.form),
    "law": _law,
    "natural_parameter": _same(lambda found: found.natural_parameter),
    "statistic": _same(lambda found: found.statistic),
    "step": _step,
    "witness": _within(lambda found: "; ".join(witness for _, witness in found.weak)),
    "flags": _named("the flags", lambda found: found.flags),
    "slips": _named("the slips", lambda found: found.slips),
}
"""Key of ``[expect]`` -> what is not as it says, or nothing. To add a key: one line here and one in the keys."""
