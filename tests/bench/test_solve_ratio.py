"""A warm solve against the ball evaluations that its proof needs, and against trying all pairs in doubles.

Run by hand: ``pytest -m bench -s tests/bench/test_solve_ratio.py``. Ratios of minima measured in one run;
nothing is asserted of the times.
"""

import time
from collections.abc import Callable
from fractions import Fraction

import numpy as np
import pytest
from scipy import stats

from verify.arithmetic.ball import balls
from verify.laws import Binomial, Gamma, Law, Normal, Poisson
from verify.solution.two_sided import solve_window, window_search
from verify.solution.window import Window

ALPHA = Fraction(1, 20)
DIGITS, BITS, RUNS = 50, 200, 60

PROBLEMS: list[tuple[Law, ...]] = [
    *[(Poisson(Fraction(m - 2 * round(m**0.5))), Poisson(Fraction(m + 2 * round(m**0.5)))) for m in (100, 1000, 4000)],
    *[(Binomial(Fraction(n), Fraction(1, 3)), Binomial(Fraction(n), Fraction(1, 2))) for n in (100, 1000, 10_000)],
    *[(Gamma(Fraction(n), Fraction(1)), Gamma(Fraction(n), Fraction(3, 2))) for n in (3, 30, 300)],
    (Normal(Fraction(0), Fraction(1)), Normal(Fraction(1), Fraction(1))),
]


def solve_warm(laws: tuple[Law, ...], outside: bool) -> Window:
    return solve_window(window_search(laws, (ALPHA,) * len(laws), outside), DIGITS)


def proof_evaluations(laws: tuple[Law, ...], window: Window) -> None:
    """Two cdf differences and four masses (or densities)."""
    with balls(BITS) as A:
        c1, c2 = (
            (window.c1, window.c2) if laws[0].lattice else (A.interval(window.c1).mid(), A.interval(window.c2).mid())
        )
        for law in (laws[0], laws[-1]):
            _ = law.cdf(A, c2) - law.cdf(A, c1)
            law.density(A, c1)
            law.density(A, c2)


def all_pairs(low: float, high: float) -> int:
    """Every pair of cutoffs of a Poisson outside null in doubles: how many have both fractions in [0, 1]."""
    spread = 8 * high**0.5
    k = np.arange(max(0, int(low - spread)), int(high + spread))
    p, q = stats.poisson.pmf(k, low), stats.poisson.pmf(k, high)
    sums = [np.concatenate([[0.0], np.cumsum(mass)]) for mass in (p, q)]
    i, j = np.triu_indices(len(k), 1)
    lack = [float(ALPHA) - (total[j] - total[i + 1]) for total in sums]
    determinant = p[i] * q[j] - p[j] * q[i]
    g1, g2 = (lack[0] * q[j] - lack[1] * p[j]) / determinant, (lack[1] * p[i] - lack[0] * q[i]) / determinant
    return int(((g1 >= 0) & (g1 <= 1) & (g2 >= 0) & (g2 <= 1)).sum())


def ratio(first: Callable[[], object], second: Callable[[], object]) -> float:
    """Ratio of the shortest times of two calls, made in turn: a machine's slow spells meet both."""
    times: tuple[list[float], list[float]] = ([], [])
    for _ in range(RUNS):
        for call, found in zip((first, second), times, strict=True):
            start = time.perf_counter()
            call()
            found.append(time.perf_counter() - start)
    return min(times[0]) / min(times[1])


@pytest.mark.bench
def test_report_ratios() -> None:
    print()
    for laws in PROBLEMS:
        for outside, used in ((False, laws), (True, laws), (True, laws[:1])):
            window = solve_warm(used, outside)
            part = ratio(lambda u=used, o=outside: solve_warm(u, o), lambda u=used, w=window: proof_evaluations(u, w))
            form = ("point null" if len(used) == 1 else "interval null") if outside else "outside null"
            print(f"{laws[0]!s:60} {form:14} solve / proof evaluations = {part:.1f}")
    for m in (100, 1000, 4000):
        low, high = m - 2 * round(m**0.5), m + 2 * round(m**0.5)
        laws = (Poisson(Fraction(low)), Poisson(Fraction(high)))
        part = ratio(lambda a=low, b=high: all_pairs(a, b), lambda u=laws: solve_warm(u, False))
        print(f"Poisson mean {m}: all pairs in doubles / our proved solve = {part:.1f}")
    assert all_pairs(80, 120) >= 1
