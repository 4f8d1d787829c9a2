"""Which reader a colleague's table needs, by the ending of its file."""

from __future__ import annotations

from pathlib import Path

from verify.errors import InputError
from verify.review.cells import Table
from verify.review.json_table import JsonTable
from verify.review.text_table import TextTable
from verify.review.xlsx_table import XlsxTable

KINDS: dict[str, type[JsonTable] | type[TextTable] | type[XlsxTable]] = {
    ".csv": TextTable,
    ".tsv": TextTable,
    ".txt": TextTable,
    ".xlsx": XlsxTable,
    ".json": JsonTable,
}
"""Ending of a file -> reader. To add one: a class with what :class:`verify.review.cells.Table` asks for."""


def open_table(path: str | Path) -> Table:
    """Return the table in a file, by its ending: .csv, .tsv, .xlsx or .json.

    Raises
    ------
    InputError
        For another ending, or a file that is not there.
    """
    place = Path(path)
    kind = KINDS.get(place.suffix.lower())
    if kind is None:
        raise InputError(
            f"a table of kind {place.suffix or 'none'} cannot be read",
            "give .csv, .tsv, .xlsx or .json",
            file=str(path),
        )
    if not place.is_file():
        raise InputError("the table cannot be read: no such file", "give the path of a table", file=str(path))
    table: Table = kind(place)
    return table
