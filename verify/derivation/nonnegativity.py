"""Is the density non-negative on its support, for every parameter value?"""

from __future__ import annotations

import sympy as sp
from sympy import Expr

from verify.derivation.certain import sign_at, value_text
from verify.derivation.ledger import NONNEGATIVITY, Grade, Step
from verify.derivation.points import domain_of, mass_at, parameter_points, support_points
from verify.derivation.positivity import Domain
from verify.derivation.signs import factors, sign_of
from verify.problem.density import Density

LARGEST_LIST = 300
"""Finite supports up to this size are gone through point by point."""


def nonnegativity_step(density: Density) -> Step:
    """Return the step ``nonnegativity``: proved, refuted with a point (x, t), or what was looked at."""
    expr, domain = _from_lower_end(density), domain_of(density)
    if all(_nonnegative(factor, domain) for factor in factors(expr)) or sign_of(expr, domain) == 1:
        return _proved("every factor is non-negative on the support and the parameter space")
    xs, ts = support_points(density.parsed_support, 12), parameter_points(density)
    for x in xs:
        for t in ts:
            point = {density.x: x, density.t: t}
            if sign_at(density.expr, point) < 0:
                witness = f"f({x}; {t}) = {value_text(density.expr, point)}"
                return Step(NONNEGATIVITY, Grade.REFUTED, "the density is negative somewhere", "", witness)
    if _point_by_point(density, domain):
        return _proved("shown for each point of the support in turn")
    return Step(
        NONNEGATIVITY,
        Grade.CHECKED,
        f"the density was not negative at any of {len(xs) * len(ts)} points (x, {density.t})",
        "no symbolic proof of its sign was found",
    )


def _from_lower_end(density: Density) -> Expr:
    """The density with x = lower + k, k = 0, 1, 2, ..., on integers that have a lower end other than 0."""
    support = density.parsed_support
    if support.kind != "integers" or not support.lower.is_Integer or support.lower == 0:
        return density.expr
    return density.expr.xreplace({density.x: support.lower + sp.Symbol("k", integer=True, nonnegative=True)})


def _proved(reason: str) -> Step:
    return Step(NONNEGATIVITY, Grade.PROVED, "the density is non-negative", reason)


def _nonnegative(factor: Expr, domain: Domain) -> bool:
    if domain.positive(factor) or factor.is_nonnegative:
        return True
    if isinstance(factor, sp.Pow):
        return bool(factor.exp.is_even) or _nonnegative(factor.base, domain)
    return False


def _point_by_point(density: Density, domain: Domain) -> bool:
    support = density.parsed_support
    if not support.is_finite or len(support.points) > LARGEST_LIST:
        return False
    values = (mass_at(density, sp.Integer(k)) for k in support.points)
    return all(value == 0 or sign_of(value, domain) == 1 for value in values)
