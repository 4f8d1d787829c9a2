"""Run the command as a user does, in a process of its own."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
Run = Callable[..., subprocess.CompletedProcess[str]]


@pytest.fixture
def sidecheck() -> Run:
    """Return a function that runs ``sidecheck`` with arguments and perhaps text on standard input."""

    def run(*words: str, stdin: str = "", timeout: float = 120) -> subprocess.CompletedProcess[str]:
        command = [sys.executable, "-m", "verify", *words]
        return subprocess.run(command, input=stdin, capture_output=True, text=True, timeout=timeout, cwd=ROOT)

    return run
