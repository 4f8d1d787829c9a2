"""The interval-null test at level alpha is one minus the outside-null test at level 1 - alpha.

A short argument: phi solves the side conditions at level 1 - alpha exactly when 1 - phi solves them at
level alpha. So every published interval-null value checks the outside-null solver as well.
"""

from fractions import Fraction

import pytest

import verify

# T. B. Armstrong and M. Kolesar, Quantitative Economics 11 (2020) 1-39: critical values of abs(N(b, 1))
# (from memory).
ARMSTRONG = [
    ("0.95", "0.1", "1.970"),
    ("0.95", "0.2", "1.999"),
    ("0.95", "0.5", "2.181"),
    ("0.95", "1", "2.646"),
    ("0.95", "2", "3.645"),
    ("0.99", "0.5", "2.842"),
    ("0.99", "2", "4.326"),
    ("0.90", "1", "2.284"),
]


@pytest.mark.parametrize(("alpha", "b", "printed"), ARMSTRONG)
def test_normal_mean(rounds_to, alpha, b, printed) -> None:
    density = verify.Density("exp(-(x - mu)**2/2)/sqrt(2*pi)", "x", "reals", "mu", "reals")
    problem = verify.Problem(density, null=f"mu <= -{b} or mu >= {b}", alpha=alpha, n=1)
    solution = verify.solve(problem, digits=20)
    assert solution.rejects == "inside"
    assert rounds_to(solution.c2, printed)
    assert rounds_to(solution.c1, "-" + printed)


def test_fractions_are_complements() -> None:
    density = verify.Density("binomial(20, x)*p**x*(1 - p)**(20 - x)", "x", "integers 0..20", "p", "0 < p < 1")
    inside = verify.solve(verify.Problem(density, null="p <= 1/4 or p >= 3/4", alpha="1/20", n=1))
    outside = verify.solve(verify.Problem(density, null="1/4 <= p <= 3/4", alpha="19/20", n=1))
    assert (outside.c1, outside.c2) == (inside.c1, inside.c2)
    assert outside.gamma1.lower + inside.gamma1.lower <= 1
    assert outside.gamma1.upper + inside.gamma1.upper >= 1
    by_exact_fractions = Fraction("0.16240245773282")  # computed
    assert abs(inside.gamma1.mid - by_exact_fractions) < Fraction(1, 10**13)
