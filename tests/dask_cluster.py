"""A real Dask cluster on this machine: a scheduler and workers in processes of their own, which a test may kill.

The fixture ``cluster`` (in ``conftest.py``) gives one; it listens at 127.0.0.1 only and is gone with its test.
"""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

ROOT = Path(__file__).parents[1]
PATIENCE = 60.0


def wait_until(true: Callable[[], Any], what: str) -> Any:
    """Return the first true value of a question that is asked again and again."""
    end = time.monotonic() + PATIENCE
    while time.monotonic() < end:
        if value := true():
            return value
        time.sleep(0.01)
    raise AssertionError(f"{what}: not within {PATIENCE:g} s")


class Cluster:
    """A scheduler, and the workers that were started on it.

    Attributes
    ----------
    address : str
        Where the scheduler listens.
    workers : dict of str to subprocess.Popen
        By the names that they have for the scheduler.
    """

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        self.workers: dict[str, subprocess.Popen[bytes]] = {}
        told = folder / "scheduler.json"
        self.scheduler = self._start("dask_scheduler", "--host", "127.0.0.1", "--port", "0", "--scheduler-file", told)
        wait_until(told.exists, "the scheduler")
        self.address = str(wait_until(lambda: _json(told), "the scheduler's file")["address"])

    def start_workers(self, count: int, *words: str) -> Cluster:
        """Start workers, each one process with one thread, with more words on their command lines."""
        for _ in range(count):
            name = f"worker-{len(self.workers)}"
            self.workers[name] = self._start(
                "dask_worker", self.address, "--name", name, "--host", "127.0.0.1", "--nthreads", "1", "--no-nanny",
                "--local-directory", self.folder / name, *words,
            )  # fmt: skip
        return self

    def _start(self, module: str, *words: object) -> subprocess.Popen[bytes]:
        command = [sys.executable, "-m", f"distributed.cli.{module}", "--no-dashboard", *map(str, words)]
        path = os.pathsep.join([str(ROOT), str(ROOT / "tests"), os.environ.get("PYTHONPATH", "")])
        with open(self.folder / f"{module}-{len(self.workers)}.log", "wb") as log:
            return subprocess.Popen(
                command, stdin=subprocess.DEVNULL, stdout=log, stderr=log, env=os.environ | {"PYTHONPATH": path}
            )

    def kill_one_at_work(self) -> None:
        """Kill a worker, once results have come and while it has work."""
        from distributed import Client

        most = 0
        with Client(self.address, set_as_default=False) as client:

            def at_work() -> str:
                nonlocal most
                tasks, busy = client.run_on_scheduler(look)
                most = max(most, tasks)
                return next(iter(busy), "") if tasks < most else ""

            self.kill(wait_until(at_work, "results, and a worker at work"))

    def kill(self, name: str) -> None:
        """Kill a worker, and wait until the scheduler knows."""
        from distributed import Client

        with Client(self.address, set_as_default=False) as client:
            self.workers[name].send_signal(signal.SIGKILL)
            wait_until(lambda: name not in client.run_on_scheduler(names), "the loss")

    def stop(self) -> None:
        """End what is left of it."""
        for process in (*self.workers.values(), self.scheduler):
            process.kill()
            process.wait()


def look(dask_scheduler: Any) -> tuple[int, list[str]]:
    """Return how many tasks the scheduler still has, and the names of the workers that are at work (runs there)."""
    left = [task for task in dask_scheduler.tasks.values() if task.state != "memory"]
    return len(left), [worker.name for worker in dask_scheduler.workers.values() if worker.processing]


def names(dask_scheduler: Any) -> list[str]:
    """Return the names of the workers that the scheduler has (runs there)."""
    return [worker.name for worker in dask_scheduler.workers.values()]


def _json(path: Path) -> Any:
    """The contents of a file, None while it is half written."""
    try:
        return json.loads(path.read_text())
    except ValueError:
        return None
