"""Limits that are irrational and symmetric, so that one atom carries the test: no ball and no fraction decides it."""

import mpmath
import pytest

from verify.derivation.derive import derive
from verify.derivation.even import equally_likely
from verify.derivation.ledger import Grade
from verify.problem.density import Density
from verify.problem.numbers import exact
from verify.problem.problem import Problem
from verify.solution.solve import solve

ODDS = Density(
    "binomial(m,x)*t**x/(1+t)**m", variable="x", support="integers 0..m", parameter="t", space="t > 0",
    constants={"m": "12"},
)  # fmt: skip
SHARE = Density(
    "binomial(m,x)*t**x*(1-t)**(m-x)", variable="x", support="integers 0..m", parameter="t", space="0 < t < 1",
    constants={"m": "12"},
)  # fmt: skip


def mass(density, t, trials):
    """Mass of the middle count: binomial(trials, half) (p (1 - p))^half."""
    p = t / (1 + t) if density is ODDS else t
    return mpmath.binomial(trials, trials // 2) * (p * (1 - p)) ** (trials // 2)


@pytest.mark.parametrize(
    ("density", "low", "high", "value"),
    [
        (ODDS, "sqrt(2)/2", "sqrt(2)", lambda: mpmath.sqrt(2)),
        (ODDS, "exp(-1)", "exp(1)", lambda: mpmath.e),
        (SHARE, "1/2 - sqrt(2)/10", "1/2 + sqrt(2)/10", lambda: mpmath.mpf(1) / 2 + mpmath.sqrt(2) / 10),
        (SHARE, "1/2 - log(3)/10", "1/2 + log(3)/10", lambda: mpmath.mpf(1) / 2 + mpmath.log(3) / 10),
    ],
)
@pytest.mark.parametrize("n", [1, 10])
def test_one_atom(density, low, high, value, n):
    inside = solve(Problem(density, f"t <= {low} or t >= {high}", "1e-9", n), digits=20)
    outside = solve(Problem(density, f"{low} <= t <= {high}", "0.999999999", n), digits=20)
    with mpmath.workdps(40):
        middle = mass(density, value(), 12 * n)
        known = mpmath.mpf("1e-9") / middle, 1 - mpmath.mpf("1e-9") / middle
        for solution, fraction in zip((inside, outside), known, strict=True):
            assert solution.grade is Grade.PROVED
            assert (solution.c1.mid, solution.c2.mid) == (6 * n, 6 * n)
            found = mpmath.mpf(solution.gamma1.mid.numerator) / solution.gamma1.mid.denominator
            assert abs(found - fraction) < mpmath.mpf(10) ** -20


def test_an_atom_that_is_not_quite_even_is_not_taken_for_even():
    derivation = derive(ODDS)
    even, nearly = (exact("sqrt(2)/2"), exact("sqrt(2)")), (exact("sqrt(2)/2"), exact("sqrt(2) + 1e-30"))
    assert equally_likely(derivation, even, 1, exact("6"))
    assert not equally_likely(derivation, even, 1, exact("7"))
    assert not equally_likely(derivation, nearly, 1, exact("6"))
