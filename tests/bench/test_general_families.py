"""Seconds of processor time for families without a closed form, of the derivation and in every form of hypothesis, at
30 digits. The forms run in this order and share what is remembered.

Run with ``pytest -m bench -s tests/bench/test_general_families.py``; the table is printed as it grows.
"""

import os

import pytest

from verify.derivation.derive import derive
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import solve

pytestmark = pytest.mark.bench

TRUNCATED_NORMAL = {
    "formula": "sqrt(2/pi)*exp(-(x-t)**2/2)/(erf((1-t)/sqrt(2))-erf(-t/sqrt(2)))",
    "support": "reals in (0, 1)",
    "space": "reals",
}
VON_MISES = {"formula": "exp(t*cos(x))/(2*pi*besseli(0,t))", "support": "reals in (-pi, pi)", "space": "t > 0"}
BETA = {"formula": "x**(t-1)*(1-x)**(3/2)/beta(t,5/2)", "support": "reals in (0, 1)", "space": "t > 0"}
SECANT = {"formula": "cos(t)*exp(t*x)/(2*cosh(pi*x/2))", "support": "reals", "space": "-pi/2 < t < pi/2"}
POISSON = {"formula": "t**x/(factorial(x)*(exp(t)-1))", "support": "integers >= 1", "space": "t > 0"}
ODDS = {
    "kernel": "binomial(5000,x)*binomial(5000,5000-x)*t**x",
    "support": "integers 0..5000",
    "space": "t > 0",
}

ROWS = [
    ("zero-truncated Poisson", POISSON, ("1", "3/2"), 20),
    ("zero-truncated Poisson", POISSON, ("1", "11/10"), 2000),
    ("noncentral hypergeometric", ODDS, ("9/10", "11/10"), 1),
    ("von Mises", VON_MISES, ("1", "2"), 1),
    ("von Mises", VON_MISES, ("1", "2"), 8),
    ("beta", BETA, ("2", "4"), 8),
    ("hyperbolic secant", SECANT, ("-1/4", "1/4"), 1),
    ("hyperbolic secant", SECANT, ("-1/4", "1/4"), 5),
    ("truncated normal", TRUNCATED_NORMAL, ("0", "1"), 8),
    ("truncated normal", TRUNCATED_NORMAL, ("0", "1"), 30),
]
NULLS = {
    "one-sided": "t <= {0}",
    "outside": "t <= {0} or t >= {1}",
    "interval": "{0} <= t <= {1}",
    "point": "t = {0}",
}


def _seconds() -> float:
    """Processor time of this process and of its children that have ended."""
    spent = os.times()
    return spent.user + spent.system + spent.children_user + spent.children_system


@pytest.mark.parametrize(("name", "given", "limits", "n"), ROWS, ids=[f"{row[0]} {row[3]}" for row in ROWS])
def test_seconds(name: str, given: dict[str, str], limits: tuple[str, str], n: int) -> None:
    density = Density(variable="x", parameter="t", **given)  # type: ignore[arg-type]
    began = _seconds()
    derivation = derive(density)
    row = [f"derivation {_seconds() - began:.1f}"]
    for form, null in NULLS.items():
        began = _seconds()
        problem = Problem(density, null=null.format(*limits), alpha="0.05", n=n)
        solution = solve(problem, digits=30, derivation=derivation)
        row.append(f"{form} {_seconds() - began:.1f} {solution.grade.value}")
    print(f"| {name} | {n} | " + " | ".join(row) + " |", flush=True)
