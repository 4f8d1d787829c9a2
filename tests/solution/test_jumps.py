"""A cutoff exactly where the density of the statistic jumps: enclosed by signs, or undecided; never beside the truth.

T = X**2 on (-1, 2), the density of X proportional to abs(X) exp(t T): up to 1 both roots count, from there on one. With
u = exp(t), P(T > 1) = (u**4 - u)/(u + u**4 - 2), which is 7/8 at u = 2; and
P(1/2 < T < 1) = 2 (u - sqrt(u))/(u + u**4 - 2).
"""

from fractions import Fraction
from functools import cache

import pytest

from verify.derivation.derive import derive
from verify.errors import UndecidedError
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import solve


@cache
def folded():
    density = Density(
        "2*t*abs(x)*exp(t*x**2)/(exp(t)+exp(4*t)-2)", variable="x", support="reals in (-1, 2)", parameter="t",
        space="t > 0",
    )  # fmt: skip
    return density, derive(density, n=1)


@pytest.mark.parametrize("digits", [15, 40])
@pytest.mark.parametrize(("null", "alpha"), [("t >= log(2)", "1/8"), ("t <= log(2)", "7/8")])
def test_a_one_sided_cutoff_at_the_jump(null, alpha, digits):
    density, derivation = folded()
    solution = solve(Problem(density, null, alpha, 1), digits, derivation)
    [condition] = solution.side_conditions
    assert solution.c.contains(Fraction(1))
    assert solution.c.radius < Fraction(1, 10**digits)
    assert condition.expectation.contains(Fraction(alpha))


def test_a_window_with_an_end_at_the_jump_is_undecided():
    density, derivation = folded()
    levels = ("1/4 - sqrt(2)/8", "3/41 - sqrt(3)/41")
    with pytest.raises(UndecidedError, match="no box around the cutoffs"):
        solve(Problem(density, "t <= log(2) or t >= log(3)", levels, 1), 15, derivation)
