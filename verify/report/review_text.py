"""Verdicts in the terminal: one line a row, in colour where the terminal has it, and a line that counts them."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable
from typing import Any

from verify.review.record import kind_of, summary_of

COLOURS = {"agrees": "green", "last digit": "yellow", "differs": "bold red", "refuted": "bold magenta", "undecided": "cyan",
           "unusable": "bold yellow"}  # fmt: skip
MOST_ROWS = 60
"""Rows shown; of a longer table those that do not agree."""


def tally(records: Iterable[dict[str, Any]], most: int = MOST_ROWS) -> tuple[Counter[str], list[dict[str, Any]], bool]:
    """Count verdicts and choose the rows to show: all of a short table, else the first that do not agree.

    Returns
    -------
    counts, shown, whole : Counter, list, bool
        ``whole`` says whether every row is shown.
    """
    counts: Counter[str] = Counter()
    first, unequal = [], []
    for record in records:
        kind = kind_of(record)
        counts[kind] += 1
        if len(first) <= most:
            first.append(record)
        if kind != "agrees" and len(unequal) < most:
            unequal.append(record)
    whole = counts.total() <= most
    return counts, first if whole else unequal, whole


def print_rows(records: Iterable[dict[str, Any]]) -> Counter[str]:
    """Print the table of verdicts on stdout and return the counts."""
    from rich import box
    from rich.console import Console
    from rich.table import Table
    from rich.text import Text

    counts, shown, whole = tally(records)
    console = Console(width=None if Console().is_terminal else 120)
    table = Table(box=box.SIMPLE_HEAD, pad_edge=False)
    for name in ("row", "verdict", "printed", "right", "because"):
        table.add_column(name, overflow="fold")
    for record in shown:
        kind = kind_of(record)
        cells = [_name(record), Text(kind, style=COLOURS[kind]), _claimed(record), _right(record), because(record)]
        table.add_row(*(cell if isinstance(cell, Text) else Text(cell) for cell in cells))
    if shown:
        console.print(table)
    if not whole:
        console.print(Text(f"Shown are {len(shown)} rows that do not agree; agreeing rows are not listed."))
    console.print(Text(summary_of(counts), style="bold"))
    return counts


def _name(record: dict[str, Any]) -> str:
    number = "claim" if record["row"] is None else str(record["row"])
    return f"{number} {record['id']}".strip() if record["row"] is not None else number


def _claimed(record: dict[str, Any]) -> str:
    return "\n".join(f"{name} {text}" for name, text in record["claimed"].items())


def _right(record: dict[str, Any]) -> str:
    return "\n".join(f"{name} {text}" for name, text in record["correct_printed"].items() if name in (record["off"] or ()))


def because(record: dict[str, Any]) -> str:
    """Return why a row has its verdict, on one line."""
    if record["error"] is not None:
        return str(record["error"])
    return "; ".join([*(", ".join(record["slips"]),)] * bool(record["slips"]) + record["notes"])


def claim_text(record: dict[str, Any]) -> str:
    """Return the verdict on one claim with its evidence, as text to paste."""
    lines = [f"Verdict: {record['verdict']}"]
    for name, printed in record["claimed"].items():
        right = record["correct_printed"].get(name)
        mark = "  <--" if name in record["off"] else ""
        lines.append(f"  {name:<7} printed {printed:<14} right {right if right is not None else '?'}{mark}")
    if record["correct"]:
        lines += ["", "Right numbers, on the scale of V = T(X1) + ... + T(Xn), proved to lie between"]
        lines += [f"  {name:<7} {ends['lower']}\n      and {ends['upper']}" if ends["lower"] != ends["upper"]
                  else f"  {name:<7} {ends['lower']} (exact)" for name, ends in record["correct"].items()]  # fmt: skip
    lines += ["", *consequence_lines(record["consequences"])] if record["consequences"] else []
    lines += ["", *record["because"]] if record["because"] else []
    lines += ["", *(f"Note: {note}" for note in record["notes"])] if record["notes"] else []
    return "\n".join(lines)


def consequence_lines(result: dict[str, Any]) -> list[str]:
    """Return what follows from the printed numbers, one sentence a line."""
    lines = [
        f"E[{e['of']}] at {e['at']} is {between(e['expectation'])} (target {e['target']})" for e in result["expectations"]
    ]
    kept = {True: "the level is kept", False: "the level is not kept", None: "whether the level is kept stayed open"}
    if result["size"]:
        lines.append(f"The true size over the whole null is {between(result['size'])}, at {result['size_at']}: {kept[result['level_kept']]}")
    if result["power_lost"]:
        lines.append(f"Against the best test it loses {between(result['power_lost'])} of power at {result['power_lost_at']} "
                     f"(the best test has {between(result['best_power'])} there)")  # fmt: skip
    return lines


def between(ends: dict[str, str], digits: int = 8) -> str:
    """Return an enclosure as the digits that both ends share, or as both ends."""
    low, high = ends["lower"], ends["upper"]
    if low == high:
        return low
    shared = ""
    for a, b in zip(low, high, strict=False):
        if a != b:
            break
        shared += a
    figures = sum(character.isdigit() for character in shared.lstrip("-0."))
    plain = "e" not in low and "e" not in high
    if figures >= digits and plain:
        while sum(character.isdigit() for character in shared.lstrip("-0.")) > digits:
            shared = shared[:-1]
        return shared
    return f"between {low} and {high}"
