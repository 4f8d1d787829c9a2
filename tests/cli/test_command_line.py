"""The command line itself: help, bad options, one line for each complaint, exit statuses."""

import json
import os
import subprocess
import sys

import pytest

from verify.cli import main
from verify.cli.registry import COMMANDS


def test_help_lists_every_command(sidecheck) -> None:
    done = sidecheck("--help")
    assert done.returncode == 0
    assert all(name in done.stdout for name in COMMANDS)
    assert done.stderr == ""


@pytest.mark.parametrize("name", COMMANDS)
def test_each_command_has_help_with_an_example(sidecheck_here, name) -> None:
    done = sidecheck_here(name, "--help")
    assert done.returncode == 0
    assert f"example:\n  sidecheck {name}" in done.stdout
    assert "--json" in done.stdout


@pytest.mark.parametrize(
    "words",
    [
        [],
        ["bogus"],
        ["solve"],
        ["solve", "a", "b"],
        ["solve", "a", "--bogus"],
        ["solve", "a", "--digits", "14"],
        ["solve", "a", "--digits", "10001"],
        ["solve", "a", "--digits", "50.5"],
        ["solve", "a", "--digits", "٥٠"],
        ["solve", "a", "--budget", "-1"],
        ["solve", "a", "--budget", "nan"],
        ["solve", "no-such-file.case.toml"],
        ["solve", "casebook"],
        ["solve", "with\nnewline"],
        ["derive", ""],
    ],
)
def test_unusable_command_line_is_one_line_and_status_2(sidecheck_here, words) -> None:
    done = sidecheck_here(*words)
    assert done.returncode == 2
    assert done.stdout == ""
    assert len(done.stderr.splitlines()) == 1
    assert "Traceback" not in done.stderr


def test_json_error_is_one_object(sidecheck) -> None:
    done = sidecheck("solve", "no-such-file.case.toml", "--json")
    assert done.returncode == 2
    error = json.loads(done.stdout)["error"]
    assert error["status"] == 2
    assert "no-such-file" in error["message"]


def test_version(sidecheck) -> None:
    assert sidecheck("--version").stdout.startswith("sidecheck ")


def test_a_mistake_of_ours_is_one_line_and_status_70(monkeypatch, capsys) -> None:
    def broken(path):
        raise ZeroDivisionError("two\nlines")

    monkeypatch.setattr("verify.problem.casefile.read_case", broken)
    assert main(["derive", "x"]) == 70
    lines = capsys.readouterr().err.splitlines()
    assert len(lines) == 1
    assert "internal error (ZeroDivisionError" in lines[0]
    assert "please report" in lines[0]


def test_interrupt_is_one_line_and_status_130(monkeypatch, capsys) -> None:
    def interrupted(path):
        raise KeyboardInterrupt

    monkeypatch.setattr("verify.problem.casefile.read_case", interrupted)
    assert main(["derive", "x"]) == 130
    assert capsys.readouterr().err == "sidecheck: interrupted\n"


@pytest.mark.skipif(os.name != "posix", reason="signals and pipes as POSIX has them")
def test_a_closed_pipe_is_no_traceback() -> None:
    reader, writer = os.pipe()
    os.close(reader)
    command = [sys.executable, "-m", "verify", "solve", "--help"]
    done = subprocess.run(command, stdout=writer, stderr=subprocess.PIPE, text=True, timeout=60)
    os.close(writer)
    assert done.stderr == ""


@pytest.mark.skipif(not os.path.exists("/dev/full"), reason="needs a device that is always full")
@pytest.mark.parametrize(
    "words",
    [
        ["--help"],
        ["derive", "casebook/demo/lot-release.case.toml"],
        ["solve", "casebook/demo/lot-release.case.toml", "--no-compare", "--json"],
    ],
)
def test_standard_output_that_cannot_be_written_is_named_on_one_line(words) -> None:
    with open("/dev/full", "w") as full:
        done = subprocess.run(
            [sys.executable, "-m", "verify", *words], stdout=full, stderr=subprocess.PIPE, text=True, check=False
        )
    assert done.returncode == 2
    assert done.stderr == "sidecheck: standard output cannot be written: No space left on device\n"


def test_closed_standard_output_is_one_line() -> None:
    command = f"{sys.executable} -m verify --version >&-"
    done = subprocess.run(["sh", "-c", command], stderr=subprocess.PIPE, text=True, check=False)
    assert (done.returncode, len(done.stderr.splitlines())) == (2, 1)
    assert "standard output is closed" in done.stderr


@pytest.mark.parametrize("words", [["solve"], ["certify", "--no-pdf", "-o", "never-made"]])
def test_levels_that_no_test_has_name_the_file_and_the_range_in_plain_decimals(sidecheck_here, words) -> None:
    text = """
[density]
formula = "exp(-lam)*lam**x/factorial(x)"
variable = "x"
support = "integers >= 0"
parameter = "lam"
space = "lam > 0"

[problem]
null = "lam <= 4 or lam >= 5"
alpha = ["0.05", "0.9"]
n = 1
"""
    done = sidecheck_here(*words, text=text)
    assert done.returncode == 2
    place, _, rest = done.stderr.partition(": problem.alpha: no test has these two levels; ")
    assert place.endswith("here.case.toml")
    low, high = map(float, rest.rpartition("between ")[2].split(" and "))
    assert 0 < low < 0.05 < high < 0.9
