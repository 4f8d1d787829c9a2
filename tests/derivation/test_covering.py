"""A derivation serves a problem whose limits it covers, and no other."""

import pytest

from verify.derivation.derive import derivation_for, derive
from verify.derivation.ledger import Grade
from verify.errors import InputError, UndecidedError
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import solve

BENT = "exp((t+3*exp(-(t-10)**2))*x-(t+3*exp(-(t-10)**2))**2/2-x**2/2)/sqrt(2*pi)"
"""A normal density whose natural parameter t + 3 exp(-(t - 10)**2) falls between about 10.3 and 11.4."""


def normal(formula):
    return Density(formula, variable="x", support="reals", parameter="t", space="reals")


def test_limits_that_were_not_looked_at_are_looked_at():
    density = normal(BENT)
    problem = Problem(density, "t <= 9 or t >= 11", "0.05", 1)
    elsewhere = derive(density, limits=(1, 2))
    assert not elsewhere.covers(problem.hypothesis.limits)
    anew = derivation_for(problem, elsewhere)
    assert anew.step("monotonicity").grade is Grade.REFUTED
    with pytest.raises(UndecidedError, match="monotonicity refuted"):
        solve(problem, 15, elsewhere)


def test_a_direction_proved_everywhere_serves_all_limits():
    density = normal("exp(-(x-t)**2/2)/sqrt(2*pi)")
    known = derive(density)
    assert derivation_for(Problem(density, "t = 1", "0.05", 1), known) is known


def test_a_derivation_of_another_density_is_refused():
    known = derive(normal("exp(-(x-t)**2/2)/sqrt(2*pi)"))
    other = Problem(normal("exp(-(x-t)**2/8)/sqrt(8*pi)"), "t = 1", "0.05", 1)
    with pytest.raises(InputError, match="derivation: the derivation is of another density"):
        solve(other, 15, known)
