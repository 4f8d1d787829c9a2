"""Every law that is derived in closed form is solved in all four forms at 50 digits."""

from fractions import Fraction

import pytest
from zoo import KNOWN

from verify.derivation.derive import derive
from verify.derivation.ledger import Grade
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import solve

FORMS = ("{t} <= {a} or {t} >= {b}", "{a} <= {t} <= {b}", "{t} = {a}", "{t} <= {a}", "{t} >= {a}")
WIDTH = Fraction(1, 10**45)


def limits_inside(density: Density) -> tuple[str, str]:
    """Two exact parameter values well inside the space."""
    space = density.parsed_space
    for a, b in (("1/3", "1/2"), ("3", "4"), ("-2", "-1"), ("1/10", "1/5"), ("6/5", "3/2")):
        if all(space.contains(Fraction(value)) for value in (a, b)):
            return a, b
    raise AssertionError(f"no values inside {space.text}")


@pytest.mark.parametrize("known", KNOWN, ids=lambda known: known.name)
def test_all_forms(known):
    density = Density(**known.density)
    a, b = limits_inside(density)
    derivation = derive(density, limits=(Fraction(a), Fraction(b)))
    assert all(step.grade is Grade.PROVED for step in derivation.steps if step.name != "numerical look"), derivation
    for form in FORMS:
        problem = Problem(density, null=form.format(t=density.parameter, a=a, b=b), alpha="0.05", n=5)
        solution = solve(problem, digits=50, derivation=derivation)
        for condition in solution.side_conditions:
            assert condition.expectation.contains(condition.target)
            assert condition.expectation.radius < WIDTH
        assert solution.grade is Grade.PROVED
        numbers = [solution.c1, solution.c2, solution.gamma1, solution.gamma2, solution.c, solution.gamma]
        assert all(number is None or number.exact or number.digits >= 49 for number in numbers), form
