"""Whole derivations: the zoo of known laws, of laws without closed form, and of densities to refuse."""

from __future__ import annotations

import importlib.util
from fractions import Fraction
from functools import cache
from pathlib import Path

import pytest
import sympy as sp

from verify.arithmetic.ball import balls, to_enclosure
from verify.derivation.derive import Derivation, derive
from verify.derivation.law_of_variance import CLOSED_FORMS
from verify.derivation.ledger import Grade
from verify.problem.density import Density
from verify.problem.formula import parse_formula
from verify.problem.numbers import as_expr

_spec = importlib.util.spec_from_file_location("zoo", Path(__file__).with_name("zoo.py"))
assert _spec is not None
assert _spec.loader is not None
zoo = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(zoo)

BUDGET = 40.0
"""Generous, because the machine may be shared."""


@cache
def _derived(name: str) -> Derivation:
    return derive(Density(**next(known for known in zoo.KNOWN if known.name == name).density), budget=BUDGET)


def _equal(left: object, right: object) -> bool:
    return sp.simplify(sp.sympify(left) - sp.sympify(right)) == 0


def _parsed(text: str, derivation: Derivation) -> sp.Expr:
    density = derivation.density
    return parse_formula(text, {density.x.name: density.x, density.t.name: density.t})


@pytest.mark.parametrize("known", zoo.KNOWN, ids=lambda known: known.name)
def test_known_law_with_every_step_proved(known):
    derivation = _derived(known.name)
    symbolic = [step for step in derivation.steps if step.name != "numerical look"]
    assert [step.name for step in symbolic] == [
        "support",
        "nonnegativity",
        "normalisation",
        "factorisation",
        "monotonicity",
        "law",
    ]
    assert all(step.grade is Grade.PROVED for step in symbolic), str(derivation)
    assert derivation.step("numerical look").grade is Grade.CHECKED, str(derivation)
    assert derivation.grade is Grade.PROVED
    family = derivation.family
    assert family.law.name == known.law
    assert _equal(derivation.statistic, _parsed(known.statistic, derivation))
    for found, text in zip(family.law.parameters.values(), known.parameters, strict=True):
        assert _equal(as_expr(found) if isinstance(found, Fraction) else found, _parsed(text, derivation))
    assert _equal(as_expr(family.scale), sp.sympify(known.scale))
    assert _equal(as_expr(family.shift), sp.sympify(known.shift))


@pytest.mark.parametrize("known", zoo.KNOWN, ids=lambda known: known.name)
def test_factorisation_is_the_density_in_numbers(known):
    """The identity that was proved, evaluated by SymPy's own numerics (another route than log f)."""
    derivation = _derived(known.name)
    density = derivation.density
    product = derivation.base * sp.exp(derivation.natural_parameter * derivation.statistic - derivation.log_normaliser)
    lower = density.parsed_support.lower
    offset = sp.Integer(0) if density.parsed_support.kind == "integers" else sp.Rational(2, 7)
    start = lower if lower.is_finite else sp.Integer(-2)
    unit = density.parsed_support.kind == "reals" and density.parsed_support.upper == 1
    for x in (start + offset, start + offset + (sp.Rational(1, 3) if unit else 1)):
        for t in (sp.Rational(1, 3), sp.Rational(4, 5)):
            point = {density.x: x, density.t: t}
            assert abs(sp.N((density.expr - product).subs(point), 30)) < sp.Float("1e-25")


@pytest.mark.parametrize(
    ("name", "density"), zoo.NO_CLOSED_FORM, ids=lambda value: value if isinstance(value, str) else ""
)
def test_exponential_family_without_closed_form(name, density):
    derivation = derive(Density(**density), budget=BUDGET)
    assert derivation.family is not None
    assert not isinstance(derivation.family.law, CLOSED_FORMS)
    assert derivation.step("numerical look") is None
    for step in ("support", "nonnegativity", "factorisation", "monotonicity"):
        assert derivation.step(step).grade is Grade.PROVED, str(derivation)
    assert "neither quadratic nor a cube" in derivation.step("law").statement


@pytest.mark.parametrize("refused", zoo.REFUSED, ids=lambda refused: refused.name)
def test_refused_with_a_witness(refused):
    derivation = derive(Density(**refused.density), budget=BUDGET)
    failed = next(step for step in derivation.steps if step.grade is Grade.REFUTED)
    assert failed.name == refused.step
    assert failed.witness
    assert derivation.grade is Grade.REFUTED
    assert derivation.family is None


def test_kernel_of_a_binomial_is_named():
    density = Density(
        kernel="binomial(10,x)*t**x", variable="x", support="integers 0..10", parameter="t", space="t > 0"
    )
    derivation = derive(density)
    assert derivation.grade is Grade.PROVED
    assert derivation.law == "binomial(trials = 10, probability = t/(t + 1))"


def test_table_of_weights():
    density = Density(weights=["1", "3", "0", "1"], variable="x", support="integers 0..3", parameter="t", space="t > 0")
    derivation = derive(density)
    assert derivation.grade is Grade.PROVED
    assert (derivation.statistic, derivation.natural_parameter) == (density.x, sp.log(density.t))
    with balls(100) as A:
        law = derivation.family.at(Fraction(2), 1)
        masses = [to_enclosure(law.density(A, v)) for v in range(4)]
    for mass, wanted in zip(masses, (1, 6, 0, 8), strict=True):
        assert mass.contains(Fraction(wanted, 15))


def test_law_of_the_sum_at_a_value():
    law = _derived("Pareto").family.at(Fraction(3, 2), 8)
    assert (law.shape, law.rate) == (Fraction(8), Fraction(3, 2))


def test_hyperbolic_secant_is_recognised():
    """Morris 1982: V(m) = 1 + m**2 belongs to the density exp(t x) cos(t) sech(pi x/2)/2."""
    density = Density(
        "exp(t*x)*cos(t)/(2*cosh(pi*x/2))",
        variable="x",
        support="reals",
        parameter="t",
        space="-pi/2 < t < pi/2",
    )
    step = derive(density, budget=BUDGET).step("law")
    assert "generalised hyperbolic secant law with r = 1" in step.statement


def test_a_step_whose_budget_is_spent_is_undecided_and_the_rest_goes_on():
    density = Density(
        "exp(-lam)*lam**x/factorial(x)",
        variable="x",
        support="integers >= 0",
        parameter="lam",
        space="lam > 0",
    )
    derivation = derive(density, budget=0.0)
    assert derivation.grade is Grade.UNDECIDED
    assert "budget of 0 s" in derivation.steps[0].reason


def test_a_number_that_cannot_be_used_leaves_its_step_open():
    """The variance at 0+ is a complex infinity to SymPy: no complaint about the user's input."""
    density = Density(
        "exp(-t*x**3 - sin(x)**2)/(1+t)", variable="x", support="reals > 0", parameter="t", space="t > 0"
    )
    found = derive(density)
    law = next(step for step in found.steps if step.name == "law")
    assert law.grade is Grade.UNDECIDED
    assert "cannot be used" in law.reason
