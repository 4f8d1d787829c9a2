"""Problems that the tests of the memory ask, and when two solutions are the same."""

from functools import cache

from verify.derivation.derive import derive
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import Solution

POISSON = Density("exp(-t)*t**x/factorial(x)", variable="x", support="integers >= 0", parameter="t", space="t > 0")
GAP = Density("exp(-x/t)/t", variable="x", support="reals > 0", parameter="t", space="t > 0")
COIN = Density("t**x*(1-t)**(1-x)", variable="x", support="integers 0..1", parameter="t", space="0 < t < 1")
NULLS = ["t <= 8 or t >= 12", "8 <= t <= 12", "t = 8", "t <= 8", "t >= 8"]

derivation = cache(derive)


def ask(density: Density, null: str, alpha: str = "0.05", n: int = 10) -> Problem:
    return Problem(density, null, alpha, n)


def same(first: Solution, second: Solution) -> bool:
    parts = ("critical", "side_conditions", "steps", "prec", "digits", "laws")
    return all(getattr(first, part) == getattr(second, part) for part in parts)
