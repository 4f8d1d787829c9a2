"""A cutoff that is exactly 0: it has no significant digits, so its digits are those of the law's spread."""

from fractions import Fraction

import pytest
from build import density, derivation

from verify.comparison.compare import compare
from verify.problem.problem import Problem
from verify.solution.solve import solve


@pytest.mark.parametrize("null", ["t <= 0", "t >= 0"])
@pytest.mark.parametrize("digits", [15, 50, 300])
def test_a_normal_mean_at_level_one_half(null, digits):
    """By symmetry P(V > 0) = 1/2."""
    solution = solve(Problem(density("normal mean"), null, "1/2", 3), digits, derivation("normal mean"))
    assert solution.c.contains(0)
    assert solution.c.radius < Fraction(1, 10**digits)
    assert solution.side_conditions[0].expectation.contains(Fraction(1, 2))


def test_double_precision_is_held_against_the_spread():
    solution = solve(Problem(density("normal mean"), "t <= 0", "1/2", 3), 30, derivation("normal mean"))
    comparison = compare(solution)
    assert all(opinion.digits["c"] >= 14 for opinion in comparison.opinions)
    assert comparison.mpmath.digits == {"c": 30}
    assert not comparison.flags
