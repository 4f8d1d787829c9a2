"""The x at which a statistic takes a value y: its inverse branches, for the numerical look."""

from __future__ import annotations

import sympy as sp
from sympy import Expr, Symbol


def inverse_branches(statistic: Expr, x: Symbol, y: Expr) -> list[Expr] | None:
    """Return candidate solutions x of ``T(x) = y``, or None when T is of no kind that is known here.

    A candidate may lie outside the support, or not be real; whoever uses it looks.

    Examples
    --------
    >>> x, y = sp.symbols("x y", positive=True)
    >>> inverse_branches((x - 2)**2, x, y)
    [sqrt(y) + 2, 2 - sqrt(y)]
    >>> inverse_branches(sp.log(x), x, y)
    [exp(y)]
    """
    if statistic == x:
        return [y]
    if isinstance(statistic, sp.Mul | sp.Add):
        constant, rest = statistic.as_independent(x)
        if constant not in (0, 1):
            return inverse_branches(rest, x, y - constant if isinstance(statistic, sp.Add) else y / constant)
    if isinstance(statistic, sp.Pow) and not statistic.exp.has(x):
        return _of_power(statistic, x, y)
    if isinstance(statistic, sp.log):
        return inverse_branches(statistic.args[0], x, sp.exp(y))
    if isinstance(statistic, sp.exp):
        return inverse_branches(statistic.exp, x, sp.log(y))
    if isinstance(statistic, sp.cosh):
        return _both(statistic.args[0], x, sp.acosh(y))
    if isinstance(statistic, sp.sinh):
        return inverse_branches(statistic.args[0], x, sp.asinh(y))
    if isinstance(statistic, sp.Abs):
        return _both(statistic.args[0], x, y)
    return _of_quotient(statistic, x, y)


def _both(inside: Expr, x: Symbol, y: Expr) -> list[Expr] | None:
    plus, minus = inverse_branches(inside, x, y), inverse_branches(inside, x, -y)
    return None if plus is None or minus is None else [*plus, *minus]


def _of_power(statistic: Expr, x: Symbol, y: Expr) -> list[Expr] | None:
    root = y ** (1 / statistic.exp)
    if statistic.exp.is_even:
        return _both(statistic.base, x, root)
    return inverse_branches(statistic.base, x, root)


def _of_quotient(statistic: Expr, x: Symbol, y: Expr) -> list[Expr] | None:
    """Solve a quotient of polynomials of degree at most two."""
    if not statistic.is_rational_function(x):
        return None
    above, below = sp.fraction(sp.together(statistic))
    polynomial = sp.Poly(above - y * below, x)
    if polynomial.degree() == 1:
        a, b = polynomial.all_coeffs()
        return [-b / a]
    if polynomial.degree() != 2:
        return None
    a, b, c = polynomial.all_coeffs()
    root = sp.sqrt(sp.expand(b**2 - 4 * a * c))
    return (
        [2 * c / (-b - root), (-b - root) / (2 * a)]
        if b.could_extract_minus_sign() is False
        else [(-b + root) / (2 * a), 2 * c / (-b + root)]
    )
