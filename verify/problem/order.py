"""Order of exact numbers: below, equal or above, decided; never guessed from rounded digits.

Rationals are compared as such. For others the difference is evaluated with an error that
SymPy tracks, at rising precision;
two numbers are called equal only when a symbolic simplification brings their difference to 0.
"""

from __future__ import annotations

from fractions import Fraction

import sympy

from verify.errors import UndecidedError
from verify.problem.work import SECONDS, bounded_work

PRECISIONS = (30, 100, 400, 1600)
"""Decimal digits at which a difference is evaluated, one after the other."""


def compare(a: Fraction | sympy.Expr, b: Fraction | sympy.Expr) -> int:
    """Return -1, 0 or 1 as a is below, equal to or above b (infinite ends allowed).

    Raises
    ------
    UndecidedError
        When 1600 digits do not tell them apart and no simplification shows that they are equal.

    Examples
    --------
    >>> compare(sympy.sqrt(2), Fraction("1.4142135623730950488"))
    1
    """
    if isinstance(a, Fraction | int) and isinstance(b, Fraction | int):
        return (a > b) - (a < b)
    left, right = _expr(a), _expr(b)
    if left.is_infinite or right.is_infinite:
        return 0 if left == right else (1 if left == sympy.oo or right == -sympy.oo else -1)
    open_question = UndecidedError(f"the order of {left} and {right}: stopped after {SECONDS:g} s")
    with bounded_work(open_question):
        return sign(left - right)


def sign(expr: sympy.Expr) -> int:
    """Return the sign of a real number without free symbols: -1, 0 or 1.

    Raises
    ------
    UndecidedError
        As in ``compare``.
    """
    if expr.is_Rational:
        return int(expr.p > 0) - int(expr.p < 0)
    for digits in PRECISIONS:
        seen = _numeric_sign(expr, digits)
        if seen:
            return seen
        if digits == PRECISIONS[0] and shown_zero(expr):
            return 0
    raise UndecidedError(f"whether {expr} is zero: {PRECISIONS[-1]} digits and no simplification decide")


def _numeric_sign(expr: sympy.Expr, digits: int) -> int:
    try:
        value = expr.evalf(digits, maxn=2 * digits, strict=True)
    except sympy.core.evalf.PrecisionExhausted:
        return 0
    if not value.is_Float:
        return 0
    return 1 if bool(value.is_positive) else -1


def shown_zero(expr: sympy.Expr) -> bool:
    """Whether a symbolic simplification shows that a number is 0. False means: not shown."""
    if expr.count_ops() > 60 or any(abs(p.exp) > 50 for p in expr.atoms(sympy.Pow) if p.exp.is_Integer):
        return bool(expr.is_zero)
    steps = (sympy.expand, lambda e: sympy.expand_log(sympy.logcombine(e)), sympy.radsimp, sympy.simplify)
    return bool(expr.is_zero) or any(step(expr) == 0 for step in steps) or _minimal_polynomial_zero(expr)


def _minimal_polynomial_zero(expr: sympy.Expr) -> bool:
    if not expr.is_algebraic or expr.count_ops() > 20:
        return False
    x = sympy.Symbol("x")
    return bool(sympy.minimal_polynomial(expr, x) == x)


def find_rational(expr: sympy.Expr) -> Fraction | None:
    """Return the rational that a number in disguise is shown to be equal to, or None.

    Examples
    --------
    >>> find_rational(sympy.log(4) / sympy.log(2))
    Fraction(2, 1)
    """
    value = expr.evalf(60)
    if not value.is_Float:
        return Fraction(0) if shown_zero(expr) else None
    if not sympy.Float(10) ** -15 < abs(value) < sympy.Float(10) ** 15:
        return None
    number = sympy.Rational(value)
    candidate = Fraction(int(number.p), int(number.q)).limit_denominator(10**12)
    # the best candidate for an irrational number is typically about 10**-24 away
    gap = abs(Fraction(int(number.p), int(number.q)) - candidate)
    if gap > Fraction(1, 10**40):
        return None
    rational = sympy.Rational(candidate.numerator, candidate.denominator)
    return candidate if shown_zero(expr - rational) else None


def _expr(value: Fraction | sympy.Expr) -> sympy.Expr:
    return (
        sympy.Rational(value.numerator, value.denominator)
        if isinstance(value, Fraction)
        else sympy.sympify(value)
    )
