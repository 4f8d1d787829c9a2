"""Prove that an expression is positive wherever its symbols may roam.

The symbols of a :class:`Domain` range over open intervals. Each is written as a rational map of a fresh
positive symbol ("chart"); an expression is positive when, after the substitution, numerator and denominator
are sums of positive terms. Everything else is structure: products, powers, monotone functions, and the
difference of two positive terms compared by their logarithms.

Only True is an answer: None means "not proved", never "not positive".
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from functools import cached_property

import sympy as sp
from sympy import Expr, Symbol

Interval = tuple[Expr, Expr]

HALF = sp.Rational(1, 2)
DEPTH = 8
"""How deep a proof may go."""

MOST_DOMAINS = 64
_FOUND: dict[tuple[tuple[Symbol, Interval], ...], dict[Expr, int]] = {}
"""What was found in each domain: proofs do not change, and the steps of one derivation ask for the same ones."""

FRACTIONS = tuple(sp.Rational(p, q) for p, q in ((1, 3), (1, 2), (6, 7), (1, 11), (98, 99), (1, 60)))
DISTANCES = tuple(sp.Rational(p, q) for p, q in ((5, 7), (2, 1), (7, 2), (1, 9), (12, 1), (1, 40)))


def points_inside(interval: Interval) -> Iterator[Expr]:
    """Yield a few exact points of an open interval, plain ones first.

    Examples
    --------
    >>> [str(point) for point in points_inside((sp.Integer(0), sp.Integer(1)))][:3]
    ['1/3', '1/2', '6/7']
    """
    lower, upper = interval
    if lower.is_finite and upper.is_finite:
        yield from (lower + (upper - lower) * part for part in FRACTIONS)
    elif lower.is_finite:
        yield from (lower + step for step in DISTANCES)
    elif upper.is_finite:
        yield from (upper - step for step in DISTANCES)
    else:
        yield from (sign * step for step in DISTANCES for sign in (1, -1))


def _chart(interval: Interval) -> Expr:
    lower, upper = interval
    if lower.is_infinite and upper.is_infinite:
        return sp.Dummy("u", real=True)
    u = sp.Dummy("u", positive=True)
    if upper.is_infinite:
        return lower + u
    if lower.is_infinite:
        return upper - u
    return (lower + upper * u) / (1 + u)


@dataclass(frozen=True)
class Domain:
    """Open intervals over which some symbols range; the ends may contain the symbols before them."""

    ranges: dict[Symbol, Interval] = field(default_factory=dict)

    @cached_property
    def chart(self) -> dict[Symbol, Expr]:
        """Each symbol as a map of a fresh positive (or real) symbol."""
        charts: dict[Symbol, Expr] = {}
        for symbol, (lower, upper) in self.ranges.items():
            charts[symbol] = _chart((lower.xreplace(charts), upper.xreplace(charts)))
        return charts

    @cached_property
    def known(self) -> dict[Expr, int]:
        """What was found so far, by expression: 0 when it is proved, else the depth of search that did not do.

        Shared by all domains with the same ranges.
        """
        key = tuple(self.ranges.items())
        if key not in _FOUND:
            if len(_FOUND) >= MOST_DOMAINS:
                _FOUND.clear()
            _FOUND[key] = {}
        return _FOUND[key]

    def having(self, symbol: Symbol, lower: Expr, upper: Expr) -> Domain:
        """Return this domain with one more symbol."""
        return Domain({**self.ranges, symbol: (lower, upper)})

    def positive(self, expr: Expr) -> bool:
        """Tell whether ``expr > 0`` is proved on the whole domain.

        Examples
        --------
        >>> p = Symbol("p", positive=True)
        >>> Domain({p: (sp.Integer(0), sp.Integer(1))}).positive(1 - (1 - p)**3)
        True
        """
        return _positive(sp.sympify(expr), self, DEPTH)

    def negative(self, expr: Expr) -> bool:
        """Tell whether ``expr < 0`` is proved on the whole domain."""
        return self.positive(-expr)

    def sign(self, expr: Expr) -> int:
        """Return 1 or -1 when that sign is proved, else 0."""
        return 1 if self.positive(expr) else -1 if self.negative(expr) else 0


def _positive(expr: Expr, domain: Domain, depth: int) -> bool:
    if expr.is_positive:
        return True
    if expr.is_nonpositive or depth == 0:
        return False
    searched = domain.known.get(expr)
    if searched == 0 or (searched is not None and searched >= depth):
        return searched == 0
    found = _search(expr, domain, depth)
    domain.known[expr] = 0 if found else depth
    return found


def _search(expr: Expr, domain: Domain, depth: int) -> bool:
    if not expr.free_symbols:
        return _positive_number(expr)
    if expr.is_Add:
        return _positive_sum(expr, domain, depth - 1)
    if expr.is_Mul:
        return _positive_product(expr, domain, depth - 1)
    if expr.is_Symbol:
        return bool(domain.chart.get(expr, expr).is_positive) or _positive_chart(expr, domain)
    if expr.is_Pow:
        return _positive_power(expr, domain, depth - 1)
    return _positive_function(expr, domain, depth - 1)


def _positive_number(expr: Expr) -> bool:
    answer = sp.Gt(expr, 0) if expr.is_extended_real else sp.false
    return answer is sp.true or answer is True


def _positive_power(expr: Expr, domain: Domain, depth: int) -> bool:
    base, exponent = expr.as_base_exp()
    if _positive(base, domain, depth):
        return True
    return bool(exponent.is_even) and _positive(-base, domain, depth)


def _positive_product(expr: Expr, domain: Domain, depth: int) -> bool:
    signs = 1
    for factor in expr.args:
        if _positive(factor, domain, depth):
            continue
        if not _negative(factor, domain, depth):
            return False
        signs = -signs
    return signs == 1


def _negative(expr: Expr, domain: Domain, depth: int) -> bool:
    if isinstance(expr, sp.log):
        return _positive(1 - expr.args[0], domain, depth)
    if expr.is_Add or expr.is_number:
        return _positive(-expr, domain, depth)
    if isinstance(expr, (sp.sinh, sp.tanh, sp.erf, sp.asinh)):
        return _positive(-expr.args[0], domain, depth)
    if expr.is_Pow and expr.exp.is_odd:
        return _negative(expr.base, domain, depth)
    return bool(expr.is_negative) or _positive_chart(-expr, domain)


def _positive_function(expr: Expr, domain: Domain, depth: int) -> bool:
    argument = expr.args[-1] if expr.args else sp.nan

    def holds(condition: Expr) -> bool:
        return _positive(condition, domain, depth)

    if isinstance(expr, (sp.exp, sp.cosh)):
        return True
    if isinstance(expr, sp.log):
        return holds(argument - 1)
    if isinstance(expr, (sp.gamma, sp.sinh, sp.tanh, sp.erf, sp.asinh)):
        return holds(argument)
    if isinstance(expr, sp.factorial):
        return holds(argument + 1)
    if isinstance(expr, sp.binomial):
        n, k = expr.args
        return bool(k.is_integer) and holds(k + HALF) and holds(n - k + HALF)
    if isinstance(expr, sp.Abs):
        return holds(argument) or holds(-argument)
    if isinstance(expr, sp.besselk):
        return holds(argument)
    if isinstance(expr, sp.besseli):  # of whole order: I_-n = I_n (DLMF 10.27.1)
        return holds(argument) and bool(expr.args[0].is_integer or holds(expr.args[0] + 1))
    if isinstance(expr, sp.beta):
        return all(map(holds, expr.args))
    if isinstance(expr, sp.zeta) and len(expr.args) == 1:
        return holds(argument - 1)
    if isinstance(expr, sp.cos):
        return holds(sp.pi / 2 - argument) and holds(sp.pi / 2 + argument)
    if isinstance(expr, (sp.sin, sp.tan)):
        return holds(argument) and holds((sp.pi if isinstance(expr, sp.sin) else sp.pi / 2) - argument)
    return isinstance(expr, sp.erfc)


def _positive_chart(expr: Expr, domain: Domain) -> bool:
    moved = expr.xreplace(domain.chart)
    if moved.is_positive:
        return True
    above, below = sp.fraction(sp.together(moved))
    if sp.expand(below).is_negative:
        above, below = -above, -below
    return bool(sp.expand(above).is_positive and sp.expand(below).is_positive)


def _positive_sum(expr: Expr, domain: Domain, depth: int) -> bool:
    if _positive_chart(expr, domain):
        return True
    terms = expr.args
    if all(_positive(term, domain, depth) for term in terms):
        return True
    if _positive_by_bounds(expr):
        return True
    if len(terms) == 2 and _positive_difference(terms[0], terms[1], domain, depth):
        return True
    factored = sp.factor_terms(sp.factor(expr)) if expr.is_rational_function() else sp.factor_terms(expr)
    return bool(factored.is_Mul) and factored != expr and _positive_product(factored, domain, depth)


def _positive_by_bounds(expr: Expr) -> bool:
    """Replace c erf(u), c tanh(u), c sin(u) and c cos(u), u real, by -|c|: the first two exceed it."""
    bounded = [f for f in expr.atoms(sp.erf, sp.tanh, sp.sin, sp.cos) if f.args[0].is_real and expr.coeff(f).is_number]
    floor = sum((-abs(expr.coeff(f)) - expr.coeff(f) * f for f in bounded), start=expr)
    reached = all(isinstance(f, (sp.sin, sp.cos)) for f in bounded)
    above = floor.is_positive if reached else floor.is_nonnegative
    return bool(bounded) and not floor.has(*bounded) and bool(above)


def _positive_difference(first: Expr, second: Expr, domain: Domain, depth: int) -> bool:
    for plus, minus in ((first, -second), (second, -first)):
        if isinstance(plus, sp.erf) and isinstance(minus, sp.erf):
            return _positive(plus.args[0] - minus.args[0], domain, depth)
        if _positive(plus, domain, depth) and _positive(minus, domain, depth):
            return _positive(sp.expand(_plain_log(plus, domain) - _plain_log(minus, domain)), domain, depth)
    return False


def _plain_log(expr: Expr, domain: Domain) -> Expr:
    """The logarithm of a positive expression, opened up where its parts are positive."""
    if isinstance(expr, sp.exp):
        return expr.args[0]
    if expr.is_Pow and domain.positive(expr.base):
        return expr.exp * _plain_log(expr.base, domain)
    if expr.is_Mul and all(domain.positive(factor) for factor in expr.args):
        return sp.Add(*(_plain_log(factor, domain) for factor in expr.args))
    return sp.log(expr)
