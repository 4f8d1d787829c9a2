"""Which route a density takes, and that closed forms agree with the law built from the density itself."""

from fractions import Fraction
from functools import cache

import pytest
import sympy as sp

from verify.arithmetic.ball import balls
from verify.derivation.derive import Derivation, derive
from verify.derivation.factorisation import Factorisation
from verify.derivation.general import general_family
from verify.derivation.ledger import Grade
from verify.errors import UndecidedError
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import solve


@cache
def family_density(name: str) -> Density:
    return Density(variable="x", parameter="t", **FAMILIES[name][0])


@cache
def family_derivation(name: str) -> Derivation:
    return derive(family_density(name))


def factorised(density: Density) -> Factorisation:
    found = derive(density)
    return Factorisation(found.statistic, found.natural_parameter, sp.log(found.base), found.log_normaliser)


CLOSED = {
    "Poisson": (
        Density(
            "exp(-t)*t**x/factorial(x)", variable="x", support="integers >= 0", parameter="t", space="t > 0"
        ),
        Fraction(3),
        4,
        (6, 12, 20),
    ),
    "binomial": (
        Density(
            "binomial(6,x)*t**x*(1-t)**(6-x)",
            variable="x",
            support="integers 0..6",
            parameter="t",
            space="0 < t < 1",
        ),
        Fraction(1, 3),
        4,
        (3, 8, 15),
    ),
    "normal": (
        Density("exp(-(x-t)**2/8)/sqrt(8*pi)", variable="x", support="reals", parameter="t", space="reals"),
        Fraction(1),
        1,
        (Fraction(-2), Fraction(1), Fraction(5)),
    ),
    "gamma": (
        Density("t*exp(-t*x)", variable="x", support="reals > 0", parameter="t", space="t > 0"),
        Fraction(2),
        1,
        (Fraction(1, 10), Fraction(1, 2), Fraction(3)),
    ),
}


@pytest.mark.parametrize("name", list(CLOSED))
def test_a_closed_form_agrees_with_the_law_built_from_its_density(name: str) -> None:
    density, at, n, places = CLOSED[name]
    closed = derive(density).family
    step, general = general_family(density, factorised(density))
    assert closed is not None
    assert general is not None
    assert step.grade is Grade.PROVED
    assert closed.law.name == name
    first, second = general.at(at, n), closed.at(at, n)
    with balls(140) as A:
        scale, shift = (A.real(getattr(general, k)) / A.real(closed.scale) for k in ("scale", "shift"))
        assert (scale - 1).contains(0)
        assert shift.contains(0)
        for v in places:
            point = v if first.lattice else A.real(v)
            for method in ("density", "cdf", "sf", "shortfall"):
                left, right = getattr(first, method)(A, point), getattr(second, method)(A, point)
                assert left.overlaps(right), (v, method)
                assert left.rel_accuracy_bits() > 100


FAMILIES = {
    "zero-truncated Poisson": (
        {"formula": "t**x/(factorial(x)*(exp(t)-1))", "support": "integers >= 1", "space": "t > 0"},
        "t <= 1 or t >= 3/2",
        5,
    ),
    "zero-truncated binomial": (
        {
            "formula": "binomial(6,x)*t**x*(1-t)**(6-x)/(1-(1-t)**6)",
            "support": "integers 1..6",
            "space": "0 < t < 1",
        },
        "t = 0.4",
        5,
    ),
    "logarithmic series": (
        {"formula": "-t**x/(x*log(1-t))", "support": "integers >= 1", "space": "0 < t < 1"},
        "0.3 <= t <= 0.5",
        8,
    ),
    "Borel": (
        {"formula": "exp(-t*x)*(t*x)**(x-1)/factorial(x)", "support": "integers >= 1", "space": "0 < t < 1"},
        "t <= 0.3",
        5,
    ),
    "Skellam": (
        {
            "formula": "exp(-3*(exp(t)+exp(-t)))*exp(t*x)*besseli(x,6)",
            "support": "integers",
            "space": "reals",
        },
        "t = 0",
        5,
    ),
    "noncentral hypergeometric": (
        {"kernel": "binomial(20,x)*binomial(15,12-x)*t**x", "support": "integers 0..12", "space": "t > 0"},
        "t <= 1/2 or t >= 2",
        1,
    ),
    "zeta": (
        {"formula": "x**(-t)/zeta(t)", "support": "integers >= 1", "space": "t > 1"},
        "t <= 2.5 or t >= 4",
        4,
    ),
    "von Mises": (
        {"formula": "exp(t*cos(x))/(2*pi*besseli(0,t))", "support": "reals in (-pi, pi)", "space": "t > 0"},
        "t <= 1 or t >= 2",
        1,
    ),
    "truncated exponential": (
        {"formula": "t*exp(-t*x)/(1-exp(-t))", "support": "reals in (0, 1)", "space": "t > 0"},
        "t = 1",
        1,
    ),
    "truncated normal": (
        {
            "formula": "sqrt(2/pi)*exp(-(x-t)**2/2)/(erf((1-t)/sqrt(2))-erf(-t/sqrt(2)))",
            "support": "reals in (0, 1)",
            "space": "reals",
        },
        "t = 0",
        1,
    ),
    "hyperbolic secant": (
        {"formula": "cos(t)*exp(t*x)/(2*cosh(pi*x/2))", "support": "reals", "space": "-pi/2 < t < pi/2"},
        "t = 0",
        5,
    ),
    "beta": (
        {"formula": "x**(t-1)*(1-x)**(3/2)/beta(t,5/2)", "support": "reals in (0, 1)", "space": "t > 0"},
        "t <= 2 or t >= 4",
        1,
    ),
}


