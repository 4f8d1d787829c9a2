"""The columns of a table: two for the ends of each proven number and one for its double, in the order of a row."""

import pytest

from verify.answers.columns import MEANINGS, columns_of
from verify.answers.row import Record
from verify.answers.table import row_of
from verify.problem.hypothesis import Form
from verify.problem.keys import NUMBER_NAMES


@pytest.mark.parametrize("form", Form)
def test_each_number_has_its_ends_and_its_double(form: Form) -> None:
    columns = columns_of(form)
    names = [column.name for column in columns]
    wanted = [f"{name}_{part}" for name in form.number_names for part in ("lower", "upper", "double")]
    assert names[-len(wanted) :] == wanted
    assert len(set(names)) == len(names)
    assert {column.kind for column in columns if column.name.endswith("_double")} == {"double"}
    assert all(column.meaning for column in columns)


def test_every_number_of_a_test_has_a_meaning() -> None:
    assert set(MEANINGS) == set(NUMBER_NAMES)


@pytest.mark.parametrize("form", Form)
def test_a_row_has_a_cell_for_each_column(form: Form) -> None:
    two = form in (Form.OUTSIDE, Form.INTERVAL)
    limits = ["3", "4"] if two else ["3"]
    record: Record = {"limits": limits, "levels": limits, "n": 1, "null": "", "status": "undecided", "reason": "open"}
    cells = dict(zip((column.name for column in columns_of(form)), row_of(7, record, form), strict=True))
    assert (cells["row"], cells["n"], cells["status"]) == (7, 1, "undecided")
    assert all(cells[f"{name}_lower"] is None for name in form.number_names)
