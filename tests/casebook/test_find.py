"""Which cases are found, in which order, and which are chosen."""

from __future__ import annotations

from pathlib import Path

import pytest

from verify.casebook.find import case_name, find_cases, fits
from verify.errors import InputError


def _touch(folder: Path, *names: str) -> None:
    for name in names:
        path = folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text("", encoding="utf-8")


def test_folders_are_searched_to_the_bottom_in_order(tmp_path: Path) -> None:
    _touch(tmp_path, "b/z.case.toml", "b/a.case.toml", "a/deep/er.case.toml", "c.case.toml")
    _touch(tmp_path, "b/no.toml", ".venv/x.case.toml")
    found = [Path(path).relative_to(tmp_path).as_posix() for path in find_cases([tmp_path])]
    assert found == ["c.case.toml", "a/deep/er.case.toml", "b/a.case.toml", "b/z.case.toml"]


def test_a_case_that_is_named_twice_is_run_once(tmp_path: Path) -> None:
    _touch(tmp_path, "a/x.case.toml")
    (tmp_path / "link.case.toml").symlink_to(tmp_path / "a/x.case.toml")
    assert len(find_cases([tmp_path / "a", tmp_path, tmp_path / "a/x.case.toml"])) == 1


def test_a_file_may_be_named_itself(tmp_path: Path) -> None:
    _touch(tmp_path, "odd name")
    assert find_cases([tmp_path / "odd name"]) == (str(tmp_path / "odd name"),)


@pytest.mark.parametrize("places", [["no-such-folder"], []])
def test_nothing_is_no_success(places: list[str]) -> None:
    with pytest.raises(InputError):
        find_cases(places)


def test_an_empty_folder_is_no_success(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="no case file"):
        find_cases([tmp_path])


def test_a_pattern_that_fits_nothing_is_no_success(tmp_path: Path) -> None:
    _touch(tmp_path, "a/x.case.toml")
    with pytest.raises(InputError, match="no case is named y"):
        find_cases([tmp_path], ["y"])
    assert len(find_cases([tmp_path], ["y", "a/*"])) == 1


@pytest.mark.parametrize(
    ("pattern", "expected"),
    [("lot-*", True), ("demo/*", True), ("casebook/demo/lot-?elease", True), ("lot-release.case.toml", True),
     ("demo", False), ("Lot-*", False), ("laws/*", False), ("*", True)],
)  # fmt: skip
def test_patterns(pattern: str, expected: bool) -> None:
    assert fits("casebook/demo/lot-release.case.toml", pattern) is expected


def test_names() -> None:
    assert case_name("a.case.toml") == "a"
    assert case_name("x/y/a.case.toml") == "y/a"
