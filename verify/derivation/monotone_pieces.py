"""Cuts a support into pieces on which a statistic is strictly monotone, each with its inverse.

A piece is accepted when the sign of T' is proved on it: by algebra, or by balls over the whole piece, where
T' vanishes at an end with T'' of one sign near it. Where T holds an absolute value, it is cut at its turning points
first. An inverse g is accepted when T(g(v)) = v identically and
g meets the piece at one point: being continuous, it then stays in it.

Source: R. E. Moore, R. B. Kearfott and M. J. Cloud, *Introduction to Interval Analysis* (2009), section 5.2.
"""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import sympy as sp
from sympy import Expr, Symbol

from verify.arithmetic.ball import balls
from verify.arithmetic.evaluate import evaluate
from verify.derivation.branches import inverse_branches
from verify.derivation.sign_on import sign_on
from verify.derivation.smooth_parts import smooth_parts, zeros_between
from verify.derivation.zero import is_zero
from verify.errors import UnknownFunction
from verify.laws.shape import Piece
from verify.problem.numbers import as_exact

V = Symbol("v", real=True)


def monotone_pieces(statistic: Expr, x: Symbol, low: Expr, high: Expr) -> tuple[Piece, ...] | str:
    """Return the pieces in order, or what could not be shown.

    Examples
    --------
    >>> x = Symbol("x", real=True)
    >>> [(p.low, p.high, p.rising, p.inverse) for p in monotone_pieces(sp.cos(x), x, -sp.pi, sp.pi)]
    [(-pi, Fraction(0, 1), True, -acos(v)), (Fraction(0, 1), pi, False, acos(v))]
    """
    parts = smooth_parts(statistic, x, low, high)
    if isinstance(parts, str):
        return f"T = {statistic}: {parts}"
    pieces = []
    for left, right, smooth in parts:
        found = _pieces_of_smooth(smooth, x, left, right)
        if isinstance(found, str):
            return found
        pieces += found
    return tuple(pieces)


def _pieces_of_smooth(statistic: Expr, x: Symbol, low: Expr, high: Expr) -> list[Piece] | str:
    if not statistic.has(x):
        return f"T = {statistic} all over ({low}, {high}): a law with a density and an atom is not worked out here"
    slope = sp.diff(statistic, x)
    turning, poles = (zeros_between(part, x, low, high) for part in (slope, sp.fraction(sp.together(slope))[1]))
    if turning is None:
        return f"the turning points of T = {statistic} were not found"
    cuts = sorted({*turning, *(poles or ())}, key=lambda point: sp.N(point, 30))
    pieces = []
    for left, right in pairwise([low, *cuts, high]):
        piece = _piece(statistic, x, left, right)
        if isinstance(piece, str):
            return piece
        pieces.append(piece)
    return pieces


def _piece(statistic: Expr, x: Symbol, left: Expr, right: Expr) -> Piece | str:
    slope = sp.diff(statistic, x)
    sign = sign_on(slope, x, left, right)
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
    found = list(dict.fromkeys([*found, *map(_with_odd_roots_turned, found)]))
    mirrored = [-candidate for candidate in found]
    turned = [candidate + k * 2 * sp.pi for candidate in [*found, *mirrored] for k in (1, -1)]
    return [*found, *mirrored, *turned] if statistic.has(sp.sin, sp.cos) else found


def _with_odd_roots_turned(candidate: Expr) -> Expr:
    """The candidate with an odd root of w written as minus that of -w, for where w is negative."""
    return candidate.replace(
        lambda node: node.is_Pow and node.exp.is_Rational and node.exp.q > 1 and node.exp.q % 2,
        lambda node: (-1) ** node.exp.p * (-node.base) ** node.exp,
    )


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
        try:
            back = evaluate(candidate, A, {"v": evaluate(statistic, A, {x.name: there})})
        except UnknownFunction:  # such as the imaginary unit: no candidate then
            return False
        return bool(back.is_finite() and back.overlaps(there))


def _inside(left: Expr, right: Expr) -> Expr:
    if left.is_finite and right.is_finite:
        return sp.Rational(1, 3) * left + sp.Rational(2, 3) * right
    if left.is_finite:
        return left + sp.Rational(7, 5)
    return right - sp.Rational(7, 5) if right.is_finite else sp.Rational(7, 5)
