"""Tables of claims: other column names, means, closed windows and acceptance regions; every kind of file;
bad rows; resuming.
"""

import csv
import datetime
import json
from pathlib import Path

import openpyxl
import pytest

from verify.cli.main import main
from verify.errors import InputError
from verify.problem.casefile import read_case
from verify.review.cells import Kind
from verify.review.journal import Journal
from verify.review.mapping import map_columns
from verify.review.run import Job, fingerprint, run
from verify.review.tables import open_table

CASE = """
title = "Invented lots"
[density]
formula = "exp(-lam) * lam**x / factorial(x)"
variable = "x"
support = "integers >= 0"
parameter = "lam"
space = "lam > 0"
[problem]
null = "{null}"
alpha = "0.05"
n = 10
[table]
"""
OUTSIDE, INTERVAL = "lam <= 8 or lam >= 12", "9 <= lam <= 11"
RIGHT = ["94", "103", "0.0867", "0.5147"]
PLAIN = ["c1", "c2", "gamma1", "gamma2"]


@pytest.fixture
def place(tmp_path):
    """Return a function that writes a case file with a table mapping."""

    def write(mapping: str = "", null: str = OUTSIDE) -> Path:
        path = tmp_path / "lots.case.toml"
        path.write_text(CASE.format(null=null) + mapping)
        return path

    return write


def write_csv(path: Path, *rows, separator: str = ",") -> Path:
    with open(path, "w", encoding="utf-8", newline="") as stream:
        csv.writer(stream, delimiter=separator, lineterminator="\n").writerows(rows)
    return path


def reviewed(capsys, *words: str) -> tuple[int, list[dict]]:
    code = main(["review", *map(str, words), "--json"])
    return code, json.loads(capsys.readouterr().out)["rows"]


def verdicts(rows: list[dict]) -> list[str]:
    return ["unusable" if row["error"] else row["verdict"] for row in rows]


def test_other_names_means_and_closed_windows(place, tmp_path, capsys) -> None:
    case = place(
        'id = "batch"\nlower = "LSL"\nupper = "USL"\nalpha = "risk"\nn = "fields"\nc1 = "from"\nc2 = "to"\n'
        'gamma1 = "p low"\ngamma2 = "p high"\nreported_as = "mean"\nwindow = "closed"\n'
    )
    table = write_csv(
        tmp_path / "t.csv",
        ["from", "to", "p low", "p high", "batch", "fields", "LSL", "USL", "risk", "remark"],
        ["9.5", "10.2", "0.0867", "0.5147", "a", "10", "8", "12", "0.05", "right"],
        ["9.4", "10.2", "0.0867", "0.5147", "b", "10", "8", "12", "0.05", "one off"],
    )
    code, rows = reviewed(capsys, case, table)
    assert (code, verdicts(rows)) == (1, ["agrees", "differs"])
    assert rows[0]["correct"]["c1"] == {"lower": "94", "upper": "94"}
    assert rows[1]["slips"] == [
        "lower-off-by-one",
        "upper-off-by-one",
    ]


def test_acceptance_regions(place, tmp_path, capsys) -> None:
    """An acceptance region with probabilities of acceptance: 1 minus those of rejection (interval null, n =
    25).
    """
    case = place('n = "n"\nregion = "accept inside"\n', INTERVAL)
    table = write_csv(
        tmp_path / "t.csv",
        [*PLAIN, "n"],
        ["201", "303", "0.8870", "0.0575", "25"],
        ["201", "303", "0.1130", "0.9425", "25"],
    )
    _, rows = reviewed(capsys, case, table)
    assert verdicts(rows) == ["agrees", "differs"]
    assert rows[1]["slips"] == ["fractions-complemented"]


@pytest.mark.parametrize(("ending", "separator"), [(".csv", ","), (".csv", ";"), (".tsv", "\t")])
def test_separated_values_and_their_copy(place, tmp_path, capsys, ending, separator) -> None:
    lines = [["note", *PLAIN], ['a "quoted", thing', *RIGHT], [], ["x", "93", *RIGHT[1:]]]
    table = write_csv(tmp_path / f"t{ending}", *lines, separator=separator)
    out = tmp_path / f"out{ending}"
    code, rows = reviewed(capsys, place(), table, "-o", out)
    assert code == 1
    assert [row["row"] for row in rows] == [2, 4]
    with open(out, encoding="utf-8", newline="") as stream:
        copy = list(csv.reader(stream, delimiter=separator))
    assert [row[:5] for row in copy] == lines
    assert copy[0][5] == "sidecheck verdict"
    assert [copy[1][5], copy[3][5]] == ["agrees", "differs"]
    assert not (tmp_path / f"out{ending}.journal").exists()


