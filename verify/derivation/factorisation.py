"""Is a density of the form h(x) exp(Q(t) T(x) - A(t))? The rank-one test, the plain T and Q, and the
identity.

With ``L = log f`` and ``D(x, t) = L(x, t) - L(x0, t) - L(x, t0) + L(x0, t0)`` the family is one-parameter
exponential exactly when D has rank one: ``D(x, t) D(x1, t1) = D(x1, t) D(x, t1)``.

Source: Lehmann and Romano 2005, section 2.7; the rank-one test: if L = log h + Q T - A then
D = (Q(t) - Q(t0)) (T(x) - T(x0)), and conversely a rank-one D gives L = D + L(x0, t) + L(x, t0) - L(x0, t0).
"""

from __future__ import annotations

from dataclasses import dataclass

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.logarithm import combine_logs, log_absolute, open_logs
from verify.derivation.plain import plain_pair
from verify.derivation.positivity import Domain
from verify.derivation.separation import Separated, separate
from verify.derivation.signs import sign_of
from verify.derivation.zero import is_constant, is_zero, normal


@dataclass(frozen=True)
class Factorisation:
    """The parts of ``f = h(x) exp(Q(t) T(x) - A(t))``, with ``log_base = log h``."""

    statistic: Expr
    natural_parameter: Expr
    log_base: Expr
    log_normaliser: Expr

    @property
    def base(self) -> Expr:
        """The factor h(x)."""
        return sp.exp(self.log_base)


def factorise(expr: Expr, x: Symbol, t: Symbol, domain: Domain, points: tuple[Expr, Expr]) -> Factorisation | None:
    """Return the factorisation of a density that multiplying out its logarithm shows, proved as an
    identity, or None.

    Parameters
    ----------
    expr : Expr
        The density.
    x, t : Symbol
        Variable and parameter.
    domain : Domain
        Where they live.
    points : tuple of Expr
        A point x0 of the support and a parameter value t0.

    Examples
    --------
    >>> x, t = sp.Symbol("x", integer=True, nonnegative=True), sp.Symbol("t", positive=True)
    >>> found = factorise(sp.exp(-t)*t**x/sp.factorial(x), x, t, Domain(), (sp.Integer(1), sp.Integer(1)))
    >>> found.statistic, found.natural_parameter, found.log_normaliser, found.base
    (x, log(t), t, 1/factorial(x))
    """
    logarithm = log_absolute(expr, domain)
    pair = _rank_one(separate(logarithm, x, t), t, points[1])
    return None if pair is None else _identity(logarithm, *plain_pair(*pair, x, t), x, t, domain)


def factorise_by_difference(
    expr: Expr, x: Symbol, t: Symbol, domain: Domain, points: tuple[Expr, Expr]
) -> Factorisation | None:
    """Return the factorisation that D(x, t1) and D(x1, t) suggest, proved by general simplification, or None.

    For densities whose logarithm resists multiplying out; slow, so run it under a budget. Parameters as in
    :func:`factorise`.
    """
    logarithm = log_absolute(expr, domain)
    pair = _rank_one_by_difference(logarithm, x, t, points)
    return None if pair is None else _identity(logarithm, *plain_pair(*pair, x, t), x, t, domain)


def factorise_two_points(
    first: Expr, second: Expr, x: Symbol, t: Symbol, domain: Domain, places: tuple[Expr, Expr]
) -> Factorisation | None:
    """Return the factorisation of masses on two points, where every family is exponential, with T = x.

    With f(a) and f(b) positive, ``f(x) = exp(Q x - A)`` at both points for Q = log(f(b)/f(a))/(b - a) and
    A = a Q - log f(a).

    Examples
    --------
    >>> x, t = sp.symbols("x t", positive=True)
    >>> places = (sp.Integer(0), sp.Integer(1))
    >>> found = factorise_two_points(1 - t, t, x, t, Domain({t: places}), places)
    >>> found.natural_parameter, found.log_normaliser
    (log(t/(1 - t)), -log(1 - t))
    """
    if sign_of(first, domain) != 1 or sign_of(second, domain) != 1:
        return None
    a, b = places
    low, high = log_absolute(first, domain), log_absolute(second, domain)
    natural = sp.expand((high - low) / (b - a))
    return Factorisation(x, combine_logs(natural), sp.S.Zero, sp.expand(a * natural - low))


def _rank_one(parts: Separated, t: Symbol, t0: Expr) -> tuple[Expr, Expr] | None:
    """Merge the products whose coefficients are proportional up to a constant."""
    if parts.tangled != 0 or not parts.products:
        return None
    (first, lead), *others = parts.products.items()
    statistic = first
    for part, coefficient in others:
        ratio = is_constant(
            normal((coefficient - coefficient.subs(t, t0)) / (lead - lead.subs(t, t0))), t, thorough=False
        )
        if ratio is None:
            return None
        statistic += ratio * part
    return statistic, lead


def _rank_one_by_difference(
    logarithm: Expr, x: Symbol, t: Symbol, points: tuple[Expr, Expr]
) -> tuple[Expr, Expr] | None:
    """T(x) ~ D(x, t1) and Q(t) ~ D(x1, t), when the terms could not be parted by multiplying out."""
    x0, t0 = points
    difference = (
        logarithm - logarithm.subs(x, x0) - logarithm.subs(t, t0) + logarithm.subs({x: x0, t: t0}, simultaneous=True)
    )
    for t1 in (t0 + 1, t0 / 2, t0 / 3):
        statistic = difference.subs(t, t1)
        if is_zero(statistic, thorough=False):
            continue
        for x1 in (x0 + 1, x0 + 2, x0 / 2):
            size = statistic.subs(x, x1)
            if not is_zero(size):
                natural = difference.subs(x, x1) / size
                return (statistic, natural) if is_zero(difference - statistic * natural) else None
    return None


def _identity(
    logarithm: Expr, statistic: Expr, natural: Expr, x: Symbol, t: Symbol, domain: Domain
) -> Factorisation | None:
    """Prove log f = log h + Q T - A for the chosen Q and T by parting the difference, or return None."""
    product = sp.expand(open_logs(natural, domain) * open_logs(statistic, domain))
    rest = separate(sp.expand(logarithm) - product, x, t)
    if any(not is_zero(coefficient) for coefficient in rest.products.values()) or not is_zero(rest.tangled):
        return None
    return Factorisation(statistic, natural, sp.expand(rest.of_x), sp.factor_terms(-rest.of_t))
