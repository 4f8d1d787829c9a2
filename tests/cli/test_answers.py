"""Whole runs of ``sidecheck answers``: the table, its resumption, and who does the work."""

import csv
import signal
import subprocess
import sys
import time
from fractions import Fraction
from pathlib import Path

import pytest
from pyarrow import parquet

from verify.cli.main import main

GRID = """
[density]
formula = "{formula}"
variable = "x"
support = "{support}"
parameter = "t"
space = "t > 0"
[problem]
null = "t <= 8 or t >= 12"
alpha = "0.05"
n = 10
[grid]
lower = ["7", "8"]
alpha = ["0.05", "1/3", ["0.01", "0.02"]]
n = "{n}"
"""
POISSON = {"formula": "exp(-t)*t**x/factorial(x)", "support": "integers >= 0", "n": "1..12"}
GAP = {"formula": "exp(-x/t)/t", "support": "reals > 0", "n": "1..4"}


@pytest.fixture
def grid(tmp_path):
    def write(**changes) -> str:
        place = tmp_path / "some.grid.toml"
        place.write_text(GRID.format(**POISSON | changes))
        return str(place)

    return write


def rows_of(path: Path) -> list[dict[str, str]]:
    with open(path, newline="") as stream:
        return list(csv.DictReader(stream))


def test_the_rows_are_the_proved_cutoffs(grid, tmp_path, capsys):
    out = tmp_path / "a.csv"
    assert main(["answers", grid(), "-o", str(out)]) == 0
    assert capsys.readouterr().out == f"{out}: 72 rows, 72 proved\n"
    rows = rows_of(out)
    (row,) = [r for r in rows if (r["lower"], r["alpha1"], r["n"]) == ("8", "0.05", "10")]
    assert (row["c1_lower"], row["c1_upper"], row["c2_lower"], row["rejects"]) == ("94", "94", "103", "inside")
    for name in ("gamma1", "gamma2"):
        low, high, near = (row[f"{name}_{end}"] for end in ("lower", "upper", "double"))
        assert 0 < Fraction(high) - Fraction(low) < Fraction(1, 10**19)
        assert abs(Fraction(float(near)) - Fraction(low)) < Fraction(1, 10**16)
    assert {r["alpha2"] for r in rows if r["alpha1"] == "0.01"} == {"0.02"}
    assert not [*tmp_path.glob("*.journal"), *tmp_path.glob("*.partial")]


def test_parquet_holds_the_same_table(grid, tmp_path):
    assert main(["answers", grid(**GAP), "-o", str(tmp_path / "a.csv")]) == 0
    assert main(["answers", grid(**GAP), "-o", str(tmp_path / "a.parquet")]) == 0
    table = parquet.read_table(tmp_path / "a.parquet")
    rows = [{k: "" if v is None else str(v) for k, v in row.items()} for row in table.to_pylist()]
    assert rows == rows_of(tmp_path / "a.csv")
    assert table.schema.metadata[b"digits"] == b"20"
    assert b"for convenience only" in table.schema.field("c1_double").metadata[b"meaning"]
    assert table.column("gamma1_lower").null_count == table.num_rows == 24


@pytest.mark.parametrize("shape", [POISSON, GAP], ids=["lattice", "continuous"])
def test_processes_and_a_memory_change_no_byte(grid, tmp_path, shape):
    place, cache = grid(**shape), str(tmp_path / "cache")
    runs = [[], ["--workers", "2", "--cache", cache], ["--cache", cache]]
    for i, extra in enumerate(runs):
        assert main(["answers", place, "-o", str(tmp_path / f"{i}.csv"), *extra]) == 0
    first, *others = ((tmp_path / f"{i}.csv").read_bytes() for i in range(3))
    assert others == [first, first]


def test_a_killed_run_goes_on_and_ends_with_the_same_bytes(grid, tmp_path):
    place, out, whole = grid(n="1..200"), tmp_path / "a.csv", tmp_path / "whole.csv"
    command = [sys.executable, "-m", "verify", "answers", place, "-o"]
    running = subprocess.Popen([*command, str(out)])
    journal = Path(f"{out}.journal")
    while not (journal.exists() and journal.stat().st_size > 20_000):
        assert running.poll() is None
        time.sleep(0.01)
    running.send_signal(signal.SIGKILL)
    running.wait()
    assert not out.exists()
    again = subprocess.run([*command, str(out)], capture_output=True, text=True, check=True)
    assert "rows were done before; going on after them" in again.stderr
    subprocess.run([*command, str(whole)], capture_output=True, check=True)
    assert out.read_bytes() == whole.read_bytes()