def test_one_bad_row_is_reported_and_passed_over(place, tmp_path, capsys) -> None:
    table = write_csv(tmp_path / "t.csv", PLAIN, RIGHT, ["94", "ninety", "0.1", "0.2"], ["94", "", "", ""], RIGHT)
    code, rows = reviewed(capsys, place(), table)
    assert (code, verdicts(rows)) == (2, ["agrees", "unusable", "unusable", "agrees"])
    assert "c2" in rows[1]["error"]
    assert "c2 is missing" in rows[2]["error"]


def test_rows_about_other_cases(place, tmp_path, capsys) -> None:
    case = place('case = "about"\n')
    (tmp_path / "other.case.toml").write_text(CASE.format(null=INTERVAL))
    table = write_csv(
        tmp_path / "t.csv",
        ["about", *PLAIN],
        ["", *RIGHT],
        ["other", *RIGHT],
        ["missing", *RIGHT],
    )
    _, rows = reviewed(capsys, case, table)
    assert verdicts(rows) == ["agrees", "differs", "unusable"]
    assert rows[1]["null"] == "9 <= lam <= 11"
    assert "missing.case.toml" in rows[2]["error"]


def test_json_numbers_keep_their_digits(place, tmp_path, capsys) -> None:
    text = '{"lab": "x", "rows": [{"c1": 94, "c2": "103", "gamma1": 0.0870, "gamma2": 0.5147, "t": null}]}'
    table, out = tmp_path / "t.json", tmp_path / "out.json"
    table.write_text(text)
    _, rows = reviewed(capsys, place(), table, "-o", out)
    assert rows[0]["claimed"]["gamma1"] == "0.0870"
    assert rows[0]["correct_printed"]["gamma1"] == "0.0867"
    copy = out.read_text()
    assert '"gamma1": 0.0870,' in copy
    assert json.loads(copy)["rows"][0]["sidecheck verdict"] == "differs"


def test_xlsx_cells(place, tmp_path, capsys) -> None:
    """Text is exact, a number is a binary cell and marked, a formula is refused where it is used, an empty
    row is skipped.
    """
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "Cutoffs"
    sheet.append(["lot", *PLAIN, "checked", "sum"])
    sheet.append(["text", *RIGHT, datetime.date(2024, 5, 1), "=B2+C2"])
    sheet.append(["numbers", 94, 103, 0.0867, 0.5147, None, None])
    sheet.append([None] * 7)
    sheet.append(["formula", 94, "=B2+9", 0.0867, 0.5147, None, None])
    sheet.append(["format", 94, 103, 0.09, 0.5, None, None])
    sheet["D6"].number_format = sheet["E6"].number_format = "0.000"
    sheet["A2"].font = openpyxl.styles.Font(bold=True)
    book.create_sheet("Other")["A1"] = "kept"
    table, out = tmp_path / "t.xlsx", tmp_path / "out.xlsx"
    book.save(table)
    code, rows = reviewed(capsys, place('id = "lot"\n'), table, "-o", out)
    assert code == 1
    assert [row["row"] for row in rows] == [2, 3, 5, 6]
    assert verdicts(rows) == ["agrees", "agrees", "unusable", "differs"]
    assert rows[0]["binary"] == []
    assert rows[1]["binary"] == ["gamma1", "gamma2"]
    assert "formula" in rows[2]["error"]
    assert rows[3]["claimed"]["gamma2"] == "0.500"
    before, after = openpyxl.load_workbook(table), openpyxl.load_workbook(out)
    for row in before["Cutoffs"].iter_rows():
        for cell in row:
            copied = after["Cutoffs"][cell.coordinate]
            assert (copied.value, copied.data_type, copied.number_format) == (
                cell.value,
                cell.data_type,
                cell.number_format,
            )
    assert after["Cutoffs"]["A2"].font.bold
    assert after["Other"]["A1"].value == "kept"
    assert after["Cutoffs"]["H1"].value == "sidecheck verdict"
    assert after["Cutoffs"]["H3"].value == "agrees"
    assert after["Cutoffs"]["H4"].value is None


