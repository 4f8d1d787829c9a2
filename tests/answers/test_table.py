"""A table is written whole or not at all."""

from collections.abc import Iterator
from pathlib import Path

import pytest

from verify.answers.row import Record
from verify.answers.table import write_table
from verify.problem.hypothesis import Form

ROW: Record = {"limits": ["3"], "levels": ["0.05"], "n": 1, "null": "t <= 3", "status": "undecided", "reason": "open"}


@pytest.mark.parametrize("name", ["table.csv", "table.parquet"])
def test_a_row_that_fails_leaves_nothing_behind(tmp_path: Path, name: str) -> None:
    def rows() -> Iterator[Record]:
        yield ROW
        raise ArithmeticError("a row failed")

    with pytest.raises(ArithmeticError, match="a row failed"):
        write_table(tmp_path / name, Form.ONE_SIDED, rows(), {})
    assert [*tmp_path.iterdir()] == []


@pytest.mark.parametrize("name", ["table.csv", "table.parquet"])
def test_a_whole_table_takes_its_place(tmp_path: Path, name: str) -> None:
    write_table(tmp_path / name, Form.ONE_SIDED, [ROW, ROW], {"about": "beads"})
    assert [path.name for path in tmp_path.iterdir()] == [name]
