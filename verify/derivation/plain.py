"""Choose the plain statistic and natural parameter among all that differ by scale and shift.

``Q T = (c Q)(T/c)`` and ``Q T = Q (T - a) + a Q``: scale and shift are free, so T = x is preferred to T = 3
- 2 x.
"""

from __future__ import annotations

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.logarithm import combine_logs


def plain_pair(statistic: Expr, natural: Expr, x: Symbol, t: Symbol) -> tuple[Expr, Expr]:
    """Return plain (T, Q) with the same product up to parts of x alone and of t alone.

    Examples
    --------
    >>> x, t = sp.symbols("x t", positive=True)
    >>> plain_pair(6 - 3*x, 1/t, x, t)
    (x, -3/t)
    >>> plain_pair(x**2 - 4*x, -1/(2*t), x, t)
    ((x - 2)**2, -1/(2*t))
    >>> plain_pair(sp.log(x), -t - 1, x, t)
    (log(x), -t)
    """
    factor, statistic = _plain_statistic(statistic, x)
    natural = factor * natural
    opened = sp.expand(natural)
    if isinstance(opened, sp.Add):
        constant, opened = opened.as_independent(t, as_Add=True)
        natural = natural if constant == 0 else opened
    combined = combine_logs(sp.expand(natural)) if natural.has(sp.log) else natural
    return statistic, combined


def _plain_statistic(statistic: Expr, x: Symbol) -> tuple[Expr, Expr]:
    """Return a number and a plain T whose product is the given statistic up to an additive constant."""
    factor, statistic = statistic.as_independent(x, as_Add=False)
    if not isinstance(statistic, sp.Add):
        return factor, statistic
    square = _complete_square(statistic, x)
    if square is not None:
        return factor * square[0], square[1]
    _, statistic = statistic.as_independent(x, as_Add=True)
    content, statistic = _content(statistic, x)
    return factor * content, combine_logs(statistic)


def _content(statistic: Expr, x: Symbol) -> tuple[Expr, Expr]:
    if not isinstance(statistic, sp.Add):
        content, rest = statistic.as_independent(x, as_Add=False)
        return content, rest
    content, rest = statistic.primitive()
    lead = rest.args[0].as_independent(x, as_Add=False)[0]
    if not lead.is_Rational or all(term.could_extract_minus_sign() for term in rest.args):
        content, rest = content * lead, sp.expand(rest / lead)
    return content, rest


def _complete_square(statistic: Expr, x: Symbol) -> tuple[Expr, Expr] | None:
    """Write a g**2 + b g + c as a (g + b/(2a))**2, where g is x or log(x) and b is not 0."""
    generator = sp.log(x) if statistic.has(sp.log(x)) else x
    hold = sp.Dummy("g", real=True)
    inside = sp.expand(statistic).xreplace({generator: hold})
    if inside.has(x) or not inside.is_polynomial(hold):
        return None
    polynomial = sp.Poly(inside, hold)
    if polynomial.degree() != 2 or polynomial.coeff_monomial(hold) == 0:
        return None
    a, b = polynomial.coeff_monomial(hold**2), polynomial.coeff_monomial(hold)
    return a, (generator + b / (2 * a)) ** 2
