"""Numbers that tell quickly that a variance function is neither quadratic nor a cube, in ball arithmetic.

The derivatives of A and Q at a point give the first terms of their Taylor series; K1 = A'/Q', K2 = K1'/Q',
... are then truncated power series, and v2 and the cubic coefficient are numbers. Where they certainly
differ between two points, no algebra is needed to know that they are not constant.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import factorial
from typing import Any

import sympy as sp
from sympy import Expr, Symbol

from verify.arithmetic.ball import balls
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.taylor import taylor
from verify.derivation.certain import sign_of_ball
from verify.errors import SidecheckError

ORDER = 5
PRECISION = 256

Series = list[Any]


def certainly_another(log_normaliser: Expr, natural: Expr, t: Symbol, points: Sequence[Expr]) -> bool:
    """Tell whether the variance function is certainly neither quadratic nor c (m - b)**3.

    False says nothing: the function may be one that balls do not know.

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> points = [sp.Integer(1), sp.Integer(2), sp.Integer(3)]
    >>> certainly_another(sp.log(sp.exp(t) - 1), sp.log(t), t, points)
    True
    >>> certainly_another(t, sp.log(t), t, points)
    False
    """
    try:
        first = [_slopes(log_normaliser, t, points), _slopes(natural, t, points)]
        with balls(PRECISION):
            found = [_coefficients(*rows) for rows in zip(*first, strict=True)]
    except (SidecheckError, ArithmeticError):
        return False
    return all(any(sign_of_ball(row[k] - found[0][k]) for row in found[1:]) for k in (0, 1))


def _slopes(expr: Expr, t: Symbol, points: Sequence[Expr]) -> list[Series]:
    """The power series of the derivative at each point; the derivatives are written out where that is the only way."""
    try:
        return [_slope(taylor(expr, t.name, point, ORDER + 1, PRECISION)) for point in points]
    except SidecheckError:
        derivatives = []
    for _ in range(ORDER):
        expr = sp.diff(expr, t)
        derivatives.append(expr.replace(sp.Derivative, _known_derivative))
    with balls(PRECISION) as A:
        return [
            [evaluate(d, A, {t.name: A.real(point)}) / factorial(k) for k, d in enumerate(derivatives)]
            for point in points
        ]


def _known_derivative(function: Expr, variable: sp.Tuple) -> Expr:
    """Name the derivatives that balls know: those of the zeta function."""
    symbol, order = variable
    if isinstance(function, sp.zeta) and function.args == (symbol,):
        return sp.Function("zeta_derivative")(order, symbol)
    return sp.Derivative(function, variable)


def _coefficients(first: Series, slope: Series) -> tuple[Any, Any]:
    """Return v2 = V''/2 and the cubic coefficient V'''/6 at one point, from the series of A' and of Q'."""
    k1 = _quotient(first, slope)
    k2 = _quotient(_slope(k1), slope)
    v1 = _quotient(_quotient(_slope(k2), slope), k2)
    v2 = _quotient(_quotient(_slope(v1), slope), k2)
    v3 = _quotient(_quotient(_slope(v2), slope), k2)
    return v2[0] / 2, v3[0] / 6


def _slope(series: Series) -> Series:
    return [k * a for k, a in enumerate(series)][1:]


def _quotient(above: Series, below: Series) -> Series:
    """Quotient of two truncated power series."""
    result: Series = []
    for k in range(min(len(above), len(below))):
        rest = above[k]
        for j in range(k):
            rest = rest - result[j] * below[k - j]
        result.append(rest / below[0])
    return result
