"""The demonstration table: every slip is in it, each is found and named, and none where there is none.

Its numbers come from a double-precision oracle (``slip_oracle.py``), which shares no code with the package.
"""

import csv
import json
from pathlib import Path

import jsonschema
import pytest
from demo_rows import HEADER, TABLE, all_rows, odd_rows, right_rows, slip_rows

ROOT = Path(__file__).parents[2]
SCHEMA = json.loads((ROOT / "verify" / "report" / "schemas" / "review.schema.json").read_text())
SLIPS = set(SCHEMA["$defs"]["slip"]["enum"])


@pytest.fixture(scope="module")
def records() -> dict[str, dict]:
    from verify.problem.casefile import read_case
    from verify.review.mapping import map_columns
    from verify.review.run import Job, task_of
    from verify.review.tables import open_table

    case, table = read_case(ROOT / "casebook/demo/claims.case.toml"), open_table(TABLE)
    columns = map_columns(case.table, table.header, str(TABLE))
    reviewer = Job(case, columns, TABLE.parent, 20).reviewer()
    found = [reviewer.row(*task_of(columns, row), columns.style) for row in table.rows()]
    return {record["id"]: record for record in found}


def test_the_table_is_the_one_that_the_oracle_writes() -> None:
    with open(TABLE, encoding="utf-8", newline="") as stream:
        assert list(csv.reader(stream)) == [HEADER, *all_rows()]


def test_there_are_forty_rows_and_every_slip(records) -> None:
    assert len(records) >= 40
    assert {slip for _, slip in slip_rows()} == SLIPS


def test_records_fit_the_schema(records) -> None:
    jsonschema.Draft202012Validator.check_schema(SCHEMA)
    jsonschema.Draft202012Validator(SCHEMA).validate({"rows": list(records.values())})


@pytest.mark.parametrize("name", [cells[0] for cells in right_rows()])
def test_right_rows_agree_and_show_no_slip(records, name) -> None:
    assert (records[name]["verdict"], records[name]["slips"], records[name]["error"]) == ("agrees", [], None)


@pytest.mark.parametrize(("name", "slip"), [(cells[0], slip) for cells, slip in slip_rows()])
def test_the_slip_is_found_and_named(records, name, slip) -> None:
    record = records[name]
    assert record["verdict"] == ("last digit" if slip == "truncated" else "differs")
    assert slip in record["slips"]
    assert len(record["because"]) == len(record["slips"]) <= 3


@pytest.mark.parametrize("name", [cells[0] for cells in odd_rows()])
def test_no_slip_is_named_where_none_fits(records, name) -> None:
    record = records[name]
    assert (record["verdict"], record["slips"]) == ("differs", [])
    assert any("No slip" in note for note in record["notes"])
