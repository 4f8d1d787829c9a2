"""The sign of an expression on a whole region, proved, or 0.

The algebra system's own monotonicity questions are not used. An expression is factored; the sign of a
factor is proved by structure (:mod:`verify.derivation.positivity`) or, for a polynomial with rational
coefficients in one symbol, by counting its real roots.

Source: Sturm's theorem, as in Basu, Pollack and Roy, *Algorithms in Real Algebraic Geometry* (2006),
Theorem 2.50.
"""

from __future__ import annotations

import sympy as sp
from sympy import Expr, Poly

from verify.derivation.positivity import Domain, points_inside


def sign_of(expr: Expr, domain: Domain) -> int:
    """Return 1 or -1 when the expression is proved to have that sign on all of the domain, else 0.

    Examples
    --------
    >>> t = sp.Symbol("t", real=True)
    >>> sign_of(t**2 - 3*t + 3, Domain({t: (-sp.oo, sp.oo)}))
    1
    >>> sign_of(t - 2, Domain({t: (sp.Integer(0), sp.oo)}))
    0
    """
    known = domain.sign(expr)
    if known or not expr.free_symbols:
        return known
    product = 1
    for factor in factors(expr):
        product *= _factor_sign(factor, domain)
        if product == 0:
            return 0
    return product


def factors(expr: Expr) -> tuple[Expr, ...]:
    """Factors of an expression over the rationals, after its fractions are put together."""
    if isinstance(expr, sp.Add):
        try:
            expr = sp.factor(sp.together(expr))
        except sp.PolynomialError:
            return (expr,)
    return expr.args if isinstance(expr, sp.Mul) else (expr,)


def _factor_sign(factor: Expr, domain: Domain) -> int:
    known = domain.sign(factor)
    if known:
        return known
    if isinstance(factor, sp.Pow):
        base = sign_of(factor.base, domain)
        if base == 1:
            return 1
        return (1 if factor.exp.is_even else -1 if factor.exp.is_odd else 0) if base == -1 else 0
    return _polynomial_sign(factor, domain)


def _polynomial_sign(expr: Expr, domain: Domain) -> int:
    """No root inside the open interval: then the sign at one point is the sign everywhere."""
    if len(expr.free_symbols) != 1:
        return 0
    (symbol,) = expr.free_symbols
    if symbol not in domain.ranges or not expr.is_polynomial(symbol):
        return 0
    lower, upper = domain.ranges[symbol]
    ends = [end for end in (lower, upper) if end.is_finite]
    polynomial = Poly(expr, symbol)
    if not (polynomial.domain.is_ZZ or polynomial.domain.is_QQ) or not all(end.is_Rational for end in ends):
        return 0
    roots = polynomial.count_roots(lower if lower.is_finite else None, upper if upper.is_finite else None) - sum(
        1 for end in ends if polynomial.eval(end) == 0
    )
    if roots:
        return 0
    return 1 if polynomial.eval(next(points_inside((lower, upper)))) > 0 else -1
