"""``--cache``: the same bytes with and without; what is damaged is told in one line and worked out afresh."""

from __future__ import annotations

import sqlite3
from pathlib import Path

import pytest

from verify.memory.store import FILE

ROOT = Path(__file__).parents[2]
DEMO = ROOT / "casebook" / "demo"
CASES = ["lot-release", "diameter", "nozzle-gap"]


@pytest.fixture
def runs(sidecheck, sidecheck_here, tmp_path):
    """Return a function that runs a command with a memory, and gives its status and output, and its remarks."""
    cache = tmp_path / "cache"
    commands = {
        "casebook": ["casebook", *(f"{DEMO}/{name}.case.toml" for name in CASES), "--json"],
        "solve": ["solve", f"{DEMO}/diameter.case.toml", "--no-compare"],
        "decide": ["decide", f"{DEMO}/lot-release.case.toml", "--statistic", "97"],
        "plan": ["plan", f"{DEMO}/lot-release.case.toml", "--at", "10", "--power", "0.9"],
    }

    def run(name: str, *words: str, memory: bool = True) -> tuple[tuple[int, str], str]:
        runner = sidecheck if "2" in words else sidecheck_here
        done = runner(*commands[name], *words, *(["--cache", str(cache)] if memory else []))
        return (done.returncode, done.stdout), done.stderr

    return run


def spoil(cache: Path, change: str) -> int:
    with sqlite3.connect(cache / FILE) as connection:
        return connection.execute(f"UPDATE results SET {change}").rowcount


@pytest.mark.parametrize("name", ["casebook", "solve", "decide", "plan"])
def test_the_same_bytes_with_and_without(runs, tmp_path, name):
    without, said = runs(name, memory=False)
    assert without[0] == 0
    assert [runs(name) for _ in range(2)] == [(without, said)] * 2
    kept = spoil(tmp_path / "cache", "text = text || ' '")
    assert kept == {"casebook": 3, "plan": said.count("n = ")}.get(name, 1)
    found, told = runs(name)
    assert found == without
    line = f"sidecheck: {kept} remembered result{'s' if kept > 1 else ''} in {tmp_path / 'cache'} "
    [added] = [*(set(told.splitlines()) - set(said.splitlines()))]
    assert added.startswith(line)
    assert added.endswith("worked out afresh")
    assert runs(name) == (without, said)


def test_two_processes_share_it_and_what_they_refuse_is_told_once(runs, tmp_path):
    without, _ = runs("casebook", memory=False)
    assert [runs("casebook", "--workers", "2") for _ in range(2)] == [(without, "")] * 2
    spoil(tmp_path / "cache", "digest = 'forged'")
    found, told = runs("casebook", "--workers", "2")
    assert found == without
    assert told.count("\n") == 1
    assert "3 remembered results in" in told


def test_a_file_that_is_no_database_is_told_and_not_used(runs, tmp_path):
    without, _ = runs("solve", memory=False)
    (tmp_path / "cache").mkdir()
    broken = b"not a database, but long enough to be looked at as one" * 100
    (tmp_path / "cache" / FILE).write_bytes(broken)
    found, told = runs("solve")
    assert found == without
    assert told.count("\n") == 1
    assert "the memory is damaged: file is not a database; delete sidecheck-results.sqlite there: nothing is" in told
    assert (tmp_path / "cache" / FILE).read_bytes() == broken


def test_a_place_that_cannot_be_one_is_2(sidecheck_here, tmp_path):
    (tmp_path / "file").touch()
    done = sidecheck_here("solve", f"{DEMO}/diameter.case.toml", "--cache", str(tmp_path / "file"))
    assert done.returncode == 2
    assert "the memory cannot be used: " in done.stderr
    assert done.stderr.count("\n") == 1
