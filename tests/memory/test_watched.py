"""The memory of a run: off unless named, and what is damaged in it or refused is told in one line."""

from pathlib import Path

import pytest

from verify.memory import cache_of, solver, watched
from verify.memory.store import FILE, Store
from verify.solution.solve import solve


def test_the_memory_is_off_unless_named(monkeypatch):
    monkeypatch.delenv("SIDECHECK_CACHE", raising=False)
    assert cache_of(None) is None
    assert solver(None) is solve
    monkeypatch.setenv("SIDECHECK_CACHE", "/somewhere")
    assert cache_of(None) == "/somewhere"
    assert cache_of("/elsewhere") == "/elsewhere"


def test_a_run_without_a_memory_says_nothing(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv("SIDECHECK_CACHE", raising=False)
    told: list[str] = []
    with watched(None, told.append) as folder:
        assert folder is None
    assert told == []


def test_a_damaged_file_is_told_and_not_used(tmp_path: Path) -> None:
    (tmp_path / FILE).write_bytes(b"no database" * 1000)
    told: list[str] = []
    with watched(str(tmp_path), told.append) as folder:
        assert folder is None
    (line,) = told
    assert line.endswith("nothing is remembered in this run")


@pytest.mark.parametrize(("refused", "what"), [(1, "1 remembered result in"), (2, "2 remembered results in")])
def test_what_was_refused_in_the_run_is_counted(tmp_path: Path, refused: int, what: str) -> None:
    Store(tmp_path).refuse("of an earlier run")
    told: list[str] = []
    with watched(str(tmp_path), told.append) as folder:
        for number in range(refused):
            Store(str(folder)).refuse(str(number))
    (line,) = told
    assert line.startswith(what)
    assert line.endswith("worked out afresh")
