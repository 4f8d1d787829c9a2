"""A session of pytest in a process of its own, with the plugin, whether or not the package is installed."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable
from importlib.metadata import entry_points
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]


@pytest.fixture
def run_pytest(tmp_path: Path) -> Callable[..., subprocess.CompletedProcess[str]]:
    """Return a function that runs pytest in a folder (the test's own by default)."""
    installed = any(entry.value == "verify.oracle" for entry in entry_points(group="pytest11"))
    path = os.pathsep.join([str(ROOT), os.environ.get("PYTHONPATH", "")])

    def run(*words: str, folder: Path = tmp_path) -> subprocess.CompletedProcess[str]:
        plugin = () if installed else ("-p", "verify.oracle")
        command = [sys.executable, "-m", "pytest", "-p", "no:cacheprovider", *plugin, *words]
        environment = {**os.environ, "PYTHONPATH": path, "COLUMNS": "120"}
        environment.pop("PYTEST_ADDOPTS", None)
        return subprocess.run(command, capture_output=True, text=True, cwd=folder, env=environment, timeout=300)

    return run
