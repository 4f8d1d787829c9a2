"""The step ``law``: which law T has, read off its variance function."""

from __future__ import annotations

from sympy import Expr, Sum, Symbol

from verify.derivation.factorisation import Factorisation
from verify.derivation.family import LawFamily
from verify.derivation.general import general_family
from verify.derivation.kernel import kernel_certainly_another, written_out
from verify.derivation.law_of_variance import name_law
from verify.derivation.ledger import LAW, Grade, Step
from verify.derivation.points import domain_of, parameter_points
from verify.derivation.variance_function import Cube, Quadratic, variance_function
from verify.derivation.variance_numbers import certainly_another
from verify.problem.density import Density

SECANT = "generalised hyperbolic secant"

LONGEST_KERNEL = 1000
"""Kernels on more points go straight to the law that is built from their weights."""


def law_step(density: Density, found: Factorisation, leaning: Grade) -> tuple[Step, LawFamily | None]:
    """Return the step ``law`` and the family in closed form, when there is one.

    Parameters
    ----------
    found : Factorisation
        T, Q and A.
    leaning : Grade
        The weakest grade of the steps on which this one leans.
    """
    t, points = density.t, parameter_points(density)
    if density.is_kernel and len(density.parsed_support.points) > LONGEST_KERNEL:
        statement = "the sum of so long a kernel is not searched for a law in closed form"
        return general_law(density, found, Step(LAW, leaning, statement))
    if _certainly_another(density, found, points[1:4]):
        statement = "the variance function of T is neither quadratic nor a cube: no law in closed form is named"
        return general_law(density, found, Step(LAW, leaning, statement, "certain in ball arithmetic; Morris 1982"))
    variance = variance_function(_written_out(density, found), found.natural_parameter, t)
    if variance is None:
        statement = "no quadratic or cubic variance function of T was found"
        return general_law(density, found, Step(LAW, leaning, statement))
    named = name_law(variance, t, domain_of(density))
    shown = f"variance function V(m) = {_formula(variance)}"
    if named.family is None and named.word == SECANT and isinstance(variance, Quadratic):
        statement = f"T has a {SECANT} law with r = {1 / variance.v2}"
        return general_law(density, found, Step(LAW, leaning, statement, f"{shown}; Morris 1982"))
    if named.family is None:
        return general_law(density, found, Step(LAW, leaning, "T has no named law", f"{shown}; {named.word}"))
    source = "Letac and Mora 1990" if isinstance(variance, Cube) else "Morris 1982"
    law = named.family.text()
    statement = f"T = {law}" if "Y of law" in law else f"T has the law {law}"
    return Step(LAW, leaning, statement, f"{shown}, which determines the family: {source}"), named.family


def _certainly_another(density: Density, found: Factorisation, points: list[Expr]) -> bool:
    if density.is_kernel:
        return kernel_certainly_another(density, found.statistic, points)
    return certainly_another(found.log_normaliser, found.natural_parameter, density.t, points)


def _written_out(density: Density, found: Factorisation) -> Expr:
    """The log normaliser, with the sum of a kernel written out."""
    sums = found.log_normaliser.atoms(Sum)
    return found.log_normaliser.xreplace({total: written_out(density) for total in sums})


def general_law(density: Density, found: Factorisation, step: Step) -> tuple[Step, LawFamily | None]:
    """Return the step and the family of a law without closed form, built from the density itself.

    Parameters
    ----------
    step : Step
        What is known of the law so far; its grade is that of the steps on which the new law leans.
    """
    built, family = general_family(density, found, step.grade)
    reason = f"{step.reason}; {built.reason}" if step.reason else built.reason
    return Step(LAW, built.grade, f"{step.statement}; {built.statement}", reason), family


def _formula(variance: Quadratic | Cube) -> Expr:
    m = Symbol("m")
    if isinstance(variance, Cube):
        return variance.c * (m - variance.root) ** 3
    return variance.v0 + variance.v1 * m + variance.v2 * m**2
