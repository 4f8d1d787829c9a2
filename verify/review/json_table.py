"""JSON tables: a list of objects, or an object with such a list under "rows". Numbers keep the digits they
are written with.
"""

from __future__ import annotations

import json
import re
from collections.abc import Iterator, Sequence
from functools import cached_property
from pathlib import Path
from typing import Any

from verify.errors import InputError
from verify.review.cells import Cell, Kind, Row

_MARK = "\u0000"
_MARKED = re.compile(r'"\\u0000([^"\\]*)\\u0000"')


class JsonTable:
    """A table in JSON; a decimal in it is exact, since it is read as the text that it is.

    Parameters
    ----------
    path : Path
        The file.
    """

    def __init__(self, path: Path) -> None:
        self.path = path

    @cached_property
    def _content(self) -> Any:
        try:
            return json.loads(self.path.read_text("utf-8-sig"), parse_float=_keep, parse_int=_keep)
        except (ValueError, RecursionError) as error:
            raise InputError(f"the table is not JSON: {error}", "give a list of objects", file=str(self.path)) from None

    @cached_property
    def _objects(self) -> list[dict[str, Any]]:
        content = self._content
        rows = content.get("rows") if isinstance(content, dict) else content
        if not isinstance(rows, list) or not all(isinstance(row, dict) for row in rows):
            raise InputError("the table is no list of objects", 'give [{"c1": "91", ...}, ...]', file=str(self.path))
        return rows

    @cached_property
    def header(self) -> tuple[str, ...]:
        """Every key, in the order of first appearance."""
        return tuple(dict.fromkeys(key for row in self._objects for key in row))

    def rows(self) -> Iterator[Row]:
        """Yield the rows that are not blank, numbered from 1."""
        for number, values in enumerate(self._objects, start=1):
            row = Row(number, [_cell(values.get(key)) for key in self.header])
            if not row.blank:
                yield row

    def annotate(self, out: Path, names: Sequence[str], added: Iterator[tuple[int, Sequence[str]]]) -> None:
        """Write a copy with keys added to each object; every number keeps its digits."""
        more = dict(added)
        rows = [
            {**row, **dict(zip(names, more[number], strict=True))} if number in more else row
            for number, row in enumerate(self._objects, start=1)
        ]
        content = {**self._content, "rows": rows} if isinstance(self._content, dict) else rows
        text = json.dumps(content, indent=2, ensure_ascii=True)
        out.write_text(_MARKED.sub(r"\1", text) + "\n", "utf-8")


def _keep(text: str) -> str:
    return f"{_MARK}{text}{_MARK}"


def _cell(value: Any) -> Cell:
    if value is None:
        return Cell("")
    if isinstance(value, str):
        return Cell(value.strip(_MARK))
    return Cell(json.dumps(value).replace("\\u0000", ""), Kind.OTHER)
