"""Verdicts in the terminal: one line a row, in colour where the terminal has it, and a line that counts
them.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable

from verify.report.layout import number, wrapped
from verify.report.review_words import between, consequence_sentences, sentence
from verify.review.record import Record, kind_of, summary_of

COLOURS = {
    "agrees": "green",
    "last digit": "yellow",
    "differs": "bold red",
    "refuted": "bold magenta",
    "undecided": "cyan",
    "unusable": "bold yellow",
}
MOST_ROWS = 60
"""Rows shown; of a longer table those that do not agree."""


def tally(
    records: Iterable[Record], most: int = MOST_ROWS, *, only_unequal: bool = False
) -> tuple[Counter[str], list[Record], bool]:
    """Count verdicts and choose the rows to show: all of a short table, else the first that do not agree.

    Returns
    -------
    counts, shown, whole : Counter, list, bool
        ``whole`` says whether every row is shown.
    """
    counts: Counter[str] = Counter()
    first: list[Record] = []
    unequal: list[Record] = []
    for record in records:
        kind = kind_of(record)
        counts[kind] += 1
        if len(first) <= most and not only_unequal:
            first.append(record)
        if kind != "agrees" and len(unequal) < most:
            unequal.append(record)
    whole = counts.total() <= most and not only_unequal
    return counts, first if whole else unequal, whole


def print_rows(records: Iterable[Record]) -> Counter[str]:
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
        cells = (_claimed(record), _right(record), because(record))
        table.add_row(Text(_name(record)), Text(kind, style=COLOURS[kind]), *map(Text, cells))
    if shown:
        console.print(table)
    if not whole:
        console.print(Text(f"Shown are {len(shown)} rows that do not agree; agreeing rows are not listed."))
    console.print(Text(summary_of(counts), style="bold"))
    return counts


def _name(record: Record) -> str:
    number = "claim" if record["row"] is None else str(record["row"])
    return f"{number} {record['id']}".strip() if record["row"] is not None else number


def _claimed(record: Record) -> str:
    return ", ".join(f"{name} {text}" for name, text in record["claimed"].items())


def _right(record: Record) -> str:
    return ", ".join(
        f"{name} {text}" for name, text in record["correct_printed"].items() if name in (record["off"] or ())
    )


def because(record: Record) -> str:
    """Return why a row has its verdict, on one line."""
    if record["error"] is not None:
        return str(record["error"])
    quiet = record["verdict"] == "agrees"
    notes = [note for note in record["notes"] if not (quiet and note.startswith("taken literally"))]
    return "; ".join([", ".join(record["slips"])] * bool(record["slips"]) + notes)


def claim_text(record: Record) -> str:
    """Return the verdict on one claim with its evidence, as text to paste."""
    lines = [f"Verdict: {record['verdict']}"]
    for name, printed in record["claimed"].items():
        right = record["correct_printed"].get(name, "?")
        mark = "  <--" if name in record["off"] else ""
        lines.append(f"  {name:<7} printed {printed:<14} right {right}{mark}")
    if record["correct"]:
        lines += ["", "Right numbers on the scale of V = T(X1) + ... + T(Xn):", *_right_numbers(record)]
    sentences = list(record["because"])
    if record["consequences"]:
        sentences += consequence_sentences(record["consequences"], record["parameter"])
    sentences += map(sentence, record["notes"])
    return "\n".join([*lines, "", *map(wrapped, sentences)]).rstrip()


def _right_numbers(record: Record) -> list[str]:
    return [number(name, between(ends, 1000), 6) for name, ends in record["correct"].items()]
