"""Problems of every law, for the tests of the solver."""

from __future__ import annotations

from functools import cache

from verify.derivation.derive import derive
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import Solution, solve

DENSITIES = {
    "poisson": {"formula": "exp(-t)*t**x/factorial(x)", "support": "integers >= 0", "space": "t > 0"},
    "binomial": {"formula": "binomial(3,x)*t**x*(1-t)**(3-x)", "support": "integers 0..3", "space": "0 < t < 1"},
    "bernoulli": {"formula": "t**x*(1-t)**(1-x)", "support": "integers 0..1", "space": "0 < t < 1"},
    "geometric": {"formula": "t*(1-t)**x", "support": "integers >= 0", "space": "0 < t < 1"},
    "geometric from 1": {"formula": "t*(1-t)**(x-1)", "support": "integers >= 1", "space": "0 < t < 1"},
    "negative binomial": {
        "formula": "gamma(x+5/2)/(gamma(5/2)*factorial(x))*t**(5/2)*(1-t)**x",
        "support": "integers >= 0", "space": "0 < t < 1",
    },
    "exponential rate": {"formula": "t*exp(-t*x)", "support": "reals > 0", "space": "t > 0"},
    "exponential mean": {"formula": "exp(-x/t)/t", "support": "reals > 0", "space": "t > 0"},
    "normal mean": {"formula": "exp(-(x-t)**2/8)/sqrt(8*pi)", "support": "reals", "space": "reals"},
    "normal variance": {"formula": "exp(-x**2/(2*t))/sqrt(2*pi*t)", "support": "reals", "space": "t > 0"},
    "inverse gaussian": {
        "formula": "sqrt(3/(2*pi*x**3))*exp(-3*(x-t)**2/(2*t**2*x))", "support": "reals > 0", "space": "t > 0",
    },
    "pareto": {"formula": "t*2**t/x**(t+1)", "support": "reals >= 2", "space": "t > 0"},
    "power": {"formula": "t*x**(t-1)", "support": "reals in (0, 1)", "space": "t > 0"},
}  # fmt: skip
"""Densities with the parameter called t."""


@cache
def derivation(name: str):
    return derive(density(name))


@cache
def density(name: str) -> Density:
    return Density(variable="x", parameter="t", **DENSITIES[name])


def solved(name: str, null: str, alpha="0.05", n: int = 1, digits: int = 30) -> Solution:
    problem = Problem(density(name), null=null, alpha=alpha, n=n)
    return solve(problem, digits=digits, derivation=derivation(name))
