"""What a closed form of a sum or an integral says, and when such a value is identically one."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import sympy as sp
from sympy import Expr

from verify.derivation.positivity import Domain
from verify.derivation.products import LARGEST_POWER, rebuild, split


@dataclass(frozen=True)
class Closed:
    """A closed form: the value, what must be positive for convergence, and where it is published.

    The conditions suffice. Unless the form was put together from terms of mixed sign (``sharp`` is False)
    they are necessary too: where one of them is negative, the sum or integral of the positive terms diverges.
    """

    value: Expr
    conditions: tuple[Expr, ...]
    sources: tuple[str, ...]
    sharp: bool = True

    def times(self, factor: Expr) -> Closed:
        """Return the closed form multiplied by a factor free of the variable."""
        return replace(self, value=factor * self.value)


def total(parts: Sequence[Closed], *, sharp: bool) -> Closed:
    """Add closed forms; conditions and sources are put together without repetition."""
    conditions = dict.fromkeys(condition for part in parts for condition in part.conditions)
    sources = dict.fromkeys(source for part in parts for source in part.sources)
    sharp = sharp and all(part.sharp for part in parts)
    return Closed(sp.Add(*(part.value for part in parts)), tuple(conditions), tuple(sources), sharp)


def by_gamma(expr: Expr) -> Expr:
    """Write beta functions, factorials and binomial coefficients by gamma functions, and the like."""
    expr = expr.replace(sp.beta, lambda a, b=None: sp.gamma(a) * sp.gamma(b) / sp.gamma(a + b))
    expr = expr.replace(sp.factorial, lambda n: sp.gamma(n + 1))
    expr = expr.replace(sp.binomial, _binomial_by_gamma)
    expr = expr.replace(sp.RisingFactorial, lambda a, k: sp.gamma(a + k) / sp.gamma(a))
    expr = expr.replace(sp.FallingFactorial, lambda a, k: sp.gamma(a + 1) / sp.gamma(a - k + 1))
    expr = expr.replace(sp.erfc, lambda z: 1 - sp.erf(z))
    for hyperbolic in (sp.cosh, sp.sinh, sp.tanh, sp.sech, sp.csch, sp.coth):
        expr = expr.replace(hyperbolic, lambda z, f=hyperbolic: f(z).rewrite(sp.exp))
    return expr


def _binomial_by_gamma(n: Expr, k: Expr) -> Expr:
    """C(n, k); for negative n by C(-r, k) = (-1)**k * C(r + k - 1, k) (DLMF 1.2.6)."""
    if n.is_negative:
        return (-1) ** k * _binomial_by_gamma(k - n - 1, k)
    return sp.gamma(n + 1) / sp.gamma(k + 1) / sp.gamma(n - k + 1)


def _plain_arguments(expr: Expr, domain: Domain) -> Expr:
    """Bring the arguments of special functions to one form; open Bessel functions of half-integer order."""
    for kind in (sp.besselk, sp.besseli):
        expr = expr.replace(kind, lambda n, z, f=kind: _bessel(f, n, z, domain))
    for kind in (sp.gamma, sp.erf, sp.zeta, sp.cos, sp.sin):
        expr = expr.replace(
            kind,
            lambda *z, f=kind: f(
                *(sp.expand(sp.cancel(w)) if w.is_rational_function() else sp.expand(w) for w in z)
            ),
        )
    return expr


def _bessel(kind: type[sp.Function], order: Expr, z: Expr, domain: Domain) -> Expr:
    plain = rebuild(split(z, domain))
    if order.is_Rational and order.q == 2 and abs(order) < 20:
        return _half_integer_k(order, plain) if kind is sp.besselk else _half_integer_i(order, plain)
    return kind(order, plain)


def _half_integer_i(order: sp.Rational, z: Expr) -> Expr:
    """I of order n + 1/2 by recurrence from orders -1/2 and 1/2 (DLMF 10.29.1 with 10.49.9 and 10.49.13)."""
    half = sp.Rational(1, 2)
    here, there = (sp.sqrt(2 / (sp.pi * z)) * f(z) for f in (sp.sinh, sp.cosh))
    step = 1 if order > 0 else -1
    if order < 0:
        here, there = there, here
    at = step * half
    while at != order:
        here, there, at = there - step * 2 * at / z * here, here, at + step
    return here


def _half_integer_k(order: sp.Rational, z: Expr) -> Expr:
    """K of order n + 1/2 as a finite sum (DLMF 10.49.12 with 10.47.9)."""
    n = abs(order) - sp.Rational(1, 2)
    terms = (
        sp.factorial(n + k) / (sp.factorial(k) * sp.factorial(n - k) * (2 * z) ** k)
        for k in range(int(n) + 1)
    )
    return sp.sqrt(sp.pi / (2 * z)) * sp.exp(-z) * sp.Add(*terms)


def normal_form(value: Expr, domain: Domain) -> Expr:
    """Write a value as a product of plain powers, so that equal values mostly look equal.

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> normal_form(sp.exp(-t) * sp.sqrt(t * sp.exp(2 * t)) / sp.sqrt(t), Domain())
    1
    """
    plain = by_gamma(_plain_arguments(sp.sympify(value), domain))
    product = _product(plain, domain)
    if product.is_number or not product.has(sp.gamma, sp.Add):
        return product
    if product.has(sp.gamma):
        product = _product(sp.gammasimp(product), domain)
    if product.has(sp.Add) and not product.is_number and _is_tame(product):
        product = _product(sp.cancel(sp.together(sp.expand(product))), domain)
    return product


def _is_tame(expr: Expr) -> bool:
    """Tell whether no power is too high to be multiplied out."""
    powers = [power.exp for power in expr.atoms(sp.Pow) if power.exp.is_Integer]
    return all(abs(exponent) <= LARGEST_POWER for exponent in powers)


def _product(expr: Expr, domain: Domain) -> Expr:
    """Split into powers; in sums, every term first."""

    def each_term(terms: Expr) -> Expr:
        return sp.Add(*(rebuild(split(term, domain)) for term in terms.args))

    return rebuild(split(expr.replace(lambda g: g.is_Add, each_term), domain))


def is_one(value: Expr, domain: Domain) -> bool:
    """Tell whether ``value`` is proved to be identically one on the domain (False: not proved).

    Examples
    --------
    >>> p = sp.Symbol("p", positive=True)
    >>> is_one((1 - p) ** 3 * (1 + p / (1 - p)) ** 3, Domain({p: (sp.S.Zero, sp.S.One)}))
    True
    """
    found = normal_form(value, domain)
    if found.is_number:
        return bool(sp.simplify(found - 1) == 0)
    return bool(_is_tame(found) and found.count_ops() < 60 and sp.simplify(found - 1) == 0)
