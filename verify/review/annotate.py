"""The columns that are added to a colleague's own table."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from fractions import Fraction
from pathlib import Path

from verify.arithmetic.enclosure import Enclosure
from verify.files import beside
from verify.review.cells import Table
from verify.review.record import Record, kind_of

PREFIX = "sidecheck"
LEVEL = {True: "yes", False: "no", None: ""}


def added_names(numbers: Sequence[str]) -> list[str]:
    """Return the names of the added columns, for the numbers that occur in the table."""
    names = [
        "verdict",
        *(f"right {name}" for name in numbers),
        "level kept",
        "size",
        "size at",
        "slips",
        "note",
    ]
    return [f"{PREFIX} {name}" for name in names]


def added_cells(record: Record, numbers: Sequence[str]) -> list[str]:
    """Return the added cells of one row, in the order of :func:`added_names`."""
    result = record["consequences"] or {}
    size = result.get("size")
    note = record["error"] or " ".join(
        f"{text[:1].upper()}{text[1:]}{'' if text.endswith('.') else '.'}" for text in record["notes"]
    )
    return [
        kind_of(record),
        *(record["correct_printed"].get(name, "") for name in numbers),
        LEVEL[result.get("level_kept")],
        _short(size["lower"], size["upper"]) if size else "",
        result.get("size_at") or "",
        " ".join(record["slips"]),
        note,
    ]


def _short(lower: str, upper: str, digits: int = 8) -> str:
    """A number with no digit that its enclosure does not guarantee; both ends where it is wide."""
    return Enclosure(Fraction(lower), Fraction(upper)).text(digits)


def write_annotated(table: Table, out: Path, records: Iterable[Record], numbers: Sequence[str]) -> None:
    """Write the colleague's table with the verdicts beside its rows; its own columns and their order stay
    as they are.
    """
    rows: Iterator[tuple[int, Sequence[str]]] = ((record["row"], added_cells(record, numbers)) for record in records)
    with beside(out) as place:
        table.annotate(place, added_names(numbers), rows)