def test_cells_of_a_workbook_keep_their_kind(tmp_path) -> None:
    book = openpyxl.Workbook()
    book.active.append(["a", "b", "c", "d"])
    book.active.append([0.1, 3, True, "=A2"])
    book.save(tmp_path / "t.xlsx")
    (row,) = open_table(tmp_path / "t.xlsx").rows()
    assert [cell.kind for cell in row.cells] == [Kind.BINARY, Kind.EXACT, Kind.OTHER, Kind.FORMULA]


class StoppedError(Exception):
    """Stands for an interruption."""


def many_rows(tmp_path: Path, count: int = 450) -> Path:
    rows = [[*(RIGHT if i % 7 else ["93", *RIGHT[1:]]), str(i)] for i in range(count)]
    return write_csv(tmp_path / "many.csv", [*PLAIN, "lot"], *rows)


@pytest.mark.parametrize("workers", [1, 2])
def test_an_interrupted_run_goes_on_and_ends_the_same(place, tmp_path, workers) -> None:
    case, table = read_case(place('id = "lot"\n')), open_table(many_rows(tmp_path))
    columns = map_columns(case.table, table.header, "many.csv")
    job = Job(case, columns, tmp_path, 20, workers=workers)
    mark = fingerprint(job, table.path, "1")
    whole = Journal(tmp_path / "whole.journal", mark)
    run(job, table, whole)
    path = tmp_path / "broken.journal"

    def stop(done: int) -> None:
        if done >= 200:
            raise StoppedError

    with pytest.raises(StoppedError):
        run(job, table, Journal(path, mark), stop)
    with open(path, "a", encoding="utf-8") as stream:
        stream.write('{"row": 999, "half a li')  # killed while writing
    again = Journal(path, mark)
    assert again.done == 200
    seen: list[int] = []
    run(job, table, again, seen.append)
    assert seen[0] > 200
    assert path.read_bytes() == whole.path.read_bytes()


def test_a_journal_of_something_else_is_not_used(tmp_path) -> None:
    first = Journal(tmp_path / "j", "one")
    first.add([{"row": 2}])
    with pytest.raises(InputError, match="another run"):
        Journal(tmp_path / "j", "one")
    first.close()
    same = Journal(tmp_path / "j", "one")
    assert same.done == 1
    same.close()
    assert Journal(tmp_path / "j", "two").done == 0


def test_progress_goes_to_stderr(place, tmp_path, capsys) -> None:
    main(["review", str(place()), str(many_rows(tmp_path, 1050))])
    shown = capsys.readouterr()
    assert "1000 rows" in shown.err
    assert "1050 rows: 900 agree, 150 differ" in shown.out
    assert "1000 rows\n" not in shown.out


@pytest.mark.parametrize(
    ("words", "wrong"),
    [
        (["t.docx"], "cannot be read"),
        (["gone.csv"], "no such file"),
        (["t.csv", "-o", "t.csv"], "is an input"),
        (["t.csv", "-o", "t.xlsx"], "another ending"),
        (["t.csv", "--memo", "memo.doc"], "cannot be written"),
        (["-o", "out.csv"], "no table"),
    ],
)
def test_misuse_is_one_line(place, tmp_path, capsys, monkeypatch, words, wrong) -> None:
    monkeypatch.chdir(tmp_path)
    case = place()
    write_csv(tmp_path / "t.csv", PLAIN, RIGHT)
    assert main(["review", str(case), *words]) == 2
    error = capsys.readouterr().err
    assert wrong in error
    assert error.count("\n") == 1


def test_a_column_that_is_not_there_names_those_that_are() -> None:
    with pytest.raises(InputError, match="columns are a, b"):
        map_columns({"c1": "lower"}, ["a", "b"], "t.csv")
    with pytest.raises(InputError, match="no column of cutoffs"):
        map_columns({}, ["a", "b"], "t.csv")
