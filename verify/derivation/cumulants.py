"""Mean and variance of the statistic from the log normaliser."""

from __future__ import annotations

from collections.abc import Iterable

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.certain import sign_at
from verify.derivation.zero import normal


def cumulants(log_normaliser: Expr, natural: Expr, t: Symbol) -> tuple[Expr, Expr]:
    """Return the first two cumulants of T: with d/d eta = (1/Q'(t)) d/dt, the mean dA and the variance d(dA).

    Source: Lehmann and Romano 2005, section 2.7 (derivatives of the log normaliser in the natural parameter).

    Examples
    --------
    >>> t = Symbol("t", positive=True)
    >>> cumulants(-sp.log(t), -t, t)
    (1/t, t**(-2))
    """
    slope = sp.diff(natural, t)
    mean = _plain(sp.diff(log_normaliser, t) / slope, t)
    return mean, _plain(sp.diff(mean, t) / slope, t)


def impossible_variance(variance: Expr, t: Symbol, points: Iterable[Expr]) -> str:
    """Say where the second cumulant is certainly not positive, "" where that is not seen.

    It then is no variance: the log normaliser is not that of a density, so the mass is not 1 for every t.

    Examples
    --------
    >>> t = Symbol("t", positive=True)
    >>> impossible_variance(-1/t**2, t, [sp.Integer(2)])
    'the log normaliser would give T the variance -1/t**2, which is not positive at t = 2: the mass is not 1'
    """
    for at in points:
        if variance == 0 or sign_at(variance, {t: at}) < 0:
            what = f"the log normaliser would give T the variance {variance}"
            return f"{what}, which is not positive at {t} = {at}: the mass is not 1"
    return ""


def _plain(expr: Expr, t: Symbol) -> Expr:
    """The normal form of a quotient of polynomials; other expressions as they are, which are only evaluated."""
    return normal(expr) if expr.is_rational_function(t) else expr
