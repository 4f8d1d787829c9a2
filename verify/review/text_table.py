"""CSV and TSV tables."""

from __future__ import annotations

import csv
from collections.abc import Iterator, Sequence
from functools import cached_property
from pathlib import Path
from typing import IO

from verify.errors import InputError
from verify.review.cells import Cell, Row, filled, unique_header

LONGEST_FIELD = 1_000_000


class TextTable:
    """A table of separated values in UTF-8; the separator of a .csv is the comma or the semicolon,
    whichever its header has more of.

    Parameters
    ----------
    path : Path
        The file.
    """

    def __init__(self, path: Path) -> None:
        self.path = path

    @cached_property
    def separator(self) -> str:
        """What stands between two fields."""
        if self.path.suffix.lower() in (".tsv", ".txt"):
            return "\t"
        with self._open() as stream:
            first = stream.readline()
        return ";" if first.count(";") > first.count(",") else ","

    def _open(self) -> IO[str]:
        return open(self.path, encoding="utf-8-sig", newline="")

    def _lines(self) -> Iterator[tuple[int, list[str]]]:
        csv.field_size_limit(LONGEST_FIELD)
        with self._open() as stream:
            try:
                yield from enumerate(csv.reader(stream, delimiter=self.separator), start=1)
            except UnicodeDecodeError:
                raise InputError("the table is not UTF-8", "save it as UTF-8", file=str(self.path)) from None
            except csv.Error as error:
                raise InputError(
                    f"the table cannot be read: {error}", "save it again as CSV", file=str(self.path)
                ) from None

    @cached_property
    def header(self) -> tuple[str, ...]:
        """Names of the columns: the first line that is not blank."""
        for _, fields in self._lines():
            if any(field.strip() for field in fields):
                return unique_header(fields, str(self.path))
        raise InputError("the table is empty", "name the columns in the first row", file=str(self.path))

    def rows(self) -> Iterator[Row]:
        """Yield the rows below the header that are not blank."""
        for number, fields, is_header in self._marked():
            row = Row(number, filled([Cell(field) for field in fields], len(self.header)))
            if not is_header and not row.blank:
                yield row

    def _marked(self) -> Iterator[tuple[int, list[str], bool]]:
        seen = False
        for number, fields in self._lines():
            is_header = not seen and any(field.strip() for field in fields)
            seen = seen or is_header
            if seen:
                yield number, fields, is_header

    def annotate(self, out: Path, names: Sequence[str], added: Iterator[tuple[int, Sequence[str]]]) -> None:
        """Write a copy with columns added at the right; the original fields are written as they were read."""
        width, waiting = len(self.header), next(added, None)
        with open(out, "w", encoding="utf-8", newline="") as stream:
            writer = csv.writer(stream, delimiter=self.separator, lineterminator="\n")
            for number, fields, is_header in self._marked():
                more: Sequence[str] = names if is_header else [""] * len(names)
                if waiting is not None and waiting[0] == number:
                    more, waiting = waiting[1], next(added, None)
                padded = [*fields, *[""] * (width - len(fields))]
                writer.writerow([*padded, *more] if any(field.strip() for field in fields) else fields)