@pytest.mark.parametrize("name", list(FAMILIES))
def test_family_is_solved_and_every_step_proved(name: str) -> None:
    _, null, n = FAMILIES[name]
    problem = Problem(family_density(name), null=null, alpha="0.05", n=n)
    solution = solve(problem, digits=20, derivation=family_derivation(name))
    assert solution.grade is Grade.PROVED
    for condition in solution.side_conditions:
        assert condition.expectation.contains(condition.target), name
    ends = [c for c in (solution.c1, solution.c2, solution.c) if c is not None]
    assert all(end.exact or end.digits >= 20 or end.contains(0) for end in ends)


def test_a_sum_whose_density_is_singular_and_whose_transform_is_unknown_is_checked_not_proved() -> None:
    """T = x**2 has a density like 1/sqrt(v) at 0, and its transform is of no kind known here."""
    formula = "2*sqrt(t/pi)*exp(-t*x**2)/erf(sqrt(t))"
    density = Density(formula, variable="x", support="reals in (0, 1)", parameter="t", space="t > 0")
    problem = Problem(density, null="t = 1", alpha="0.05", n=2)
    derivation = derive(density, limits=problem.hypothesis.limits, n=2)
    step = derivation.step("law of the sum")
    assert step is not None
    assert (step.grade, derivation.grade) == (Grade.CHECKED, Grade.CHECKED)
    assert "analytic" in step.reason
    solution = solve(problem, digits=18, derivation=derivation)
    assert (solution.grade, solution.numbers_grade) == (Grade.CHECKED, Grade.CHECKED)
    assert all(condition.expectation.contains(condition.target) for condition in solution.side_conditions)
    assert [s.name for s in solution.derivation.steps].count("law of the sum") == 1
    with pytest.raises(UndecidedError, match="digits, not 80"):
        solve(problem, digits=80, derivation=derivation)


def test_the_grade_is_added_where_the_derivation_did_not_know_n() -> None:
    density = Density("sqrt(t/pi)*exp(-t*x)/sqrt(x)/erf(sqrt(t))", variable="x", support="reals in (0, 1]",
                      parameter="t", space="t > 0")  # fmt: skip
    derivation = derive(density)
    assert derivation.grade is Grade.PROVED
    solution = solve(Problem(density, null="t <= 1", alpha="0.05", n=2), digits=15, derivation=derivation)
    assert solution.grade is Grade.CHECKED
    assert solution.derivation.step("law of the sum") is not None


def test_a_statistic_off_every_lattice_is_undecided_with_what_would_help() -> None:
    density = Density(
        "exp(-t*sqrt(x+2)-x)*a",
        variable="x",
        support="integers >= 0",
        parameter="t",
        space="t > 0",
        constants={"a": "1"},
    )
    found = Factorisation(sp.sqrt(density.x + 2), -density.t, -density.x, sp.Integer(0))
    step, family = general_family(density, found)
    assert family is None
    assert step.grade is Grade.UNDECIDED
    assert "would help" in step.reason
