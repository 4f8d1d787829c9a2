"""Every family without a closed form, in every form of hypothesis: solved, proved, and the side conditions met.

The digits are few so that the file stays quick; ``tests/bench/test_general_families.py`` asks for 30.
"""

import math
from functools import cache

import pytest

from verify.derivation.derive import Derivation, derive
from verify.derivation.ledger import Grade
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import solve

DIGITS = 15

FAMILIES: dict[str, tuple[dict[str, object], tuple[str, str], int]] = {
    "zero-truncated Poisson": (
        {"formula": "t**x/(factorial(x)*(exp(t)-1))", "support": "integers >= 1", "space": "t > 0"},
        ("1", "3/2"),
        20,
    ),
    "zero-truncated binomial": (
        {
            "formula": "binomial(6,x)*t**x*(1-t)**(6-x)/(1-(1-t)**6)",
            "support": "integers 1..6",
            "space": "0 < t < 1",
        },
        ("0.3", "0.5"),
        5,
    ),
    "logarithmic series": (
        {"formula": "-t**x/(x*log(1-t))", "support": "integers >= 1", "space": "0 < t < 1"},
        ("0.3", "0.5"),
        8,
    ),
    "Borel": (
        {"formula": "exp(-t*x)*(t*x)**(x-1)/factorial(x)", "support": "integers >= 1", "space": "0 < t < 1"},
        ("0.3", "0.6"),
        5,
    ),
    "Skellam": (
        {"formula": "exp(-3*(exp(t)+exp(-t)))*exp(t*x)*besseli(x,6)", "support": "integers", "space": "reals"},
        ("-1/4", "1/4"),
        5,
    ),
    "noncentral hypergeometric": (
        {"kernel": "binomial(20,x)*binomial(15,12-x)*t**x", "support": "integers 0..12", "space": "t > 0"},
        ("1/2", "2"),
        1,
    ),
    "table of weights": (
        {"weights": ["1", "4", "1/2", "0", "3"], "support": "integers 0..4", "space": "t > 0"},
        ("1/2", "2"),
        6,
    ),
    "zeta": (
        {"formula": "x**(-t)/zeta(t)", "support": "integers >= 1", "space": "t > 1"},
        ("5/2", "4"),
        4,
    ),
    "zeta cut off": (
        {"kernel": "x**(-t)", "support": "integers 2..7", "space": "reals"},
        ("1/2", "2"),
        3,
    ),
    "von Mises": (
        {"formula": "exp(t*cos(x))/(2*pi*besseli(0,t))", "support": "reals in (-pi, pi)", "space": "t > 0"},
        ("1", "2"),
        1,
    ),
    "beta": (
        {
            "formula": "x**(t-1)*(1-x)**(3/2)/beta(t,5/2)",
            "support": "reals in (0, 1)",
            "space": "t > 0",
        },
        ("2", "4"),
        1,
    ),
    "hyperbolic secant": (
        {"formula": "cos(t)*exp(t*x)/(2*cosh(pi*x/2))", "support": "reals", "space": "-pi/2 < t < pi/2"},
        ("-1/4", "1/4"),
        1,
    ),
    "truncated normal": (
        {
            "formula": "sqrt(2/pi)*exp(-(x-t)**2/2)/(erf((1-t)/sqrt(2))-erf(-t/sqrt(2)))",
            "support": "reals in (0, 1)",
            "space": "reals",
        },
        ("0", "1"),
        3,
    ),
    "normal on a half-line": (
        {
            "formula": "sqrt(2/pi)*exp(-(x-t)**2/2)/(1+erf(t/sqrt(2)))",
            "support": "reals > 0",
            "space": "reals",
        },
        ("0", "1"),
        2,
    ),
    "truncated exponential": (
        {"formula": "t*exp(-t*x)/(1-exp(-t))", "support": "reals in (0, 1)", "space": "t > 0"},
        ("1", "3"),
        4,
    ),
    "truncated Pareto": (
        {"formula": "t*x**(-t-1)/(1-2**(-t))", "support": "reals in (1, 2)", "space": "t > 0"},
        ("1", "3"),
        4,
    ),
    "truncated Kumaraswamy": (
        {
            "formula": "2*t*x*(1-x**2)**(t-1)/(1-(3/4)**t)",
            "support": "reals in (0, 1/2)",
            "space": "t > 0",
        },
        ("1", "3"),
        2,
    ),
}
CHECKED_MASS = {"truncated Kumaraswamy"}
"""Families whose integral of 1 is only checked numerically."""

NULLS = {
    "one-sided": "t <= {0}",
    "outside": "t <= {0} or t >= {1}",
    "interval": "{0} <= t <= {1}",
    "point": "t = {0}",
}


@cache
def derived(name: str) -> tuple[Density, Derivation]:
    density = Density(variable="x", parameter="t", **FAMILIES[name][0])  # type: ignore[arg-type]
    return density, derive(density)


@pytest.mark.parametrize("form", list(NULLS))
@pytest.mark.parametrize("name", list(FAMILIES))
def test_every_family_is_solved_in_every_form(name: str, form: str) -> None:
    (density, derivation), (_, limits, n) = derived(name), FAMILIES[name]
    problem = Problem(density, null=NULLS[form].format(*limits), alpha="0.05", n=n)
    solution = solve(problem, digits=DIGITS, derivation=derivation)
    assert solution.grade is (Grade.CHECKED if name in CHECKED_MASS else Grade.PROVED)
    assert solution.steps[-1].name == "numbers"
    assert solution.steps[-1].grade is Grade.PROVED
    for condition in solution.side_conditions:
        assert condition.expectation.contains(condition.target)
        assert condition.expectation.radius < 1e-14
    for number in (solution.c, solution.c1, solution.c2, solution.gamma, solution.gamma1, solution.gamma2):
        assert number is None or number.exact or number.digits >= DIGITS - 1


def test_a_statistic_that_turns_at_the_middle():
    """With t = 1 the observation is uniform: P(log(x (1 - x)) < v) = 1 - sqrt(1 - 4 exp(v))."""
    density = Density(
        "x**(t-1)*(1-x)**(t-1)/beta(t,t)", variable="x", support="reals in (0, 1)", parameter="t", space="t > 0"
    )
    solution = solve(Problem(density, "t <= 1 or t >= 2", "0.05", 1), DIGITS)
    below = [1 - math.sqrt(1 - 4 * math.exp(float(c.mid))) for c in (solution.c1, solution.c2)]
    assert solution.grade is Grade.PROVED
    assert below[1] - below[0] == pytest.approx(0.05, rel=1e-11)
