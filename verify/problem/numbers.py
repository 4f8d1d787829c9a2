"""Exact numbers: a Fraction where the number is rational, a SymPy number where it is not. Never a float."""

from __future__ import annotations

import re
from decimal import Decimal
from fractions import Fraction
from typing import TypeAlias

import sympy

from verify.errors import InputError
from verify.problem.formula import formula_text, parse_formula
from verify.problem.order import find_rational
from verify.problem.scan import NUMBER, check_literal, shorten
from verify.problem.work import bounded_work

Exact: TypeAlias = Fraction | sympy.Expr
"""A real number held exactly. Rational numbers are always a Fraction."""

_RIGHT = 'write it as text, e.g. "0.05", "1/3", "sqrt(2)" or "log(3)"'
_PLAIN = re.compile(rf"([+-]?)({NUMBER.pattern})(?:/({NUMBER.pattern}))?")


def exact(value: str | int | Fraction | Decimal | sympy.Expr, key: str = "") -> Exact:
    """Return the exact real number that a text or an exact Python number stands for.

    Parameters
    ----------
    value : str, int, Fraction, Decimal or SymPy number
        Text may use decimals, fractions, ``pi`` and the functions of a formula. A decimal text is exact:
        "0.05" is 1/20.
    key : str
        Where it came from, for messages.

    Raises
    ------
    InputError
        For a float (0.05 is not 1/20), a text that is no number, an infinite or complex number.

    Examples
    --------
    >>> exact("0.05"), exact("sqrt(2)"), exact("-1e-3")
    (Fraction(1, 20), sqrt(2), Fraction(-1, 1000))
    """
    if isinstance(value, str):
        return _from_text(value, key)
    if isinstance(value, bool):
        raise InputError(f"{value} is not a number", _RIGHT, key=key)
    if isinstance(value, float):
        raise InputError(
            f"the float {value!r} is a binary number, not the decimal it prints as", _RIGHT, key=key
        )
    if isinstance(value, int | Fraction):
        return Fraction(value)
    if isinstance(value, Decimal):
        return _from_text(str(value), key)
    if isinstance(value, sympy.Expr):
        return as_exact(value, key)
    raise InputError(f"{type(value).__name__} is not a number", _RIGHT, key=key)


def _from_text(text: str, key: str) -> Exact:
    plain = _PLAIN.fullmatch(text.strip()) if len(text) < 10_000 else None
    if plain is None:
        return as_exact(parse_formula(text, {}, key), key)
    sign, top, bottom = plain.groups()
    for token in (top, bottom or "1"):
        check_literal(token, key)
    below = Fraction(bottom or 1)
    if not below:
        raise InputError("division by zero", _RIGHT, key=key)
    return (-1 if sign == "-" else 1) * Fraction(top) / below


def as_exact(expr: sympy.Expr | int, key: str = "") -> Exact:
    """Bring a SymPy number into the exact form: a rational becomes a Fraction, an irrational one stays.

    Raises
    ------
    InputError
        When the expression has symbols or floats in it, or is not real and finite.

    Examples
    --------
    >>> as_exact(sympy.Rational(1, 3)), as_exact(sympy.sqrt(8))
    (Fraction(1, 3), 2*sqrt(2))
    """
    expr = sympy.Integer(expr) if isinstance(expr, int) else expr
    if isinstance(expr, sympy.Rational):
        return Fraction(int(expr.p), int(expr.q))
    if expr.free_symbols or not expr.is_number:
        raise InputError(f"{expr} is not a number", _RIGHT, key=key)
    if expr.has(sympy.Float):
        raise InputError(f"{expr} holds a float, which is not the decimal it prints as", _RIGHT, key=key)
    with bounded_work(InputError(f"{shorten(str(expr))} is too complicated", _RIGHT, key=key)):
        return _irrational(expr, key)


def _irrational(expr: sympy.Expr, key: str) -> Exact:
    if expr.is_real is False or expr.is_finite is False or expr is sympy.nan:
        raise InputError(f"{expr} is not a real, finite number", _RIGHT, key=key)
    found = find_rational(expr)
    return expr if found is None else found


def as_expr(value: Exact | int) -> sympy.Expr:
    """Return an exact number as a SymPy expression.

    Examples
    --------
    >>> as_expr(Fraction(1, 20))
    1/20
    """
    if isinstance(value, Fraction):
        return sympy.Rational(value.numerator, value.denominator)
    return sympy.Integer(value) if isinstance(value, int) else value


def exact_text(value: Exact | int) -> str:
    """Write an exact number as text that ``exact`` reads back to the same number.

    Examples
    --------
    >>> exact_text(Fraction(1, 20)), exact_text(sympy.exp(1))
    ('1/20', 'exp(1)')
    """
    return formula_text(value) if isinstance(value, sympy.Expr) else str(value)
