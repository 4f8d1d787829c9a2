"""The plugin in sessions of its own: what it collects, what it adds, and that it leaves others alone."""

from __future__ import annotations

import re
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]

COIN = """
[density]
formula = "p**x * (1 - p)**(1 - x)"
variable = "x"
support = "integers 0..1"
parameter = "p"
space = "0 < p < 1"
[problem]
null = "p <= 1/2"
alpha = "0.05"
n = 10
[expect]
c = "{c}"
"""


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "pytest.ini").write_text("[pytest]\n", encoding="utf-8")
    (tmp_path / "good.case.toml").write_text(COIN.format(c="8"), encoding="utf-8")
    (tmp_path / "off.case.toml").write_text(COIN.format(c="7"), encoding="utf-8")
    (tmp_path / "settings.toml").write_text("x = 1\n", encoding="utf-8")
    (tmp_path / "test_own.py").write_text("def test_own():\n    pass\n", encoding="utf-8")
    return tmp_path


def test_case_files_are_tests_and_a_failure_says_why(run_pytest, folder: Path) -> None:
    done = run_pytest("-v", "--strict-markers")
    assert done.returncode == 1
    assert re.search(r"good\.case\.toml::good PASSED", done.stdout)
    assert "1 failed, 2 passed" in done.stdout
    assert "off.case.toml:13: differs" in done.stdout
    assert "expect.c: expected 7, found 8" in done.stdout
    assert "Traceback" not in done.stdout


@pytest.mark.parametrize(
    "words", [("--no-sidecheck-collect",), ("-o", "sidecheck_collect=false"), ("-m", "not sidecheck")]
)
def test_collection_can_be_switched_off(run_pytest, folder: Path, words: tuple[str, ...]) -> None:
    done = run_pytest("-q", *words)
    assert done.returncode == 0
    assert "1 passed" in done.stdout


def test_digits_that_make_no_sense_are_a_usage_error(run_pytest, folder: Path) -> None:
    done = run_pytest("-q", "--sidecheck-digits", "many", "good.case.toml")
    assert done.returncode != 0
    assert "write a whole number from 15 to 10000" in done.stdout + done.stderr


def test_with_xdist(run_pytest, folder: Path) -> None:
    done = run_pytest("-q", "-n", "2")
    assert "1 failed, 2 passed" in done.stdout


def test_the_fixture_keeps_what_it_proved(run_pytest, folder: Path) -> None:
    (folder / "test_own.py").write_text(
        "def test_one(sidecheck_solution):\n"
        "    one = sidecheck_solution('good.case.toml')\n"
        "    assert one is sidecheck_solution('good.case.toml')\n"
        "    assert str(one.c) == '8'\n",
        encoding="utf-8",
    )
    assert run_pytest("-q", "test_own.py").returncode == 0


def test_nothing_of_weight_is_imported_by_the_plugin() -> None:
    heavy = ["sympy", "mpmath", "flint", "numpy", "scipy", "rich", "verify.errors", "verify.casebook"]
    code = f"import sys, verify.oracle; print([name for name in {heavy} if name in sys.modules])"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True, cwd=ROOT)
    assert done.stdout.strip() == "[]"


def test_the_entry_point() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    assert project["entry-points"]["pytest11"] == {"sidecheck": "verify.oracle"}
