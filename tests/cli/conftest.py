"""Run the command as a user does: in a process of its own, or, where that proves no more, in this one."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

from verify.cli import main

ROOT = Path(__file__).parents[2]
Run = Callable[..., subprocess.CompletedProcess[str]]


@pytest.fixture
def sidecheck() -> Run:
    """Return a function that runs ``sidecheck`` with arguments and perhaps text on standard input."""

    def run(*words: str, stdin: str = "", timeout: float = 120) -> subprocess.CompletedProcess[str]:
        command = [sys.executable, "-m", "verify", *words]
        return subprocess.run(command, input=stdin, capture_output=True, text=True, timeout=timeout, cwd=ROOT)

    return run


@pytest.fixture
def sidecheck_here(capsys, tmp_path) -> Run:
    """Return a function that runs a command on the text of a case file in this process."""

    def run(*words: str, text: str | None = None) -> subprocess.CompletedProcess[str]:
        if text is not None:
            case = tmp_path / "here.case.toml"
            case.write_text(text, encoding="utf-8")
            words = (*words, str(case))
        status = main(words)
        out, err = capsys.readouterr()
        return subprocess.CompletedProcess(words, status, out, err)

    return run
