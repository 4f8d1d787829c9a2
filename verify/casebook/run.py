"""Run the cases of a book, one after another or in several processes: the results are the same, in the same order."""

from __future__ import annotations

import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import partial
from pathlib import Path
from typing import Any

from verify.casebook.expectation import expected_verdicts, judge
from verify.casebook.find import case_name
from verify.casebook.found import DIGITS, UNUSABLE, Found, find
from verify.casebook.outcome import Message, Outcome, Result
from verify.errors import InputError, UndecidedError, mistake
from verify.parallel import run_all
from verify.problem.casefile import CaseText, read_case_text

PUBLISHED = "published"
"""A folder of this name holds outside values; each of its cases names its source."""


@dataclass(frozen=True)
class How:
    """How cases are run.

    Attributes
    ----------
    digits : int
        Significant digits to prove, more where a case prints more.
    budget : float
        Seconds for each symbolic step.
    cache : str or None
        Directory of remembered results.
    """

    digits: int = DIGITS
    budget: float = 10.0
    cache: str | None = None


def run_case_file(path: str, how: How | None = None) -> Result:
    """Run one case file; whatever happens is in the result.

    Examples
    --------
    >>> run_case_file("no-such.case.toml").outcome
    <Outcome.UNUSABLE: 'unusable'>
    """
    start = time.perf_counter()
    result = Result(case_name(path), path, Outcome.INTERNAL)
    try:
        result = _run(result, how or How())
    except InputError as error:
        result = replace(result, outcome=Outcome.UNUSABLE, found=UNUSABLE, messages=(Message(error.key, str(error)),))
    except Exception as error:  # a mistake of this program on one case: shown as such, never green
        result = replace(result, found=Outcome.INTERNAL.value, messages=(Message("", mistake(error)),))
    messages = tuple(replace(message, line=_line_for(path, message.key)) for message in result.messages)
    return replace(result, messages=messages, seconds=time.perf_counter() - start)


def _run(result: Result, how: How) -> Result:
    text = read_case_text(result.path)
    try:
        _require_source(text)
        found = find(text, digits=how.digits, budget=how.budget, cache=how.cache)
        outcome, messages = judge(text.expect, found)
        expected = expected_verdicts(text.expect)
    except InputError as error:
        raise error.at(file=result.path) from None
    return replace(
        result,
        outcome=outcome,
        messages=messages,
        expected=expected[0] if len(expected) == 1 else "",
        **_shown(found, how.digits),
    )


def _shown(found: Found, digits: int) -> dict[str, Any]:
    return {
        "found": found.verdict,
        "grade": found.grade,
        "law": found.law_text,
        "numbers": {name: value.strings(digits) for name, value in found.numbers.items()},
        "slips": found.slips,
        "notes": found.notes,
    }


def _require_source(text: CaseText) -> None:
    if Path(text.path).parent.name == PUBLISHED and not text.tables.get("source", "").strip():
        raise InputError("a published case names no source", 'add source = "author, title, place in it"', key="source")


def _line_for(path: str, key: str) -> int | None:
    """The line of a key; without an ``[expect]``, a verdict that is no pass is about the claim."""
    line = line_of(path, key)
    return line_of(path, "claim") if line is None and key == "expect.verdict" else line


def line_of(path: str, key: str) -> int | None:
    """Return the line of a case file where a key stands, ``expect.gamma1``; the line of its table without it.

    Only for pointing at it: a layout that is not the usual one gives None.
    """
    table, _, name = key.rpartition(".")
    try:
        lines = Path(path).read_text(encoding="utf-8", errors="replace").splitlines()
    except OSError:
        return None
    here, found = "", None
    for number, line in enumerate(lines, 1):
        stripped = line.strip()
        if stripped.startswith("["):
            here = stripped.strip("[] ")
            found = number if here == (table or name) and found is None else found
        elif here == table and stripped.partition("=")[0].strip() == name and "=" in stripped:
            return number
    return found


def _given_up(path: str, error: UndecidedError) -> Result:
    """What stands for a case over which worker after worker died, out of memory perhaps."""
    found = Outcome.UNDECIDED.value
    return Result(case_name(path), path, Outcome.UNDECIDED, found=found, messages=(Message("", str(error)),))


def run_book(
    paths: Sequence[str],
    how: How | None = None,
    *,
    workers: int = 1,
    scheduler: str | None = None,
    fail_fast: bool = False,
    progress: Callable[[int], None] | None = None,
) -> list[Result]:
    """Run cases and return their results in the order of the paths.

    Parameters
    ----------
    paths : sequence of str
        Case files.
    how : How, optional
        Digits and budget.
    workers : int
        Processes; 1 for this one alone.
    scheduler : str, optional
        Address of a running Dask scheduler whose workers see the same files.
    fail_fast : bool
        Whether to stop behind the first case that does not pass, first in the order of the paths.
    progress : callable, optional
        Called with the number of cases done so far.
    """
    results = []
    for result in run_all(partial(run_case_file, how=how or How()), paths, workers, scheduler, lost=_given_up):
        results.append(result)
        if progress is not None:
            progress(len(results))
        if fail_fast and not result.passed:
            break
    return results
