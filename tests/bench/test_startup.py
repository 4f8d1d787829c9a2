"""Where the time of one command goes; printed, not asserted (``pytest -m bench -s``)."""

from __future__ import annotations

import re
import statistics
import subprocess
import sys
import time
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
LOT = "casebook/demo/lot-release.case.toml"
ENGINES = ("sympy", "flint", "mpmath", "scipy", "numpy", "multiprocessing")


def seconds(*words: str, repeat: int = 5) -> float:
    """Median wall clock of a command."""
    times = []
    for _ in range(repeat):
        start = time.perf_counter()
        subprocess.run([sys.executable, *words], cwd=ROOT, capture_output=True, check=True)
        times.append(time.perf_counter() - start)
    return statistics.median(times)


@pytest.mark.bench
def test_startup() -> None:
    print()
    print(f"bare interpreter        {seconds('-c', 'pass') * 1000:6.0f} ms")
    print(f"sidecheck --help        {seconds('-m', 'verify', '--help') * 1000:6.0f} ms")
    print(f"import sympy            {seconds('-c', 'import sympy') * 1000:6.0f} ms")
    print(f"solve, not compared     {seconds('-m', 'verify', 'solve', LOT, '--no-compare') * 1000:6.0f} ms")
    print(f"solve, compared         {seconds('-m', 'verify', 'solve', LOT) * 1000:6.0f} ms")


@pytest.mark.bench
def test_import_split() -> None:
    """Self time of each import during one solve, summed by top-level package (``-X importtime``)."""
    command = [sys.executable, "-X", "importtime", "-m", "verify", "solve", LOT, "--no-compare"]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=True)
    total: dict[str, int] = {}
    for line in done.stderr.splitlines():
        found = re.match(r"import time:\s+(\d+) \|\s+\d+ \|\s+(\w+)", line)
        if found:
            total[found[2]] = total.get(found[2], 0) + int(found[1])
    rest = sum(time for name, time in total.items() if name not in (*ENGINES, "verify"))
    print()
    for name in (*ENGINES, "verify"):
        print(f"{name:16s} {total.get(name, 0) / 1000:7.1f} ms")
    print(f"{'standard library':16s} {rest / 1000:7.1f} ms")
