"""XLSX tables: text cells are exact, numeric cells are binary numbers and marked as such, formulas are
refused where they are used.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from decimal import Decimal
from functools import cached_property
from pathlib import Path
from typing import Any

from verify.errors import InputError, missing_extra
from verify.review.cells import Cell, Kind, Row, filled, unique_header

_FIXED = re.compile(r"0(?:\.(0+))?")
"""A number format that shows a fixed number of decimals."""


class XlsxTable:
    """The first sheet of a workbook (needs the extra ``tables``).

    Parameters
    ----------
    path : Path
        The file.
    """

    def __init__(self, path: Path) -> None:
        self.path = path

    def _workbook(self, **how: Any) -> Any:
        try:
            from openpyxl import load_workbook
        except ImportError:
            how_else, place = "save the table as CSV", str(self.path)
            raise missing_extra("a workbook needs openpyxl", "tables", otherwise=how_else, file=place) from None
        try:
            return load_workbook(self.path, **how)
        except Exception as error:  # openpyxl raises many kinds for a broken file
            raise InputError(
                f"the workbook cannot be read: {type(error).__name__}",
                "save it again as .xlsx",
                file=str(self.path),
            ) from None

    def _lines(self) -> Iterator[tuple[int, list[Cell]]]:
        book = self._workbook(read_only=True)
        try:
            for number, cells in enumerate(book.worksheets[0].iter_rows(), start=1):
                yield number, [_cell(cell) for cell in cells]
        finally:
            book.close()

    @cached_property
    def _top(self) -> tuple[int, tuple[str, ...]]:
        for number, cells in self._lines():
            if any(not cell.blank for cell in cells):
                return number, unique_header([cell.text for cell in cells], str(self.path))
        raise InputError("the first sheet is empty", "name the columns in its first row", file=str(self.path))

    @property
    def header(self) -> tuple[str, ...]:
        """Names of the columns: the first row that is not blank."""
        return self._top[1]

    def rows(self) -> Iterator[Row]:
        """Yield the rows below the header that are not blank."""
        for number, cells in self._lines():
            row = Row(number, filled(cells, len(self.header)))
            if number > self._top[0] and not row.blank:
                yield row

    def annotate(self, out: Path, names: Sequence[str], added: Iterator[tuple[int, Sequence[str]]]) -> None:
        """Write a copy with columns added at the right of the first sheet; every original cell stays,
        formulas too.
        """
        book = self._workbook()
        sheet = book.worksheets[0]
        first = max(sheet.max_column, len(self.header)) + 1
        for number, texts in [(self._top[0], names), *added]:
            for offset, text in enumerate(texts):
                if text:
                    cell = sheet.cell(number, first + offset)
                    cell.value, cell.data_type = text, "s"
        book.save(out)


def _cell(cell: Any) -> Cell:
    """Read one cell by its type."""
    value, kind = cell.value, cell.data_type
    if value is None:
        return Cell("")
    if kind == "f":
        return Cell(str(getattr(value, "text", value)), Kind.FORMULA)
    if kind == "n" and isinstance(value, int):
        return Cell(str(value))
    if kind == "n" and isinstance(value, float):
        return Cell(shown(value, cell.number_format), Kind.BINARY)
    return Cell(str(value), Kind.EXACT if kind in ("s", "inlineStr") else Kind.OTHER)


def shown(value: float, number_format: str) -> str:
    """Return the decimal that a numeric cell stands for: what a fixed format shows, else the shortest one.

    Examples
    --------
    >>> shown(0.3, "General"), shown(0.3, "0.000")
    ('0.3', '0.300')
    """
    fixed = _FIXED.fullmatch(number_format or "")
    if fixed is None:
        return format(Decimal(repr(value)), "f")
    return format(Decimal(repr(value)), f".{len(fixed.group(1) or '')}f")
