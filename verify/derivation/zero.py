"""Is an expression identically zero? Cheap exact normal forms first, general simplification last."""

from __future__ import annotations

import sympy as sp
from sympy import Expr


def is_zero(expr: Expr, *, thorough: bool = True) -> bool:
    """Tell whether an expression is proved to be identically zero; False means only that it was not proved.

    Parameters
    ----------
    expr : Expr
        Any expression.
    thorough : bool
        Also try general simplification, which can take long: run it under a budget.

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> is_zero(1/(1 + t) + t/(1 + t) - 1)
    True
    """
    if expr.is_zero:
        return True
    if sp.expand(expr) == 0:
        return True
    cancelled = normal(expr)
    if cancelled == 0:
        return True
    return thorough and bool(sp.simplify(cancelled) == 0)


def normal(expr: Expr) -> Expr:
    """Return a normal form as a quotient of polynomials in whatever the expression is made of.

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> normal((t**2 - 1)/(t - 1))
    t + 1
    """
    if expr.is_Atom:
        return expr
    try:
        return sp.cancel(sp.together(sp.powsimp(sp.expand_power_base(expr))))
    except (sp.PolynomialError, NotImplementedError):
        return sp.powsimp(sp.expand(expr))


def is_constant(expr: Expr, *symbols: sp.Symbol, thorough: bool = True) -> Expr | None:
    """Return the expression without these symbols when it is proved not to depend on them, else None.

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> is_constant((2*t**2 + 2*t)/(t**2 + t), t)
    2
    """
    for form in (lambda e: e, sp.expand, normal, *((sp.simplify,) if thorough else ())):
        expr = form(expr)
        if not expr.has(*symbols):
            return expr
    derivatives = (sp.diff(expr, symbol) for symbol in symbols)
    if all(is_zero(derivative, thorough=thorough) for derivative in derivatives):
        return expr
    return None
