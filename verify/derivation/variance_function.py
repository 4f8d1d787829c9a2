"""The variance function of the statistic's family, from the cumulants, without inverting the mean map.

With d/d eta = (1/Q'(t)) d/dt: K1 = dA, K2 = dK1, K3 = dK2; then V'(mean) = K3/K2, V''(mean)/2 = d(K3/K2)/(2
K2) = v2 and V'''(mean)/6 = d(v2)/(3 K2).

Source: Morris 1982, section 2 (a natural exponential family is determined by its variance function on an
interval); Letac and Mora 1990 (the cubic case). The chain rule through Q is a short derivation.
"""

from __future__ import annotations

from dataclasses import dataclass

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.zero import is_constant, normal


@dataclass(frozen=True)
class Quadratic:
    """``V(m) = v0 + v1 m + v2 m**2`` with coefficients free of the parameter; ``mean`` is K1(t)."""

    mean: Expr
    v0: Expr
    v1: Expr
    v2: Expr


@dataclass(frozen=True)
class Cube:
    """``V(m) = c (m - root)**3``; ``mean`` is K1(t)."""

    mean: Expr
    c: Expr
    root: Expr


def variance_function(log_normaliser: Expr, natural: Expr, t: Symbol) -> Quadratic | Cube | None:
    """Return the variance function when it is proved to be quadratic or c (m - b)**3; None when that was
    not proved.

    Parameters
    ----------
    log_normaliser, natural : Expr
        A(t) and Q(t).

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> variance_function(t, sp.log(t), t)
    Quadratic(mean=t, v0=0, v1=1, v2=0)
    >>> variance_function(-1/t, -1/(2*t**2), t)
    Cube(mean=t, c=1, root=0)
    """
    slope = sp.diff(natural, t)

    def step(expr: Expr) -> Expr:
        return normal(sp.diff(expr, t) / slope)

    k1 = step(log_normaliser)
    k2 = step(k1)
    first = normal(step(k2) / k2)
    half = normal(step(first) / (2 * k2))
    v2 = is_constant(half, t)
    if v2 is not None:
        return _quadratic(k1, k2, first, v2, t)
    return _cube(k1, k2, first, half, normal(step(half) / (3 * k2)), t)


def _quadratic(k1: Expr, k2: Expr, first: Expr, v2: Expr, t: Symbol) -> Quadratic | None:
    v1 = is_constant(first - 2 * v2 * k1, t)
    v0 = None if v1 is None else is_constant(k2 - v1 * k1 - v2 * k1**2, t)
    if v0 is None or v1 is None:
        return None
    return Quadratic(k1, *(v if v.is_Rational else sp.simplify(v) for v in (v0, v1, v2)))


def _cube(k1: Expr, k2: Expr, first: Expr, half: Expr, third: Expr, t: Symbol) -> Cube | None:
    c = is_constant(third, t)
    if c is None or c == 0:
        return None
    root = is_constant(k1 - half / (3 * c), t)
    if root is None:
        return None
    if any(is_constant(rest, t) != 0 for rest in (first - 3 * c * (k1 - root) ** 2, k2 - c * (k1 - root) ** 3)):
        return None
    return Cube(k1, c, root)
