"""A long table of claims: whoever reviews it, and whatever dies on the way, the copy is the same to the byte."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest
from dask_cluster import wait_until

ROOT = Path(__file__).parents[2]
CASE = ROOT / "casebook" / "demo" / "lot-release.case.toml"
ROWS = 600
Start = Callable[..., tuple[Path, subprocess.Popen[str]]]


def _heed_the_keyboard() -> None:
    """A shell that starts tests in the background makes them deaf to Ctrl-C, and their children too."""
    signal.signal(signal.SIGINT, signal.default_int_handler)


@pytest.fixture
def table(tmp_path: Path) -> Path:
    """Invented claims; one in ten is wrong."""
    lines = [f"10,{94 - (i % 10 == 0)},103,0.0867,0.5147" for i in range(ROWS)]
    place = tmp_path / "claims.csv"
    place.write_text("n,c1,c2,gamma1,gamma2\n" + "\n".join(lines) + "\n")
    return place


@pytest.fixture
def review(table: Path) -> Start:
    """Return a function that starts a review and names its copy."""

    def start(name: str, *words: str) -> tuple[Path, subprocess.Popen[str]]:
        out = table.with_name(f"{name}.csv")
        command = [sys.executable, "-m", "verify", "review", str(CASE), str(table), "-o", str(out), *words]
        pipes = {"stdout": subprocess.PIPE, "stderr": subprocess.PIPE}
        return out, subprocess.Popen(command, cwd=ROOT, text=True, preexec_fn=_heed_the_keyboard, **pipes)

    return start


@pytest.fixture
def alone(review: Start) -> tuple[bytes, str]:
    """The copy and the text of a review in one process."""
    out, running = review("alone")
    text, _ = running.communicate()
    assert running.returncode == 1
    return out.read_bytes(), text


def wait_for_rows(out: Path) -> None:
    journal = Path(f"{out}.journal")
    wait_until(lambda: journal.exists() and journal.stat().st_size > 20_000, "the first rows")


@pytest.mark.skipif(not Path("/proc/self/task").exists(), reason="child processes are looked up in /proc")
def test_a_killed_worker(review, alone) -> None:
    out, running = review("killed", "--workers", "2")
    wait_for_rows(out)
    tasks = Path(f"/proc/{running.pid}/task").glob("*/children")
    children = [pid for task in tasks for pid in task.read_text().split()]
    workers = [pid for pid in children if b"popen_loky" in Path(f"/proc/{pid}/cmdline").read_bytes()]
    os.kill(int(workers[0]), signal.SIGKILL)
    text, error = running.communicate()
    assert (running.returncode, out.read_bytes(), text) == (1, *alone)
    assert "Traceback" not in error


@pytest.mark.parametrize("workers", ["1", "2"])
def test_the_keyboard(review, alone, workers) -> None:
    out, running = review("interrupted", "--workers", workers)
    wait_for_rows(out)
    running.send_signal(signal.SIGINT)
    text, error = running.communicate()
    assert (running.returncode, text) == (130, "")
    assert error.endswith("sidecheck: interrupted\n")
    assert "Traceback" not in error
    out, again = review("interrupted", "--workers", workers)
    text, error = again.communicate()
    assert "rows were done before; going on after them" in error
    assert (again.returncode, out.read_bytes(), text) == (1, *alone)


def test_a_run_that_does_not_begin_leaves_no_journal(review) -> None:
    out, running = review("none", "--scheduler", "nonsense")
    _, error = running.communicate()
    assert running.returncode == 2
    assert error.count("\n") == 1
    assert not Path(f"{out}.journal").exists()


def test_a_cluster_that_loses_a_worker(review, alone, cluster) -> None:
    out, running = review("cluster", "--scheduler", cluster.start_workers(2).address)
    cluster.kill_one_at_work()
    text, _ = running.communicate()
    assert (running.returncode, out.read_bytes(), text) == (1, *alone)