def test_a_cluster_that_loses_a_worker_changes_no_byte(grid, tmp_path, cluster):
    place, out = grid(n="1..60"), tmp_path / "cluster.csv"
    command = [sys.executable, "-m", "verify", "answers", place, "-o", str(out)]
    running = subprocess.Popen([*command, "--scheduler", cluster.start_workers(2).address])
    cluster.kill_one_at_work()
    assert running.wait() == 0
    assert main(["answers", place, "-o", str(tmp_path / "alone.csv")]) == 0
    assert out.read_bytes() == (tmp_path / "alone.csv").read_bytes()


def test_designs_that_no_test_fits_are_rows_with_a_reason(grid, tmp_path, capsys):
    text = Path(grid(n="1..2")).read_text().replace('["0.01", "0.02"]', '["0.0001", "0.9"]')
    (tmp_path / "some.grid.toml").write_text(text)
    assert main(["answers", str(tmp_path / "some.grid.toml"), "-o", str(tmp_path / "a.csv")]) == 2
    rows = [row for row in rows_of(tmp_path / "a.csv") if row["status"] != "proved"]
    assert {(row["status"], row["alpha2"], row["c1_lower"]) for row in rows} == {("unusable", "0.9", "")}
    assert all("no test has these two levels" in row["reason"] for row in rows)
    assert "8 proved, 4 unusable" in capsys.readouterr().out


@pytest.mark.parametrize(("upper", "said"), [("8", "1 pair of limits is"), ("7", "2 pairs of limits are")])
def test_limits_that_do_not_rise_are_counted_in_words(grid, tmp_path, capsys, upper, said):
    text = Path(grid(n="1..2")).read_text() + f'upper = ["{upper}", "9"]'
    (tmp_path / "some.grid.toml").write_text(text)
    assert main(["answers", str(tmp_path / "some.grid.toml"), "-o", str(tmp_path / "a.csv")]) == 0
    assert f"{said} not ascending and left out" in capsys.readouterr().err


def test_a_refuted_density_gives_no_table(grid, tmp_path, capsys):
    place = grid(formula="t**x/factorial(x)")
    assert main(["answers", place, "-o", str(tmp_path / "a.csv")]) == 1
    assert "no table: normalisation is refuted" in capsys.readouterr().err
    assert not (tmp_path / "a.csv").exists()


@pytest.mark.parametrize(
    ("extra", "message"),
    [
        (["-o", "a.txt"], "--output: a table cannot be written as a.txt; name it .csv or .parquet"),
        (["-o", "."], "--output: a table cannot be written as .; name it"),
        (["-o", "/nowhere/a.csv"], "--output: no table can be written in /nowhere; give"),
        (["-o", "a.csv", "--workers", "0"], "argument --workers: '0' is not a number of processes from 1 to 256"),
    ],
)
def test_what_cannot_be_used_is_said_on_one_line(grid, extra, message, capsys, monkeypatch, tmp_path):
    monkeypatch.chdir(tmp_path)
    assert main(["answers", grid(), *extra]) == 2
    error = capsys.readouterr().err
    assert message in error
    assert error.count("\n") == 1


def test_a_folder_in_the_place_of_the_table_is_said_before_the_work(grid, tmp_path, capsys):
    (tmp_path / "a.csv").mkdir()
    assert main(["answers", grid(), "-o", str(tmp_path / "a.csv")]) == 2
    assert "a.csv is a folder; name a file" in capsys.readouterr().err
    assert not (tmp_path / "a.csv.journal").exists()


def test_a_full_disk_is_said_and_the_run_goes_on_when_there_is_room(grid, tmp_path):
    resource = pytest.importorskip("resource")
    place, whole, out = grid(), tmp_path / "whole.csv", tmp_path / "a.csv"
    assert main(["answers", place, "-o", str(whole)]) == 0
    command = [sys.executable, "-B", "-m", "verify", "answers", place, "-o", str(out)]
    full = subprocess.run(
        command,
        capture_output=True,
        text=True,
        check=False,
        preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_FSIZE, (8192, 8192)),
    )
    assert full.returncode == 2
    assert full.stderr.count("\n") == 1
    assert "a.csv.journal: the rows that are done cannot be kept: File too large; make room" in full.stderr
    assert main(["answers", place, "-o", str(out)]) == 0
    assert out.read_bytes() == whole.read_bytes()


def test_a_journal_that_cannot_be_written_is_said_on_one_line(grid, tmp_path, capsys):
    (tmp_path / "a.csv.journal").mkdir()
    assert main(["answers", grid(), "-o", str(tmp_path / "a.csv")]) == 2
    assert "a.csv.journal: the rows that are done cannot be kept: Is a directory" in capsys.readouterr().err
