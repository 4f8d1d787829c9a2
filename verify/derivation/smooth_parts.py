"""Cuts an interval where an absolute value in a statistic turns, so that what is left on each part is smooth.

On a part where u has one sign, abs(u) is u or -u, and sign(u) is 1 or -1: derivatives, inverses and enclosures then
meet no function that is not smooth.

Source: E. L. Lehmann and J. P. Romano, *Testing Statistical Hypotheses* (3rd ed., 2005), section 2.7: the statistic is
determined but for null sets, so the points where u = 0 may be left out.
"""

from __future__ import annotations

from itertools import pairwise

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.positivity import Domain
from verify.derivation.sign_on import sign_on

BROKEN = (sp.Abs, sp.sign)

Part = tuple[Expr, Expr, Expr]
"""Low end, high end, and the function as it is in between."""


def smooth_parts(statistic: Expr, x: Symbol, low: Expr, high: Expr) -> list[Part] | str:
    """Return the parts in order, or what could not be shown.

    Examples
    --------
    >>> x = Symbol("x", real=True)
    >>> smooth_parts(sp.Abs(x - 1) ** 3, x, sp.Integer(0), sp.Integer(2))
    [(0, 1, -(x - 1)**3), (1, 2, (x - 1)**3)]
    """
    broken = [node for node in statistic.atoms(*BROKEN) if node.has(x) and not node.args[0].has(*BROKEN)]
    if not broken:
        return [(low, high, statistic)]
    node = min(broken, key=sp.default_sort_key)
    (inside,) = node.args
    turning = zeros_between(inside, x, low, high)
    if turning is None:
        return f"where {inside} changes its sign was not found"
    parts = []
    for left, right in pairwise([low, *turning, high]):
        sign = sign_on(inside, x, left, right)
        if not sign:
            return f"that {inside} has one sign on ({left}, {right}) was not shown"
        plain = sp.Integer(sign) if isinstance(node, sp.sign) else sp.expand(sign * inside)
        further = smooth_parts(_as_power(statistic.xreplace({node: plain}), x), x, left, right)
        if isinstance(further, str):
            return further
        parts += further
    return parts


def _as_power(expr: Expr, x: Symbol) -> Expr:
    """A polynomial that is a multiple of one power, written so: SymPy keeps abs(u)**3 as u**2 abs(u)."""
    if not expr.is_polynomial(x):
        return expr
    factored = sp.factor(expr)
    return factored if factored.as_independent(x, as_Add=False)[1].is_Pow else expr


def smooth_slope(statistic: Expr, x: Symbol) -> Expr:
    """Return T' where T is smooth: what a derivative holds at the turning points alone is left out.

    Examples
    --------
    >>> x = Symbol("x", real=True)
    >>> smooth_slope(x * sp.sign(x), x)
    sign(x)
    """
    slope = sp.diff(statistic, x)
    return slope.replace(sp.DiracDelta, lambda *_: sp.S.Zero)


def zeros_between(expr: Expr, x: Symbol, low: Expr, high: Expr) -> list[Expr] | None:
    """Return the zeros of an expression inside an interval, in order; None where they are not all found.

    Examples
    --------
    >>> x = Symbol("x", real=True)
    >>> zeros_between(x**2 - 2, x, sp.Integer(0), sp.oo)
    [sqrt(2)]
    """
    if not expr.has(x) or Domain({x: (low, high)}).sign(expr):
        return []
    plain = sp.Dummy("x", real=True)
    try:
        found = sp.solveset(expr.subs(x, plain), plain, sp.Interval.open(low, high))
    except (NotImplementedError, ValueError, TypeError):
        return None
    if found == sp.S.EmptySet:
        return []
    if not isinstance(found, sp.FiniteSet) or not all(point.is_number for point in found):
        return None
    return sorted(found, key=lambda point: sp.N(point, 30))
