"""Cuts a support into pieces on which a statistic is strictly monotone, each with its inverse.

A piece is accepted when the sign of T' is proved on it: by algebra, or by balls over the whole piece, where
T' vanishes at an end with T'' of one sign near it. An inverse g is accepted when T(g(v)) = v identically and
g meets the piece at one point: being continuous, it then stays in it.

Source: R. E. Moore, R. B. Kearfott and M. J. Cloud, *Introduction to Interval Analysis* (2009), section 5.2.
"""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise
from typing import Any

import sympy as sp
from sympy import Expr, Symbol

from verify.arithmetic.ball import balls
from verify.arithmetic.evaluate import evaluate
from verify.derivation.branches import inverse_branches
from verify.derivation.positivity import Domain
from verify.derivation.zero import is_zero
from verify.laws.shape import Piece
from verify.problem.numbers import as_exact

V = Symbol("v", real=True)
NEAR_END = Fraction(1, 64)
DEEPEST = 14


def monotone_pieces(statistic: Expr, x: Symbol, low: Expr, high: Expr) -> tuple[Piece, ...] | str:
    """Return the pieces in order, or what could not be shown.

    Examples
    --------
    >>> x = Symbol("x", real=True)
    >>> [(p.low, p.high, p.rising, p.inverse) for p in monotone_pieces(sp.cos(x), x, -sp.pi, sp.pi)]
    [(-pi, Fraction(0, 1), True, -acos(v)), (Fraction(0, 1), pi, False, acos(v))]
    """
    turning = _turning_points(statistic, x, low, high)
    if turning is None:
        return f"the turning points of T = {statistic} were not found"
    ends = [low, *turning, high]
    pieces = []
    for left, right in pairwise(ends):
        piece = _piece(statistic, x, left, right)
        if isinstance(piece, str):
            return piece
        pieces.append(piece)
    return tuple(pieces)


def _turning_points(statistic: Expr, x: Symbol, low: Expr, high: Expr) -> list[Expr] | None:
    slope = sp.diff(statistic, x)
    if not slope.has(x) or Domain({x: (low, high)}).sign(slope):
        return []
    plain = sp.Dummy("x", real=True)
    try:
        found = sp.solveset(slope.subs(x, plain), plain, sp.Interval.open(low, high))
    except (NotImplementedError, ValueError, TypeError):
        return None
    if found == sp.S.EmptySet:
        return []
    if not isinstance(found, sp.FiniteSet) or not all(point.is_number for point in found):
        return None
    return sorted(found, key=lambda point: sp.N(point, 30))


def _piece(statistic: Expr, x: Symbol, left: Expr, right: Expr) -> Piece | str:
    slope = sp.diff(statistic, x)
    sign = Domain({x: (left, right)}).sign(slope) or _sign_by_balls(slope, x, left, right)
    if not sign:
        return f"that T = {statistic} is monotone on ({left}, {right}) was not shown"
    at_left, at_right = (_limit(statistic, x, end, side) for end, side in ((left, "+"), (right, "-")))
    if at_left is None or at_right is None:
        return f"the limits of T = {statistic} at {left} and {right} were not found"
    positive = bool(at_left.is_extended_nonnegative and at_right.is_extended_nonnegative)
    inverse = inverse_on(statistic, x, left, right, positive=positive)
    if inverse is None:
        return f"no inverse of T = {statistic} on ({left}, {right}) was found"
    return Piece(_end(left), _end(right), _end(at_left), _end(at_right), sign > 0, inverse)


def _end(value: Expr) -> Any:
    return None if value.is_infinite else as_exact(value)


def _limit(statistic: Expr, x: Symbol, end: Expr, side: str) -> Expr | None:
    if end.is_finite:
        value = statistic.subs(x, end)
        if value.is_finite:
            return value
    try:
        value = sp.limit(statistic, x, end, side)
    except (NotImplementedError, ValueError):
        return None
    return value if value.is_number and value.is_extended_real else None


