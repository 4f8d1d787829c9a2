"""Writing a table of answers: CSV, or Parquet for readers who want types."""

from __future__ import annotations

import csv
import os
from collections.abc import Iterable, Iterator
from pathlib import Path
from typing import Any

from verify.answers.columns import Column, columns_of
from verify.answers.row import Record
from verify.errors import InputError, missing_extra
from verify.files import beside
from verify.parallel.batch import batches
from verify.problem.hypothesis import Form

ENDINGS = (".csv", ".parquet")
GROUP = 10_000
"""Rows of a row group."""


def require_place(path: str) -> None:
    """Refuse a name that says neither format, a folder that cannot be written to, and Parquet without its library.

    Raises
    ------
    InputError
        Before any work is done.
    """
    ending = Path(path).suffix.lower()
    if ending not in ENDINGS:
        raise InputError(f"a table cannot be written as {path}", f"name it {' or '.join(ENDINGS)}", key="--output")
    folder = Path(path).absolute().parent
    if Path(path).is_dir():
        raise InputError(f"{path} is a folder", "name a file", key="--output")
    if not os.access(folder, os.W_OK | os.X_OK):
        raise InputError(f"no table can be written in {folder}", "give a place that can be written to", key="--output")
    if ending == ".parquet":
        _arrow()


def write_table(path: Path, form: Form, records: Iterable[Record], about: dict[str, str]) -> None:
    """Write the table beside its place, then move it there: a reader never sees half of it.

    Parameters
    ----------
    path : Path
        ``.csv`` or ``.parquet``.
    form : Form
        Of every row.
    records : iterable
        The rows, in order.
    about : dict
        Written into Parquet's metadata.
    """
    columns = columns_of(form)
    rows = (row_of(number, record, form) for number, record in enumerate(records, 1))
    write = _write_parquet if path.suffix.lower() == ".parquet" else _write_csv
    try:
        with beside(path) as place:
            write(place, columns, rows, about)
    except OSError as error:
        wrong = f"the table cannot be written: {error.strerror or error}"
        raise InputError(wrong, "give a place that can be written to", key="--output", file=str(path)) from None


def row_of(number: int, record: Record, form: Form) -> tuple[Any, ...]:
    """Return the cells of a record, in the order of :func:`~verify.answers.columns.columns_of`; None where empty."""
    cells = [number, *record["limits"], *record["levels"], record["n"], record["null"]]
    cells += [record["status"], record["reason"], record.get("rejects")]
    for name in form.number_names:
        cells += record.get(name, [None, None, None])
    return tuple(cells)


def _write_csv(
    place: Path, columns: tuple[Column, ...], rows: Iterator[tuple[Any, ...]], _about: dict[str, str]
) -> None:
    with open(place, "w", encoding="utf-8", newline="") as stream:
        writer = csv.writer(stream, lineterminator="\n")
        writer.writerow([column.name for column in columns])
        writer.writerows(rows)


def _write_parquet(
    place: Path, columns: tuple[Column, ...], rows: Iterator[tuple[Any, ...]], about: dict[str, str]
) -> None:
    arrow, parquet = _arrow()
    kinds = {"text": arrow.string(), "whole": arrow.int64(), "double": arrow.float64()}
    schema = arrow.schema(
        [arrow.field(c.name, kinds[c.kind], metadata={"meaning": c.meaning}) for c in columns], metadata=about
    )
    with parquet.ParquetWriter(place, schema) as writer:
        for group in batches(rows, GROUP):
            writer.write_table(arrow.table([list(cells) for cells in zip(*group, strict=True)], schema=schema))


def _arrow() -> tuple[Any, Any]:
    try:
        import pyarrow
        import pyarrow.parquet
    except ModuleNotFoundError:
        raise missing_extra("Parquet needs pyarrow", "tables", otherwise="name it .csv", key="--output") from None
    return pyarrow, pyarrow.parquet
