"""Problems, found by generating thousands, on which the search once gave up or took minutes."""

import pytest

from verify.derivation.ledger import Grade
from verify.problem.problem import Problem
from verify.solution.solve import solve
from verify.strategies import FAMILIES

FORMULAS = {family.formula: family.density for family in FAMILIES}
POISSON = "exp(-t)*t**x/factorial(x)"
SHIFTED = "exp(-t)*t**(x-3)/factorial(x-3)"
EXPOSED = "exp(-c*t)*(c*t)**x/factorial(x)"
ODDS = "binomial(m,x)*t**x/(1+t)**m"
COIN = "t**x*(1-t)**(1-x)"
FAILURES_OF_SIZE = "gamma(x+r)/(gamma(r)*factorial(x))*t**r*(1-t)**x"
FROM_0, FROM_1 = "t*(1-t)**x", "t*(1-t)**(x-1)"

FAR_APART = [
    (POISSON, "t <= 10000 or t >= 10010000", "9999999999/10000000000", 385),
    (SHIFTED, "t <= 326/17 or t >= 3260326/17", "9999/10000", 10_000),
    (EXPOSED, "1000*sqrt(2)/2 <= t <= 1001000*sqrt(2)/2", "6e-6", 6),
    (SHIFTED, "3*sqrt(2)/2 <= t <= 30003*sqrt(2)/2", "1e-192", 574),
    (ODDS, "t <= 1/100000 or t >= 10001/100000", "8e-50", 219),
    (ODDS, "1 <= t <= 1001", "3e-64", 1000),
    (FROM_0, "t <= 1/1000000*sqrt(2)/2 or t >= 999001/1000000*sqrt(2)/2", "0.1", 1_000_000),
    (FROM_1, "t <= 1/1000000*sqrt(2)/2 or t >= 9091/100000*sqrt(2)/2", "9999999/10000000", 10_000),
]
"""Limits so far apart that the weight which an end wants is no double."""

MANY = [
    (COIN, "t <= 4/37*sqrt(2)/2 or t >= 7/37*sqrt(2)/2", "9e-136", 1_000_000),
]
"""Many observations."""


BESIDE_A_TIE = [
    (COIN, "t <= 1/20 or t >= 19/20", f"{19 * 10**40 + 19}/{2 * 10**42}", 2),
]
"""Levels so near to a tie that one fraction of a wrong cell is exactly 0 or 1 and the other one just beyond."""


NEXT_TO_ONE = [
    (
        FAILURES_OF_SIZE, "1/14 <= t <= 50000000000000000007/700000000000000000007", f"{10**30 - 1}/{10**30}", 1000,
    ),
    (FROM_1, "t = 1/100", "1e-160", 100),
]  # fmt: skip
"""Levels that leave 1e-30, and limits that differ by 1e-20: minutes in exact fractions, moments in balls."""


@pytest.mark.parametrize(("formula", "null", "alpha", "n"), [*FAR_APART, *MANY, *BESIDE_A_TIE, *NEXT_TO_ONE])
def test_it_is_proved(formula, null, alpha, n):
    solution = solve(Problem(FORMULAS[formula], null, alpha, n), digits=20)
    assert solution.grade is Grade.PROVED
    assert all(condition.expectation.contains(condition.target) for condition in solution.side_conditions)
