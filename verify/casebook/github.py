"""Annotations and the step summary of a GitHub Actions run."""

from __future__ import annotations

import os
from collections.abc import Sequence
from pathlib import Path

from verify.casebook.outcome import Message, Result, summary

MOST_ANNOTATIONS = 9
"""A step shows ten annotations of a kind; the tenth says how many more there are."""
MOST_ROWS = 300
"""Rows of the table in a summary, which may hold one megabyte."""
LONGEST = 1000
"""Characters of one message."""


def annotation_lines(results: Sequence[Result]) -> list[str]:
    """Return the workflow commands for the cases that did not pass: at most nine, then one that counts the others.

    Examples
    --------
    >>> from verify.casebook.outcome import Outcome
    >>> off = Message("expect.c1", "100% off", 9)
    >>> annotation_lines([Result("demo/a", "a.case.toml", Outcome.DIFFERS, messages=(off,))])
    ['::error file=a.case.toml,line=9,title=demo/a%3A differs::expect.c1: 100%25 off']
    """
    failed = [result for result in results if not result.passed]
    lines = [_annotation(result) for result in failed[:MOST_ANNOTATIONS]]
    more = len(failed) - len(lines)
    if more:
        lines.append(f"::error title=sidecheck casebook::{more} more; all are in the summary of this step")
    return lines


def _annotation(result: Result) -> str:
    first = result.messages[0] if result.messages else Message("", result.outcome.value)
    text = "\n".join(map(str, result.messages)) or result.outcome.value
    place = {"file": _relative(result.path), "line": first.line, "title": f"{result.name}: {result.outcome.value}"}
    properties = ",".join(f"{key}={_property(str(value))}" for key, value in place.items() if value is not None)
    return f"::error {properties}::{_data(text[:LONGEST])}"


def _relative(path: str) -> str:
    """Annotations name files from the root of the repository, where a step starts."""
    root = Path(os.environ.get("GITHUB_WORKSPACE") or os.getcwd()).resolve()
    whole = Path(path).resolve()
    return whole.relative_to(root).as_posix() if whole.is_relative_to(root) else Path(path).as_posix()


def _data(text: str) -> str:
    return text.replace("%", "%25").replace("\r", "%0D").replace("\n", "%0A")


def _property(text: str) -> str:
    return _data(text).replace(":", "%3A").replace(",", "%2C")


def step_summary(results: Sequence[Result], left: int = 0) -> str:
    """Return the summary in Markdown: one line, then a table with the cases that did not pass first.

    Examples
    --------
    >>> from verify.casebook.outcome import Outcome
    >>> print(step_summary([Result("demo/a", "a.case.toml", Outcome.PASS, "agrees", "agrees", "proved")]))
    ### sidecheck casebook
    <BLANKLINE>
    1 case: 1 pass
    <BLANKLINE>
    | case | outcome | expected | found | grade | why |
    |---|---|---|---|---|---|
    | demo/a | pass | agrees | agrees | proved |  |
    <BLANKLINE>
    """
    ordered = sorted(results, key=lambda result: result.passed)
    lines = ["### sidecheck casebook", "", summary(results, left=left), ""]
    lines += ["| case | outcome | expected | found | grade | why |", "|---|---|---|---|---|---|"]
    lines += [_row(result) for result in ordered[:MOST_ROWS]]
    if len(ordered) > MOST_ROWS:
        lines += ["", f"and {len(ordered) - MOST_ROWS} more"]
    return "\n".join([*lines, ""])


def _row(result: Result) -> str:
    outcome = result.outcome.value if result.passed else f"**{result.outcome.value}**"
    why = "; ".join(map(str, result.messages))[:LONGEST]
    cells = [_cell(text) for text in (result.name, result.expected, result.found, result.grade, why)]
    return f"| {cells[0]} | {outcome} | {' | '.join(cells[1:])} |"


def _cell(text: str) -> str:
    """Text that stays text in a Markdown table."""
    text = " ".join(text.split()).replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
    for sign in "\\`*_[]|":
        text = text.replace(sign, f"&#{ord(sign)};")
    return text
