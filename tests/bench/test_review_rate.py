"""How fast long tables are reviewed, against the ball evaluations that a row cannot do without.

A row about a problem of its own needs, in balls: the 2 x 2 system at the printed pair (the check of the right
numbers), the rejection probabilities at both limits, and the sign of the power's derivative there (where the size
lies). Everything else (reading the row, the null, comparing, writing the record) is overhead; the factor printed is
the whole over those evaluations.
"""

import csv
import random
import time
from fractions import Fraction
from pathlib import Path

import pytest

from verify.arithmetic.ball import balls
from verify.laws import Poisson
from verify.problem.casefile import read_case
from verify.review.engine import TwoSided
from verify.review.journal import Journal
from verify.review.mapping import map_columns
from verify.review.run import Job, run
from verify.review.size import covariance
from verify.review.tables import open_table
from verify.solution.conditions import end_fractions

pytestmark = pytest.mark.bench

CASE = Path(__file__).parents[2] / "casebook" / "demo" / "lot-release.case.toml"
ROWS = 1000


def problems(count: int) -> list[tuple]:
    """Distinct problems with their right tests."""
    rng, found = random.Random(1), []
    for _ in range(count):
        low = Fraction(rng.randint(500, 1500), 100)
        high, n = low + Fraction(rng.randint(200, 800), 100), rng.randint(3, 30)
        asked = TwoSided((Poisson(low * n), Poisson(high * n)), (Fraction(1, 20),) * 2, False)
        found.append((low, high, n, asked, asked.solve(15)))
    return found


def raw_seconds(asked: list[tuple]) -> float:
    """Time of the ball evaluations alone."""
    start = time.process_time()
    for _, _, _, two_sided, test in asked:
        with balls(120) as A:
            end_fractions(two_sided.search.conditions, A, test.c1, test.c2)
        with balls(128) as A:
            for law in two_sided.laws:
                test.expectation(law, A)
                covariance(test, law, A)
    return time.process_time() - start


def test_rate(tmp_path, capsys) -> None:
    asked = problems(ROWS)
    with open(tmp_path / "t.csv", "w", newline="") as stream:
        writer = csv.writer(stream)
        writer.writerow(["lower", "upper", "n", "c1", "c2", "gamma1", "gamma2"])
        for low, high, n, _, test in asked:
            fractions = [f"{float(phi.mid):.4f}" for phi in (test.phi1, test.phi2)]
            writer.writerow([float(low), float(high), n, test.c1, test.c2, *fractions])
    case, table = read_case(CASE), open_table(tmp_path / "t.csv")
    job = Job(case, map_columns({}, table.header, "t.csv"), tmp_path, 20)
    journal = Journal(tmp_path / "journal", "bench")
    start = time.process_time()
    run(job, table, journal)
    whole, raw = time.process_time() - start, raw_seconds(asked)
    assert all(record["verdict"] == "agrees" for record in journal.records())
    with capsys.disabled():
        print(
            f"\n{ROWS / whole:.0f} rows a second; {whole / ROWS * 1e3:.2f} ms a row, "
            f"{raw / ROWS * 1e3:.2f} ms of it ball evaluations: factor {whole / raw:.1f}"
        )
