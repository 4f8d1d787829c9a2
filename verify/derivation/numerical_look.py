"""An independent look: the convolution of the density itself against the named law, at a few points."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction
from typing import Any

import sympy as sp
from sympy import Expr

from verify.arithmetic.ball import balls
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.high import high
from verify.derivation.branches import inverse_branches
from verify.derivation.certain import sign_of_ball
from verify.derivation.family import LawFamily
from verify.derivation.ledger import NUMERICAL_LOOK, Grade, Step
from verify.derivation.points import mass_at, support_points
from verify.derivation.quadrature import integral_below, integral_from_zero
from verify.laws.base import Law
from verify.problem.density import Density
from verify.problem.numbers import as_exact, as_expr

DIGITS = 30
"""Decimal digits up to which agreement is counted."""

WORKING_DIGITS = 80
"""Decimal digits of the quadrature: its first nodes lie 1e-60 from the end, where a branch may cancel."""

ENOUGH = 10
"""Digits that must agree."""

POINTS = 24
"""Support points that enter a lattice convolution."""

ALL_POINTS = 100_000
"""A kernel needs all of its points for its normaliser."""


def numerical_look(density: Density, statistic: Expr, family: LawFamily, at: Expr) -> Step:
    """Return the step ``numerical look`` at one parameter value.

    Parameters
    ----------
    density : Density
        The density f of one observation.
    statistic : Expr
        T(x).
    family : LawFamily
        The law that was named.
    at : Expr
        An exact parameter value.
    """
    value = as_exact(at)
    look = _lattice if family.law.lattice else _continuous
    found = look(density, statistic, family, at, value)
    where = f"{density.t} = {at}"
    if found is None:
        return Step(
            NUMERICAL_LOOK,
            Grade.UNDECIDED,
            f"no look at the law at {where} was possible",
            "T has no simple inverse",
        )
    digits, number, place = found
    law = family.at(value, number)
    if digits < 0:
        statement = f"the convolution of f differs from {law} at {where}"
        return Step(NUMERICAL_LOOK, Grade.REFUTED, statement, "finite sums in ball arithmetic", place)
    if digits >= ENOUGH:
        statement = f"the {number}-fold convolution of f agrees with {law} to {digits} digits at {where}"
        return Step(NUMERICAL_LOOK, Grade.CHECKED, statement, place)
    statement = f"the {number}-fold convolution of f agrees with {law} to {digits} digits only at {where}"
    return Step(NUMERICAL_LOOK, Grade.UNDECIDED, statement, place)


def _agreement(difference: Any, size: Any) -> int:
    """Decimal digits to which two numbers agree, from balls or mpmath numbers; 0 when they do not."""
    for digits in range(DIGITS, 0, -1):
        if abs(difference) * 10**digits < abs(size):
            return digits
    return 0


def _lattice(density: Density, statistic: Expr, family: LawFamily, at: Expr, value: Any) -> tuple[int, int, str] | None:
    """Finite sums in ball arithmetic: every way to write v as a sum of two or three values of Y."""
    xs = support_points(density.parsed_support, ALL_POINTS if density.is_kernel else POINTS)
    places = [(statistic.subs(density.x, x) - as_expr(family.shift)) / as_expr(family.scale) for x in xs]
    if not all(place.is_Integer for place in places):
        return None
    masses: dict[int, Any] = {}
    with balls(160) as A:
        parameter = A.real(at)
        total = A.real(0)
        for x, place in zip(xs, places, strict=True):
            mass = evaluate(mass_at(density, x), A, {density.t.name: parameter})
            masses[int(place)] = masses.get(int(place), A.real(0)) + mass
            total = total + mass
        if density.is_kernel:
            masses = {place: masses[place] / total for place in sorted(masses)[:POINTS]}
        worst, table = DIGITS, dict(masses)
        for number in (2, 3):
            table = _convolved(table, masses, A)
            law = family.at(value, number)
            for v in sorted(table)[:6]:
                mass = law.density(A, v)
                if sign_of_ball(table[v] - mass):
                    return -1, number, f"the mass at {v} on the scale of Y, n = {number}"
                worst = min(worst, _agreement(table[v] - mass, mass))
    return (
        worst,
        3,
        f"in ball arithmetic, at V = {', '.join(map(str, sorted(table)[:6]))} on the scale of Y, n = 2 and 3",
    )


def _convolved(left: dict[int, Any], right: dict[int, Any], A: Any) -> dict[int, Any]:
    """Convolve two tables of masses, keeping the places that the cut at POINTS does not touch."""
    result: dict[int, Any] = {}
    for i, p in left.items():
        for j, q in right.items():
            result[i + j] = result.get(i + j, A.real(0)) + p * q
    return {v: result[v] for v in sorted(result)[:POINTS]}


def _continuous(
    density: Density, statistic: Expr, family: LawFamily, at: Expr, value: Any
) -> tuple[int, int, str] | None:
    """The integral of g(y) g(v - y) by quadrature, with g the density of Y made from f by its branches."""
    one, two = family.at(value, 1), family.at(value, 2)
    A = high(WORKING_DIGITS + _cancelled_digits(two))
    g = _density_of_y(density, statistic, family, at, A)
    if g is None:
        return None
    centre, spread = two.expectation(A), two.spread(A)
    worst, shown = DIGITS, []
    for share in (Fraction(-1, 2), Fraction(3, 4)):
        v = centre + A.real(share) * spread
        if one.support[0] is None:
            found = 2 * spread * integral_below(A, _scaled_product(g, v / 2, spread), A.real(0))
        else:
            v = centre * A.exp(A.real(share))
            found = 2 * integral_from_zero(A, _product(g, v), v / 2)
        wanted = two.density(A, v)
        worst = min(worst, _agreement(found - wanted, wanted))
        shown.append(str(v)[:8])
    return worst, 2, f"by double-exponential quadrature at V = {', '.join(shown)} on the scale of Y, n = 2"


def _cancelled_digits(law: Law) -> int:
    """Decimal digits that a law loses which is narrow for the size of its mean."""
    A = high(WORKING_DIGITS)
    narrowness = abs(law.expectation(A)) / law.spread(A)
    return int(A.log(narrowness + 1) / A.log(A.real(10))) + 1


def _product(g: Callable[[Any], Any], v: Any) -> Callable[[Any], Any]:
    return lambda y: g(y) * g(v - y)


def _scaled_product(g: Callable[[Any], Any], middle: Any, unit: Any) -> Callable[[Any], Any]:
    return lambda z: g(middle + unit * z) * g(middle - unit * z)


def _density_of_y(
    density: Density, statistic: Expr, family: LawFamily, at: Expr, A: Any
) -> Callable[[Any], Any] | None:
    """Sum of f(x) |dx/dy| over the branches x(y) that lie in the support."""
    y = sp.Symbol("y", positive=True) if family.law.support[0] is not None else sp.Symbol("y", real=True)
    branches = inverse_branches(statistic, density.x, as_expr(family.scale) * y + as_expr(family.shift))
    if branches is None:
        return None
    f = density.expr.subs(density.t, at)
    pieces = [(branch, sp.Abs(sp.diff(branch, y))) for branch in branches]
    support = density.parsed_support
    ends = [None if end.is_infinite else A.real(end) for end in (support.lower, support.upper)]

    def g(number: Any) -> Any:
        total = A.real(0)
        for branch, slope in pieces:
            x = evaluate(branch, A, {"y": number})
            if (ends[0] is None or x > ends[0]) and (ends[1] is None or x < ends[1]):
                mass = evaluate(f, A, {density.x.name: x})
                total = total + mass * evaluate(slope, A, {"y": number})
        return total

    return g
