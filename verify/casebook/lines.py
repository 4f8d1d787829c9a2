"""Results as text: a table to read, lines of JSON to keep."""

from __future__ import annotations

import json
from collections.abc import Sequence
from typing import Any

from verify.casebook.outcome import Result, counts_of, status_of, summary
from verify.report.layout import table, wrapped

HEAD = ["case", "outcome", "expected", "found", "grade"]


def json_lines(results: Sequence[Result]) -> bytes:
    """Return one JSON object a line, without times: the same book gives the same bytes, whoever ran it."""
    return "".join(json.dumps(result.as_json(), ensure_ascii=False) + "\n" for result in results).encode(
        "utf-8", "backslashreplace"
    )


def book_json(results: Sequence[Result], left: int) -> dict[str, Any]:
    """Return a run as one JSON object."""
    return {
        "status": status_of(results),
        "counts": counts_of(results),
        "not_run": left,
        "cases": [result.as_json() for result in results],
    }


def book_text(results: Sequence[Result], left: int = 0) -> str:
    """Return the table of a run, below it why cases did not pass, and the line that counts.

    Examples
    --------
    >>> from verify.casebook.outcome import Outcome
    >>> print(book_text([Result("demo/a", "a.case.toml", Outcome.PASS, "agrees", "agrees", "proved")]))
      case    outcome  expected  found   grade
      demo/a  pass     agrees    agrees  proved
    <BLANKLINE>
    1 case: 1 pass
    """
    rows = [[r.name, r.outcome.value, r.expected or "a pass", r.found, r.grade or "-"] for r in results]
    parts = [table([HEAD, *rows])]
    parts += [_why(result) for result in results if not result.passed]
    return "\n\n".join([*parts, summary(results, left=left)])


def _why(result: Result) -> str:
    lines = [f"{result.name} ({result.path}): {result.outcome.value}"]
    lines += [wrapped(str(message), first="  ", rest="    ") for message in result.messages]
    return "\n".join(lines)
