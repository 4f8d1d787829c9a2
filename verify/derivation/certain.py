"""What is certain about a ball, and how to show it."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from sympy import Expr, Symbol

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.evaluate import evaluate

PRECISIONS = (64, 128, 256, 512)
"""Bits tried one after the other until a sign is certain."""


def sign_of_ball(ball: Any) -> int:
    """Return 1 or -1 when the sign is certain, else 0 (the ball touches zero, or is not a number).

    In Arb a comparison is True only when it holds for every number of the ball.
    """
    return 1 if ball > 0 else -1 if ball < 0 else 0


def sign_at(expr: Expr, point: Mapping[Symbol, Expr]) -> int:
    """Return the certain sign of an expression at an exact point, else 0.

    Examples
    --------
    >>> import sympy as sp
    >>> t = sp.Symbol("t", real=True)
    >>> sign_at(t**2 - 2, {t: sp.Rational(7, 5)})
    -1
    """
    for precision in PRECISIONS:
        with balls(precision) as A:
            values = {symbol.name: A.real(value) for symbol, value in point.items()}
            sign = sign_of_ball(evaluate(expr, A, values))
        if sign:
            return sign
    return 0


def value_text(expr: Expr, point: Mapping[Symbol, Expr], digits: int = 8) -> str:
    """Return the guaranteed leading digits of an expression at an exact point.

    Examples
    --------
    >>> import sympy as sp
    >>> t = sp.Symbol("t", positive=True)
    >>> value_text(sp.sqrt(t), {t: sp.Integer(2)}, 6)
    '1.41421'
    """
    with balls(128) as A:
        ball = evaluate(expr, A, {symbol.name: A.real(value) for symbol, value in point.items()})
        return to_enclosure(ball).text(digits)
