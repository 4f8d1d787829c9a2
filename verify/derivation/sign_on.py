"""The sign of an expression inside an interval, by algebra or by balls over the whole of it.

Where the expression vanishes at an end, its derivative must have one sign near that end: it then moves away from 0.

Source: R. E. Moore, R. B. Kearfott and M. J. Cloud, *Introduction to Interval Analysis* (2009), section 5.2.
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import sympy as sp
from sympy import Expr, Symbol

from verify.arithmetic.ball import balls
from verify.arithmetic.evaluate import evaluate
from verify.derivation.positivity import Domain
from verify.derivation.zero import is_zero
from verify.problem.numbers import as_exact

NEAR_END = Fraction(1, 64)
"""Share of the interval that is near an end."""

DEEPEST = 14
"""How often an interval is halved."""


def sign_on(expr: Expr, x: Symbol, left: Expr, right: Expr) -> int:
    """Return 1 or -1 when the expression is proved to have that sign on the open interval, else 0.

    Examples
    --------
    >>> x = Symbol("x", real=True)
    >>> sign_on(x - sp.sqrt(2), x, sp.sqrt(2), sp.Integer(2)), sign_on(x, x, sp.Integer(-1), sp.oo)
    (1, 0)
    """
    return Domain({x: (left, right)}).sign(expr) or _by_balls(expr, x, left, right)


def _by_balls(expr: Expr, x: Symbol, left: Expr, right: Expr) -> int:
    """Return the sign on a finite interval when balls prove it, else 0."""
    if left.is_infinite or right.is_infinite:
        return 0
    with balls(64) as A:
        low, high = A.real(as_exact(left)), A.real(as_exact(right))
        width = high - low
        inner = (low + width * A.real(NEAR_END), high - width * A.real(NEAR_END))
        sign = _one_sign(expr, x, A, *inner, DEEPEST)
        if not sign:
            return 0
        change = sp.diff(expr, x)
        for end, near, towards in ((left, (low, inner[0]), 1), (right, (inner[1], high), -1)):
            if _one_sign(expr, x, A, *near, DEEPEST) == sign:
                continue
            if not is_zero(expr.subs(x, end)) or _one_sign(change, x, A, *near, DEEPEST) != sign * towards:
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
