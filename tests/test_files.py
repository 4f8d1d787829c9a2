"""Files that are whole or not there, as open to others as the user's mask says."""

import os
from collections.abc import Callable
from pathlib import Path

import pytest

from verify.files import beside, write_atomically


def half_of(path: Path, spoil: Callable[[Path], object]) -> None:
    with beside(path) as place:
        spoil(place)
        raise KeyError("a row")


def test_a_file_that_fails_half_way_leaves_the_old_one_and_nothing_beside_it(tmp_path: Path) -> None:
    path = tmp_path / "table.csv"
    path.write_text("old")
    with pytest.raises(KeyError, match="a row"):
        half_of(path, lambda place: place.write_text("half"))
    assert [(found.name, found.read_text()) for found in tmp_path.iterdir()] == [("table.csv", "old")]


def test_a_writer_that_removes_its_own_file_is_told_by_its_own_mistake(tmp_path: Path) -> None:
    with pytest.raises(KeyError, match="a row"):
        half_of(tmp_path / "table.csv", Path.unlink)


@pytest.mark.parametrize(("mask", "mode"), [(0o022, 0o644), (0o077, 0o600), (0o002, 0o664)])
def test_the_mask_of_the_user_holds(tmp_path: Path, mask: int, mode: int) -> None:
    before = os.umask(mask)
    try:
        write_atomically(tmp_path / "lot", b"bytes")
    finally:
        os.umask(before)
    assert (tmp_path / "lot").stat().st_mode & 0o777 == mode
    assert (tmp_path / "lot").read_bytes() == b"bytes"


def test_what_is_written_is_on_the_disk_before_it_takes_its_place(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    order: list[str] = []
    sync, replace = os.fsync, os.replace
    monkeypatch.setattr(os, "fsync", lambda handle: (order.append("sync"), sync(handle)))
    monkeypatch.setattr(os, "replace", lambda *paths: (order.append("replace"), replace(*paths)))
    write_atomically(tmp_path / "lot", b"bytes")
    assert order == ["sync", "replace"]
