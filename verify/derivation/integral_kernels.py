"""The integrals that are known, told apart by the plain functions of x that there are in log f.

Every matcher takes the terms of log f (plain function -> coefficient) and returns the integral of exp of
their sum, or None when the terms have another shape.
"""

from __future__ import annotations

from collections.abc import Callable

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.closed import Closed
from verify.derivation.positivity import Domain

Terms = dict[Expr, Expr]
Matcher = Callable[[Terms, Symbol, Domain], Closed | None]
Found = Closed | None

oo = sp.oo


def known_integral(terms: Terms, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """Return the integral of ``exp(sum of coefficient * function)`` over (lower, upper), or None.

    Examples
    --------
    >>> x, t = sp.symbols("x t", positive=True)
    >>> known_integral({x: -t, sp.log(x): sp.Integer(2)}, x, sp.S.Zero, oo, Domain()).value
    2/t**3
    """
    matchers = WHOLE_LINE if (lower, upper) == (-oo, oo) else HALF_LINE if (lower, upper) == (0, oo) else ()
    for matcher in matchers:
        found = matcher(terms, x, domain)
        if found is not None:
            return found
    return _on_interval(terms, x, lower, upper, domain)


def _power_of(g: Expr, x: Symbol) -> Expr | None:
    """The exponent p when g is x**p."""
    base, exponent = g.as_base_exp()
    return exponent if base == x and not exponent.has(x) else None


def _log_one_plus(g: Expr, x: Symbol) -> tuple[Expr, Expr] | None:
    """(c, p) when g is log(1 + c*x**p)."""
    if not isinstance(g, sp.log) or not g.args[0].is_Add:
        return None
    free, rest = g.args[0].as_independent(x, as_Add=True)
    c, power = rest.as_independent(x, as_Add=False)
    p = _power_of(power, x)
    return (c, p) if free == 1 and p is not None else None


def _pick(terms: Terms, *wanted: Expr) -> list[Expr] | None:
    """The coefficients of the wanted plain functions when there are no others."""
    if any(g not in wanted for g in terms):
        return None
    return [terms.get(g, sp.S.Zero) for g in wanted]


# ---- on (0, oo)


def _gamma_kernel(terms: Terms, x: Symbol, domain: Domain) -> Found:
    """x**a * exp(-b*x**p): DLMF 5.9.1 after u = x**p."""
    others = [g for g in terms if g != sp.log(x)]
    if len(others) != 1 or (p := _power_of(others[0], x)) is None:
        return None
    sign = domain.sign(p)
    if not sign:
        return None
    b, s = -terms[others[0]], (terms.get(sp.log(x), sp.S.Zero) + 1) / p
    return Closed(sp.gamma(s) * b ** (-s) / (sign * p), (b, s), ("gamma integral, DLMF 5.9.1",))


def _bessel_kernel(terms: Terms, x: Symbol, domain: Domain) -> Found:
    """x**a * exp(-b*x**p - c*x**-p): DLMF 10.32.10 after a scaling and u = x**p."""
    others = [g for g in terms if g != sp.log(x)]
    powers = [p for g in others if (p := _power_of(g, x)) is not None]
    if len(others) != 2 or len(powers) != 2 or sp.expand(powers[0] + powers[1]) != 0:
        return None
    first = 0 if domain.positive(powers[0]) else 1
    p, b, c = powers[first], -terms[others[first]], -terms[others[1 - first]]
    if not domain.positive(p):
        return None
    order = (terms.get(sp.log(x), sp.S.Zero) + 1) / p
    value = 2 * (c / b) ** (order / 2) * sp.besselk(order, 2 * sp.sqrt(b * c)) / p
    return Closed(value, (b, c), ("Bessel K integral, DLMF 10.32.10",))


def _beta_prime_kernel(terms: Terms, x: Symbol, domain: Domain) -> Found:
    """x**a * (1 + c*x**p)**(-b): DLMF 5.12.3 after u = c*x**p."""
    others = [g for g in terms if g != sp.log(x)]
    if len(others) != 1 or (shape := _log_one_plus(others[0], x)) is None:
        return None
    c, p = shape
    sign = domain.sign(p)
    if not sign or not domain.positive(c):
        return None
    s, b = (terms.get(sp.log(x), sp.S.Zero) + 1) / p, -terms[others[0]]
    value = c ** (-s) * sp.gamma(s) * sp.gamma(b - s) / sp.gamma(b) / (sign * p)
    return Closed(value, (s, b - s), ("beta integral on the half-line, DLMF 5.12.3",))


# ---- on the whole line


def _gaussian_kernel(terms: Terms, x: Symbol, domain: Domain) -> Found:
    """exp(-a*x**2 + b*x): complete the square, then DLMF 7.7.3 (the Gaussian integral, 5.9.1 at s = 1/2)."""
    found = _pick(terms, x**2, x)
    if found is None or x**2 not in terms:
        return None
    a, b = -found[0], found[1]
    return Closed(sp.sqrt(sp.pi / a) * sp.exp(b**2 / (4 * a)), (a,), ("Gaussian integral, DLMF 7.7.3",))


def _secant_kernel(terms: Terms, x: Symbol, domain: Domain) -> Found:
    """exp(a*x) * cosh(c*x)**(-r): DLMF 5.12.7."""
    others = [g for g in terms if g != x]
    if len(others) != 1 or not isinstance(others[0], sp.log) or not isinstance(others[0].args[0], sp.cosh):
        return None
    c = sp.cancel(others[0].args[0].args[0] / x)
    if c.has(x) or not domain.positive(c):
        return None
    a, r = terms.get(x, sp.S.Zero) / c, -terms[others[0]]
    up, down = (r + a) / 2, (r - a) / 2
    value = 2 ** (r - 1) * sp.gamma(up) * sp.gamma(down) / sp.gamma(r) / c
    return Closed(value, (up, down), ("hyperbolic cosine integral, DLMF 5.12.7",))


HALF_LINE: tuple[Matcher, ...] = (_gamma_kernel, _bessel_kernel, _beta_prime_kernel)
WHOLE_LINE: tuple[Matcher, ...] = (_gaussian_kernel, _secant_kernel)


# ---- on other intervals


def _on_interval(terms: Terms, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    for matcher in (
        _power_between,
        _exponential_between,
        _gaussian_between,
        _gamma_between,
        _beta_kernel,
        _circle,
    ):
        found = matcher(terms, x, lower, upper, domain)
        if found is not None:
            return found
    return None


def _power_between(terms: Terms, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """x**a between two ends of which one may be 0 or infinite."""
    found = _pick(terms, sp.log(x))
    if found is None:
        return None
    s = found[0] + 1
    if lower == 0 and upper.is_finite is not False:
        return Closed(upper**s / s, (s,), ("power rule",))
    if upper == oo and (lower.is_positive or domain.positive(lower)):
        return Closed(lower**s / -s, (-s,), ("power rule",))
    if not terms and oo not in (-lower, upper):
        return Closed(upper - lower, (), ("power rule",))
    if oo in (-lower, upper) or not domain.positive(lower):
        return None
    if s == 0:
        return Closed(sp.log(upper) - sp.log(lower), (), ("power rule",))
    return Closed((upper**s - lower**s) / s, (), ("power rule",)) if domain.sign(s) else None


def _exponential_between(terms: Terms, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """exp(a*x)."""
    if set(terms) != {x} or (lower, upper) == (-oo, oo):
        return None
    a = terms[x]
    if upper == oo:
        return Closed(sp.exp(a * lower) / -a, (-a,), ("exponential integral",))
    if lower == -oo:
        return Closed(sp.exp(a * upper) / a, (a,), ("exponential integral",))
    value = (sp.exp(a * upper) - sp.exp(a * lower)) / a
    return Closed(value, (), ("exponential integral (by continuity where the rate is 0)",))


def _gaussian_between(terms: Terms, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """exp(-a*x**2 + b*x) with a > 0: DLMF 7.2.1 after completing the square."""
    found = _pick(terms, x**2, x)
    if found is None or x**2 not in terms or (lower, upper) == (-oo, oo):
        return None
    a, b = -found[0], found[1]
    root = sp.sqrt(a)

    def phi(end: Expr) -> Expr:
        return sp.sign(end) if end.is_infinite else sp.erf(sp.expand(root * end - b / (2 * root)))

    if oo not in (-lower, upper) and not domain.positive(a):
        return None
    value = sp.sqrt(sp.pi) / (2 * root) * sp.exp(b**2 / (4 * a)) * (phi(upper) - phi(lower))
    return Closed(value, (a,), ("error function, DLMF 7.2.1",))


def _gamma_between(terms: Terms, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """x**a * exp(-b*x) with a cut end: DLMF 8.2.1 and 8.2.2."""
    found = _pick(terms, sp.log(x), x)
    if found is None or not terms or lower == -oo or (lower, upper) == (0, oo):
        return None
    s, b = found[0] + 1, -found[1]
    if not domain.positive(b) or not (lower == 0 or domain.positive(lower)):
        return None
    source = ("incomplete gamma function, DLMF 8.2.1",)
    if upper == oo:
        return Closed(b ** (-s) * sp.uppergamma(s, b * lower), (), source)
    if lower == 0:
        return Closed(b ** (-s) * sp.lowergamma(s, b * upper), (s,), source)
    return Closed(b ** (-s) * (sp.uppergamma(s, b * lower) - sp.uppergamma(s, b * upper)), (), source)


def _beta_kernel(terms: Terms, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """x**a * (1 - x**p)**b on (0, 1): DLMF 5.12.1 after u = x**p."""
    if (lower, upper) != (0, 1):
        return None
    others = [g for g in terms if g != sp.log(x)]
    if len(others) != 1 or (shape := _log_one_plus(others[0], x)) is None:
        return None
    c, p = shape
    if c != -1 or not domain.positive(p):
        return None
    s, b = (terms.get(sp.log(x), sp.S.Zero) + 1) / p, terms[others[0]] + 1
    return Closed(sp.gamma(s) * sp.gamma(b) / sp.gamma(s + b) / p, (s, b), ("beta integral, DLMF 5.12.1",))


def _circle(terms: Terms, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """exp(k*cos(x - m)), or with a sine too, over a whole turn: DLMF 10.32.1."""
    if not terms or sp.expand(upper - lower - 2 * sp.pi) != 0:
        return None
    across = up = sp.S.Zero
    for g, k in terms.items():
        if not isinstance(g, (sp.cos, sp.sin)) or sp.expand(g.args[0] - x).has(x):
            return None
        m = sp.expand(x - g.args[0]) + (sp.pi / 2 if isinstance(g, sp.sin) else 0)
        across, up = across + k * sp.cos(m), up + k * sp.sin(m)
    one = len(terms) == 1
    size = next(iter(terms.values())) if one else sp.sqrt(across**2 + up**2)
    return Closed(2 * sp.pi * sp.besseli(0, size), (), ("Bessel I0 integral, DLMF 10.32.1",))
