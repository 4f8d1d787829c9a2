"""Which column of a colleague's table holds what, told once in ``[table]`` of the case file."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from verify.errors import InputError
from verify.problem.keys import NUMBER_NAMES
from verify.review.cells import Cell, Row
from verify.review.review import STYLE_KEYS
from verify.review.style import Style

QUESTION_KEYS = ("id", "case", "null", "lower", "upper", "alpha", "n")
COLUMN_KEYS = (*QUESTION_KEYS, *NUMBER_NAMES)
WORDS: dict[str, tuple[str, ...]] = {
    "window": ("open", "closed"),
    "region": ("reject inside", "accept inside"),
    "fractions": ("of rejection", "of acceptance"),
}


@dataclass(frozen=True)
class ColumnMap:
    """Columns by what they hold, and how the numbers are meant where no column says so.

    Attributes
    ----------
    columns : dict
        Key (``null``, ``alpha``, ``n``, ``c1``, ...) -> place of its column, from 0.
    style : dict
        ``reported_as``, ``window``, ``region``, ``fractions`` where they hold for the whole table.
    """

    columns: Mapping[str, int]
    style: Mapping[str, str]

    def fields(self, row: Row) -> dict[str, Cell]:
        """Return the cells of a row that are not blank, by key."""
        found = {key: row.cells[place] for key, place in self.columns.items()}
        return {key: cell for key, cell in found.items() if not cell.blank}


def map_columns(table: Mapping[str, Any], header: Sequence[str], file: str) -> ColumnMap:
    """Return the mapping; a key that is not mapped takes the column of its own name, where there is one.

    Raises
    ------
    InputError
        For a column that the table does not have, or a table with no column of cutoffs.
    """
    columns = {key: header.index(key) for key in (*COLUMN_KEYS, *STYLE_KEYS) if key in header}
    for key in COLUMN_KEYS:
        if key in table:
            columns[key] = _place(table[key], header, f"table.{key}")
    style = {key: str(table[key]) for key in STYLE_KEYS if key in table}
    for key in style:
        columns.pop(key, None)
    if not {"c", "c1", "c2"} & columns.keys():
        raise InputError(
            "no column of cutoffs",
            f'name them in [table] of the case file, e.g. c1 = "lower cutoff"; '
            f"the columns are {', '.join(filter(None, header))[:300]}",
            key="table",
            file=file,
        )
    return ColumnMap(columns, style)


def _place(name: str | int, header: Sequence[str], key: str) -> int:
    if isinstance(name, int):
        if not 1 <= name <= len(header):
            raise InputError(
                f"there is no column {name}", f"the table has {len(header)} columns, counted from 1", key=key
            )
        return name - 1
    if name not in header:
        raise InputError(f"there is no column {name[:60]!r}", f"the columns are {', '.join(header)[:300]}", key=key)
    return header.index(name)


def style_from(words: Mapping[str, str]) -> Style:
    """Return the style that some words describe.

    Raises
    ------
    InputError
        For a word that is not known.
    """
    given = {key: text.strip() for key, text in words.items() if key in STYLE_KEYS and text.strip()}
    for key, allowed in WORDS.items():
        if key in given and given[key] not in allowed:
            raise InputError(f"{key} is {given[key][:40]!r}", f"write {' or '.join(allowed)}", key=key)
    style = Style(**given)  # type: ignore[arg-type]
    style.divisor(1)
    return style
