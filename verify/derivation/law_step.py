"""The step ``law``: which law T has, read off its variance function."""

from __future__ import annotations

from sympy import Expr, Symbol

from verify.derivation.factorisation import Factorisation
from verify.derivation.family import LawFamily
from verify.derivation.law_of_variance import name_law
from verify.derivation.ledger import Grade, Step
from verify.derivation.points import domain_of, parameter_points
from verify.derivation.variance_function import Cube, Quadratic, variance_function
from verify.problem.density import Density

SECANT = "generalised hyperbolic secant"


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
    variance = variance_function(found.log_normaliser, found.natural_parameter, t, tuple(points[1:4]))
    if variance is None:
        statement = "the variance function of T is not quadratic or a cube, so that no law in closed form is named"
        return Step("law", leaning, statement, "Morris 1982; Letac and Mora 1990"), None
    named = name_law(variance, t, domain_of(density))
    shown = f"variance function V(m) = {_formula(variance)}"
    if named.family is None and named.word == SECANT:
        return Step("law", leaning, f"T has a {SECANT} law with r = {1 / variance.v2}", f"{shown}; Morris 1982"), None
    if named.family is None:
        return Step("law", Grade.UNDECIDED, "the law of T stayed open", f"{shown}; {named.word}"), None
    source = "Letac and Mora 1990" if isinstance(variance, Cube) else "Morris 1982"
    law = named.family.text()
    statement = f"T = {law}" if "Y of law" in law else f"T has the law {law}"
    return Step("law", leaning, statement, f"{shown}, which determines the family: {source}"), named.family


def _formula(variance: Quadratic | Cube) -> Expr:
    m = Symbol("m")
    if isinstance(variance, Cube):
        return variance.c * (m - variance.root) ** 3
    return variance.v0 + variance.v1 * m + variance.v2 * m**2
