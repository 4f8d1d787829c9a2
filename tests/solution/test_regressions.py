"""Problems, found by generating thousands, on which the search once gave up or took minutes."""

import pytest

from verify.arithmetic.ball import Balls
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
    (POISSON, "t <= 3 or t >= 4", "1e-186", 10_000_000),
    (COIN, "t = 1/100000", "999999999/1000000000", 100_000),
    (FROM_0, "t <= 1/1000000000", "0.025", 10_000_000),
    (FAILURES_OF_SIZE, "1/10 <= t <= 11/20", "8e-110", 1),
    (EXPOSED, "35/3 <= t <= 700000000007/60000000000", f"{10**20 - 1}/{10**20}", 10_000_000),
    (FAILURES_OF_SIZE, "t = 1/10000*sqrt(2)/2", "1/1000", 1),
    (FAILURES_OF_SIZE, "1/10000*sqrt(2)/2 <= t <= 909091/910000*sqrt(2)/2", "1/1000", 1),
    (FAILURES_OF_SIZE, "t >= 1/1000000", "1e-190", 30),
    (COIN, "1/1000 <= t <= 10000001/10001000", "1e-111", 10_000),
]
"""Many observations."""


BESIDE_A_TIE = [
    (COIN, "t <= 1/20 or t >= 19/20", f"{19 * 10**40 + 19}/{2 * 10**42}", 2),
]
"""Levels so near to a tie that one fraction of a wrong cell is exactly 0 or 1 and the other one just beyond."""


GAP, SPREAD, TAIL = "exp(-x/t)/t", "exp(-x**2/(2*t))/sqrt(2*pi*t)", "t*2**t/x**(t+1)"
DIAMETER = "exp(-(x-t)**2/(2*s**2))/(s*sqrt(2*pi))"
DELAY = "sqrt(k/(2*pi*x**3))*exp(-k*(x-t)**2/(2*t**2*x))"
CONTINUOUS = [
    (GAP, "t <= 10000*sqrt(2)/2 or t >= 100010000*sqrt(2)/2", "6e-157", 121),
    (GAP, "10000*sqrt(2)/2 <= t <= 11000*sqrt(2)/2", "6e-157", 121),
    (SPREAD, "t <= 1 or t >= 2", f"{10**25 - 1}/{10**25}", 1),
    (SPREAD, "1/100000 <= t <= 1001/100000", f"{10**25 - 1}/{10**25}", 1),
    (SPREAD, "t = 1/100000", f"{10**25 - 1}/{10**25}", 1),
    (TAIL, "7/11 <= t <= 700000000000000000007/1100000000000000000000", f"{10**30 - 1}/{10**30}", 1000),
    (TAIL, "t = 7/11", f"{10**30 - 1}/{10**30}", 1000),
    (DIAMETER, "t = 11/5", f"{10**29 - 1}/{10**29}", 100_000),
    (DELAY, "17/11 <= t <= 1717/11", "8e-164", 100),
    (DELAY, "1000000 <= t <= 101000000", "1e-42", 5),
    (DELAY, "t <= 1/1000000 or t >= 11/1000000", "99999999/100000000", 10_000_000),
    (SPREAD, "t >= 1", "1e-186", 10_000_000),
    (SPREAD, "10/3 <= t <= 101/30", "6e-160", 1),
    (SPREAD, "t >= 1/10*sqrt(2)/2", "1e-196", 1),
    (SPREAD, "100*sqrt(2)/2 <= t <= 110*sqrt(2)/2", "2e-196", 1),
    (SPREAD, "t = 1/10", "5e-169", 1),
    (DELAY, "397/20 <= t <= 397/10", f"{10**26 - 1}/{10**26}", 4),
]
"""Windows that accept almost nothing, ends below the smallest double, and ends that are each far out under one law."""

NEXT_TO_ONE = [
    (
        FAILURES_OF_SIZE, "1/14 <= t <= 50000000000000000007/700000000000000000007", f"{10**30 - 1}/{10**30}", 1000,
    ),
    (FROM_1, "t = 1/100", "1e-160", 100),
]  # fmt: skip
"""Levels that leave 1e-30, and limits that differ by 1e-20: minutes in exact fractions, moments in balls."""


LONG_SEARCHES = [
    (FROM_0, "t <= 1/10000 or t >= 100000001/100010000", "3e-197", 100_000),
    (FAILURES_OF_SIZE, "t <= 1/10000000 or t >= 1000001/11000000", "2e-200", 100_000),
    (ODDS, "t <= 10 or t >= 10010", "5e-102", 100_000),
    (POISSON, "t >= 100000*sqrt(2)/2", f"{10**28 - 1}/{10**28}", 583),
]
"""Cutoffs far from where the normal approximation puts them: searches that once took thousands of evaluations."""

MOST_EVALUATIONS = 100

ALL = [*FAR_APART, *MANY, *BESIDE_A_TIE, *NEXT_TO_ONE, *CONTINUOUS]


@pytest.mark.parametrize(("formula", "null", "alpha", "n"), ALL)
def test_it_is_proved(formula, null, alpha, n):
    solution = solve(Problem(FORMULAS[formula], null, alpha, n), digits=20)
    assert solution.grade is Grade.PROVED
    assert all(condition.expectation.contains(condition.target) for condition in solution.side_conditions)


@pytest.mark.parametrize(("formula", "null", "alpha", "n"), LONG_SEARCHES)
def test_it_is_proved_after_few_evaluations(monkeypatch, formula, null, alpha, n):
    evaluations = []

    def counted(name):
        evaluate = getattr(Balls, name)
        monkeypatch.setattr(Balls, name, lambda *args: evaluations.append(name) or evaluate(*args))

    for name in ("beta_p", "beta_q", "gamma_p", "gamma_q"):
        counted(name)
    test_it_is_proved(formula, null, alpha, n)
    assert 0 < len(evaluations) < MOST_EVALUATIONS