def _sign_by_balls(slope: Expr, x: Symbol, left: Expr, right: Expr) -> int:
    """Return the sign of T' on a finite interval when balls prove it, else 0."""
    if left.is_infinite or right.is_infinite:
        return 0
    with balls(64) as A:
        low, high = A.real(as_exact(left)), A.real(as_exact(right))
        width = high - low
        inner = (low + width * A.real(NEAR_END), high - width * A.real(NEAR_END))
        sign = _one_sign(slope, x, A, *inner, DEEPEST)
        if not sign:
            return 0
        curve = sp.diff(slope, x)
        for end, near, towards in ((left, (low, inner[0]), 1), (right, (inner[1], high), -1)):
            if _one_sign(slope, x, A, *near, DEEPEST) == sign:
                continue
            if not is_zero(slope.subs(x, end)) or _one_sign(curve, x, A, *near, DEEPEST) != sign * towards:
                return 0
    return sign


def _one_sign(expr: Expr, x: Symbol, A: Any, low: Any, high: Any, depth: int) -> int:
    value = evaluate(expr, A, {x.name: low.union(high)})
    if value > 0:
        return 1
    if value < 0:
        return -1
    if depth == 0:
        return 0
    middle = (low + high) / 2
    first = _one_sign(expr, x, A, low, middle, depth - 1)
    return first if first and first == _one_sign(expr, x, A, middle, high, depth - 1) else 0


def inverse_on(statistic: Expr, x: Symbol, left: Expr, right: Expr, *, positive: bool = False) -> Expr | None:
    """Return the inverse of a function that is monotone on an interval, in terms of ``V``; None where none is found.

    ``positive`` says that the function is positive inside the interval.

    Examples
    --------
    >>> x = Symbol("x", real=True)
    >>> inverse_on(sp.sqrt(x), x, sp.Integer(0), sp.Integer(1), positive=True)
    v**2
    """
    point, value = _inside(left, right), sp.Dummy("v", positive=True) if positive else V
    for candidate in _candidates(statistic, x):
        if not _meets(statistic, candidate, x, point):
            continue
        back = statistic.subs(x, candidate.subs(V, value))
        if is_zero(sp.simplify(back - value)):
            return candidate
    return None


def _candidates(statistic: Expr, x: Symbol) -> list[Expr]:
    found = inverse_branches(statistic, x, V) or _through_an_angle(statistic, x)
    if found is None:
        plain = sp.Dummy("x")
        try:
            found = sp.solve(statistic.subs(x, plain) - V, plain)
        except NotImplementedError:
            found = []
    mirrored = [-candidate for candidate in found]
    turned = [candidate + k * 2 * sp.pi for candidate in [*found, *mirrored] for k in (1, -1)]
    return [*found, *mirrored, *turned] if statistic.has(sp.sin, sp.cos) else found


def _through_an_angle(statistic: Expr, x: Symbol) -> list[Expr] | None:
    """Candidates where T depends on x through one sine, cosine or tangent."""
    nodes = [node for node in statistic.atoms(sp.sin, sp.cos, sp.tan) if node.has(x)]
    inside = sp.Dummy("w", real=True)
    outer = statistic.xreplace(dict.fromkeys(nodes, inside))
    if len(nodes) != 1 or outer.has(x):
        return None
    (node,) = nodes
    back = {sp.sin: sp.asin, sp.cos: sp.acos, sp.tan: sp.atan}[node.func]
    angles = [back(value) for value in inverse_branches(outer, inside, V) or ()]
    if node.func == sp.sin:
        angles += [sp.pi - angle for angle in angles]
    found = [inverse_branches(node.args[0], x, angle) for angle in angles]
    return None if not found or None in found else [branch for branches in found for branch in branches or ()]


def _meets(statistic: Expr, candidate: Expr, x: Symbol, point: Expr) -> bool:
    with balls(64) as A:
        there = A.real(as_exact(point))
        back = evaluate(candidate, A, {"v": evaluate(statistic, A, {x.name: there})})
        return bool(back.is_finite() and back.overlaps(there))


def _inside(left: Expr, right: Expr) -> Expr:
    if left.is_finite and right.is_finite:
        return sp.Rational(1, 3) * left + sp.Rational(2, 3) * right
    if left.is_finite:
        return left + sp.Rational(7, 5)
    return right - sp.Rational(7, 5) if right.is_finite else sp.Rational(7, 5)
