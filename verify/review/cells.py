"""Cells and rows of a colleague's table, whatever file they came from."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from enum import Enum
from pathlib import Path
from typing import Protocol

from verify.errors import InputError


class Kind(Enum):
    """Where the text of a cell comes from."""

    EXACT = "exact"
    BINARY = "binary"
    FORMULA = "formula"
    OTHER = "other"


@dataclass(frozen=True)
class Cell:
    """One cell.

    Attributes
    ----------
    text : str
        Its text; of a binary number the shortest decimal that stands for it, or what its number format shows.
    kind : Kind
        Exact (text, whole numbers), a binary floating-point number, a formula, or something else (a date,
        an error).
    """

    text: str
    kind: Kind = Kind.EXACT

    @property
    def blank(self) -> bool:
        """Whether there is nothing in it."""
        return not self.text.strip()

    def usable(self, key: str) -> str:
        """Return the text, or refuse a formula or a date.

        Raises
        ------
        InputError
            Naming the key.
        """
        if self.kind is Kind.FORMULA:
            raise InputError(f"a formula stands in the cell: {self.text[:60]}", "put its value there as text", key=key)
        if self.kind is Kind.OTHER:
            raise InputError(
                f"no number or text stands in the cell: {self.text[:60]}", "write the number as text", key=key
            )
        return self.text.strip()


@dataclass(frozen=True)
class Row:
    """One row: its number in the file (1 for the first line) and its cells in the order of the header."""

    number: int
    cells: Sequence[Cell]

    @property
    def blank(self) -> bool:
        """Whether every cell is blank."""
        return all(cell.blank for cell in self.cells)


class Table(Protocol):
    """A table in a file: it can be read any number of times, and copied with columns added."""

    path: Path

    @property
    def header(self) -> Sequence[str]:
        """Names of the columns."""

    def rows(self) -> Iterator[Row]:
        """Yield the rows below the header that are not blank."""

    def annotate(self, out: Path, names: Sequence[str], added: Iterator[tuple[int, Sequence[str]]]) -> None:
        """Write a copy with columns added: for each row number its further cells, in order."""


def unique_header(header: Sequence[str], file: str) -> tuple[str, ...]:
    """Return the header, refused when it is empty or names a column twice."""
    names = tuple(name.strip() for name in header)
    if not any(names):
        raise InputError("the table has no header", "name the columns in the first row", file=file)
    for name in names:
        if name and names.count(name) > 1:
            raise InputError(f"two columns are named {name}", "give each its own name", file=file)
    return names


def filled(cells: Sequence[Cell], width: int) -> list[Cell]:
    """Return a row's cells, short rows filled with blanks."""
    return [*cells, *[Cell("")] * (width - len(cells))][:width]
