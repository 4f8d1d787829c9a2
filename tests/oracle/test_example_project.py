"""A developer's project with three planted mistakes: the tests name each, and pass when they are mended."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest

PROJECT = Path(__file__).parents[1] / "casebook" / "example_project"
MENDS = [
    ('{"c1": c1 + 1, "c2": c2 - 1, ', '{"c1": c1, "c2": c2, '),
    ("normal_cdf(x, n * scale, n * scale**2)", "gamma_cdf(x, n, scale)"),
    ("trials = beads\n", "trials = n * beads\n"),
]
"""Each mistake, and what it should have been."""


@pytest.fixture
def project(tmp_path: Path) -> Path:
    return Path(shutil.copytree(PROJECT, tmp_path / "project"))


def _mend(project: Path, *mends: tuple[str, str]) -> None:
    solver = project / "cutoffs.py"
    text = solver.read_text(encoding="utf-8")
    for wrong, right in mends:
        assert text.count(wrong) == 1
        text = text.replace(wrong, right)
    solver.write_text(text, encoding="utf-8")


def test_three_mistakes_are_named(run_pytest, project: Path) -> None:
    done = run_pytest("-q", folder=project)
    assert done.returncode == 1
    assert "3 failed, 3 passed" in done.stdout
    for slip in ("closed-for-open", "normal-approximation", "n-left-out"):
        assert f"({slip})" in done.stdout
    for line in ("c1      95 ", "+1 support point", "-148 support points", "1 significant digits, 8 asked for"):
        assert line in done.stdout
    assert "the level is not kept" in done.stdout


def test_mended_they_pass(run_pytest, project: Path) -> None:
    _mend(project, *MENDS)
    done = run_pytest("-q", folder=project)
    assert done.returncode == 0, done.stdout
    assert "6 passed" in done.stdout


def test_two_mended_one_is_left(run_pytest, project: Path) -> None:
    _mend(project, *MENDS[:2])
    done = run_pytest("-q", "test_cutoffs.py", folder=project)
    assert "1 failed, 2 passed" in done.stdout
    assert "(n-left-out)" in done.stdout
