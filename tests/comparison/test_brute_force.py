"""Brute force from a formula, a kernel and a table, against exact fractions."""

from fractions import Fraction
from itertools import product
from math import comb

import pytest
import sympy

from verify.comparison.brute_force import brute_force_opinion
from verify.comparison.question import Question
from verify.errors import NotAttempted
from verify.problem.density import Density


def asked(density: Density, statistic, t: float, n: int, alpha: float) -> Question:
    """The one-sided problem t <= t0 as a route sees it."""
    return Question(
        "one-sided", True, (alpha,), (t,), n, True, "", (), 1.0, 0.0, density, statistic, {"c": 0.0, "gamma": 0.0}
    )


def exact_test(masses: dict[int, Fraction], n: int, alpha: Fraction) -> tuple[int, Fraction]:
    """Cutoff and fraction of the test that rejects large sums, over all outcomes."""
    total = sum(masses.values())
    sums: dict[int, Fraction] = {}
    for outcome in product(masses.items(), repeat=n):
        mass = Fraction(1)
        for _, one in outcome:
            mass *= one / total
        place = sum(value for value, _ in outcome)
        sums[place] = sums.get(place, Fraction(0)) + mass
    tail = Fraction(0)
    for place in sorted(sums, reverse=True):
        if tail + sums[place] >= alpha:
            return place, (alpha - tail) / sums[place]
        tail += sums[place]
    raise AssertionError("the level is above one")


@pytest.mark.parametrize("n", [1, 2, 3])
@pytest.mark.parametrize("square", [False, True])
def test_a_kernel(n, square):
    density = Density(kernel="binomial(5,x)*binomial(7,4-x)*t**x", variable="x", support="integers 0..4",
                      parameter="t", space="t > 0")  # fmt: skip
    statistic = density.x**2 if square else density.x
    masses = {x ** (1 + square): comb(5, x) * comb(7, 4 - x) * Fraction(3, 2) ** x for x in range(5)}
    c, gamma = exact_test(masses, n, Fraction(1, 16))
    found = brute_force_opinion(asked(density, statistic, 1.5, n, 1 / 16)).numbers
    assert found["c"] == c
    assert found["gamma"] == pytest.approx(float(gamma), rel=1e-12)


def test_a_table_with_a_hole():
    density = Density(weights=["1", "0", "3", "1"], variable="x", support="integers 0..3", parameter="t", space="t > 0")
    masses = {0: Fraction(1), 2: 3 * Fraction(4), 3: Fraction(8)}
    c, gamma = exact_test(masses, 2, Fraction(1, 32))
    found = brute_force_opinion(asked(density, density.x, 2.0, 2, 1 / 32)).numbers
    assert found["c"] == c
    assert found["gamma"] == pytest.approx(float(gamma), rel=1e-12)


def test_values_without_a_grid_are_not_convolved():
    density = Density("x**(-t)/zeta(t)", variable="x", support="integers 1..40", parameter="t", space="t > 1")
    kernel = Density(kernel="x**(-t)", variable="x", support="integers 1..40", parameter="t", space="t > 1")
    with pytest.raises(ArithmeticError, match="add up to"):  # zeta's masses do not end at 40
        brute_force_opinion(asked(density, sympy.log(density.x), 3.0, 1, 0.05))
    assert brute_force_opinion(asked(kernel, sympy.log(kernel.x), 3.0, 1, 0.05)).numbers["c"] >= 0
    with pytest.raises(NotAttempted, match="no common grid"):
        brute_force_opinion(asked(kernel, sympy.log(kernel.x), 3.0, 2, 0.05))


def test_too_many_atoms_are_not_attempted():
    density = Density("exp(-t)*t**x/factorial(x)", variable="x", support="integers >= 0", parameter="t", space="t > 0")
    with pytest.raises(NotAttempted, match="atoms, more than"):
        brute_force_opinion(asked(density, density.x, 1e14, 1, 0.05))


def test_an_improper_formula_is_not_believed():
    density = Density("2*t*exp(-t*x)", variable="x", support="reals > 0", parameter="t", space="t > 0")
    with pytest.raises(ArithmeticError, match="integrates to 2"):
        brute_force_opinion(asked(density, density.x, 1.0, 1, 0.05))
