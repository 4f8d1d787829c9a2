"""mpmath solves the side conditions once more: it agrees, and it would notice a wrong digit."""

from dataclasses import replace
from fractions import Fraction

import pytest
from build import DENSITIES, solved

from verify.arithmetic.enclosure import Enclosure
from verify.errors import UndecidedError
from verify.solution.second_engine import second_engine

UNIT = {"binomial", "bernoulli", "geometric", "geometric from 1", "negative binomial"}


@pytest.mark.parametrize("name", sorted(DENSITIES))
@pytest.mark.parametrize("form", ["t <= {a} or t >= {b}", "{a} <= t <= {b}", "t = {a}", "t <= {a}"])
def test_it_reproduces_the_proven_digits(name, form):
    a, b = ("1/3", "1/2") if name in UNIT else ("2", "3")
    digits = second_engine(solved(name, form.format(a=a, b=b), n=4, digits=40))
    assert digits
    assert min(digits.values()) >= 39


def test_it_notices_a_wrong_number():
    solution = solved("exponential rate", "1 <= t <= 2", n=4, digits=30)
    off = solution.critical.c1.mid * (1 + Fraction(1, 10**12))
    wrong = replace(solution, critical=replace(solution.critical, c1=Enclosure.of(off)))
    assert second_engine(wrong)["c1"] == 12


def test_a_wrong_fraction_is_noticed_too():
    solution = solved("poisson", "t <= 8 or t >= 12", n=10)
    off = Enclosure.of(solution.gamma1.mid + Fraction(1, 10**9))
    wrong = replace(solution, critical=replace(solution.critical, phi1=off))
    assert second_engine(wrong)["gamma1"] in (7, 8)


def test_laws_without_a_closed_form_are_declined():
    from verify.problem.density import Density
    from verify.problem.problem import Problem
    from verify.solution.solve import solve

    density = Density(weights=["1", "1", "1"], variable="x", support="integers 0..2", parameter="t", space="t > 0")
    with pytest.raises(UndecidedError, match="closed form"):
        second_engine(solve(Problem(density, null="t <= 1 or t >= 2", alpha="0.05", n=3), digits=20))
