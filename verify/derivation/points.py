"""Exact points of a support and of a parameter space, plain ones first, for witnesses and looks."""

from __future__ import annotations

from itertools import islice

import sympy as sp
from sympy import Expr

from verify.derivation.positivity import Domain, points_inside
from verify.problem.density import Density
from verify.problem.numbers import as_expr
from verify.problem.support import Support


def support_points(support: Support, count: int = 6) -> list[Expr]:
    """Return up to so many points of a support whose ends are numbers.

    Examples
    --------
    >>> from verify.problem.support import Support
    >>> support_points(Support("integers", sp.Integer(1), sp.Integer(3), True, True, "integers 1..3"))
    [1, 2, 3]
    """
    if support.kind == "reals":
        return list(islice(points_inside((support.lower, support.upper)), count))
    if support.lower.is_finite:
        points = (support.lower + k for k in range(count))
        return [point for point in points if bool(point <= support.upper)]
    if support.upper.is_finite:
        return [support.upper - k for k in range(count)]
    return [sp.Integer((k + 1) // 2 * (-1) ** k) for k in range(count)]


def parameter_points(density: Density, limits: tuple[Expr, ...] = (), count: int = 6) -> list[Expr]:
    """Return the limits of the hypothesis and some plain points of the parameter space."""
    space = density.parsed_space
    plain = islice(points_inside((space.lower, space.upper)), count)
    return list(dict.fromkeys([*limits, *plain]))


def domain_of(density: Density) -> Domain:
    """Return where x and t live, as open intervals (an integer variable keeps what its symbol assumes)."""
    space, support = density.parsed_space, density.parsed_support
    ranges = {density.t: (space.lower, space.upper)}
    if support.kind == "reals" and not (support.lower.has(density.t) or support.upper.has(density.t)):
        ranges[density.x] = (support.lower, support.upper)
    return Domain(ranges)


def mass_at(density: Density, point: Expr) -> Expr:
    """Return the density or kernel at one point of the support, looked up where there is a table."""
    if density.table is None:
        return density.expr.subs(density.x, point)
    weight = density.table[int(point - density.parsed_support.lower)]
    return as_expr(weight) * density.t**point
