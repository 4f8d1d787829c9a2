"""Closed forms of ``integral of f(x) dx`` by the shape of log f.

log f is taken apart into a constant and multiples of plain functions of x; the matchers below look at which plain
functions there are, never at which density it is. Substitutions (shift, scale, logarithm, exponential, splitting at a
kink) bring other densities to these shapes.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.closed import Closed, total
from verify.derivation.positivity import Domain
from verify.derivation.products import LogTerms, log_terms

Terms = dict[Expr, Expr]
Matcher = Callable[[Terms, Symbol, Domain], Closed | None]
Found = Closed | None

oo = sp.oo
DEPTH = 4
"""How many substitutions are tried one after the other."""


def integral(f: Expr, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """Return the integral of ``f`` over (lower, upper) in closed form, or None when no shape fits.

    The caller proves the conditions of the result.

    Examples
    --------
    >>> x, t = sp.symbols("x t", positive=True)
    >>> integral(t * sp.exp(-t * x), x, sp.S.Zero, sp.oo, Domain({t: (sp.S.Zero, sp.oo)})).value
    1
    """
    return _integral(f, x, lower, upper, domain, DEPTH)


def _integral(f: Expr, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int) -> Found:
    if depth == 0 or lower == oo or upper == -oo:
        return None
    here = domain.having(x, lower, upper)
    logs = log_terms(f, x, here)
    found = _match(logs, x, lower, upper, here)
    if found is None:
        for change in (_split_at_kink, _shift, _logarithm, _exponential, _halves, _reflect):
            found = change(f, logs, x, lower, upper, domain, depth - 1)
            if found is not None:
                return found
        return _term_by_term(f, x, lower, upper, domain, depth - 1)
    return found.times(logs.constant)


def _match(logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    if (lower, upper) == (-oo, oo):
        matchers = WHOLE_LINE
    elif (lower, upper) == (0, oo):
        matchers = HALF_LINE
    else:
        matchers = ()
    for matcher in matchers:
        found = matcher(logs.terms, x, domain)
        if found is not None:
            return found
    return _on_interval(logs.terms, x, lower, upper, domain)


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
    powers = [_power_of(g, x) for g in others]
    if len(others) != 2 or None in powers or sp.expand(powers[0] + powers[1]) != 0:
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
    for matcher in (_power_between, _exponential_between, _gaussian_between, _gamma_between, _beta_kernel, _circle):
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


# ---- substitutions: each returns the integral in the new variable

def _split_at_kink(f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int) -> Found:
    """|x - c|: integrate on both sides of c."""
    inside = {g for g in f.atoms(sp.Abs) if g.has(x)}
    corners = {sp.expand(x - sp.expand(g.args[0]) / sp.expand(g.args[0]).coeff(x, 1)) for g in inside
               if sp.expand(g.args[0]).coeff(x, 1) != 0}
    if len(corners) != 1 or (corner := corners.pop()).has(x):
        return None
    parts = []
    y = sp.Dummy("y", positive=True)
    for sign, reach in ((1, upper - corner), (-1, corner - lower)):
        if reach != oo and not domain.positive(reach):
            return None
        moved = f.xreplace({g: _open_abs(g, x, y, corner, sign, domain) for g in inside}).subs(x, corner + sign * y)
        part = _integral(moved, y, sp.S.Zero, reach, domain, depth)
        if part is None:
            return None
        parts.append(part)
    return total(parts, sharp=True)


def _open_abs(g: Expr, x: Symbol, y: Symbol, corner: Expr, sign: int, domain: Domain) -> Expr:
    return sp.Abs(sp.expand(g.args[0].subs(x, corner + sign * y))).subs(sp.Abs(y), y)


def _shift(f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int) -> Found:
    """Move a finite end to 0 (and a finite interval to (0, 1)), or the centre of a location family to 0."""
    if (lower, upper) in ((0, oo), (0, 1)):
        return None
    y = sp.Dummy("y", positive=True)
    if lower.is_finite is not False and upper.is_finite is not False:
        width = upper - lower
        return _scaled(f.subs(x, lower + width * y), y, sp.S.One, width, domain, depth)
    if lower.is_finite is not False:
        return _scaled(f.subs(x, lower + y), y, oo, sp.S.One, domain, depth)
    if upper.is_finite is not False:
        return _scaled(f.subs(x, upper - y), y, oo, sp.S.One, domain, depth)
    z = sp.Dummy("z", real=True)
    for centre in _centres(f, x):
        found = _integral(f.subs(x, z + centre), z, lower, upper, domain, depth)
        if found is not None:
            return found
    return None


def _scaled(f: Expr, y: Symbol, upper: Expr, width: Expr, domain: Domain, depth: int) -> Found:
    found = _integral(_tidy(f), y, sp.S.Zero, upper, domain, depth)
    return found.times(width) if found is not None else None


def _tidy(f: Expr) -> Expr:
    """Expand the sums that a substitution left inside powers and functions."""
    return f.replace(lambda g: g.is_Pow and g.base.is_Add, lambda g: sp.expand(g.base) ** g.exp)


def _centres(f: Expr, x: Symbol) -> Iterator[Expr]:
    """Centres at which something in f is symmetric: of squares, of quadratics, of linear arguments."""
    seen = {sp.S.Zero}
    for node in sp.preorder_traversal(f):
        argument = node.base if node.is_Pow and not node.exp.has(x) else node.args[0] if node.args else None
        if argument is None or not isinstance(argument, Expr) or not argument.has(x) or not argument.is_polynomial(x):
            continue
        polynomial = sp.Poly(sp.expand(argument), x)
        if polynomial.degree() not in (1, 2):
            continue
        lead, after = polynomial.all_coeffs()[:2]
        centre = sp.cancel(-after / lead / polynomial.degree())
        if centre not in seen:
            seen.add(centre)
            yield centre


def _logarithm(f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int) -> Found:
    """u = log x, when log x appears other than as a power of x."""
    if not f.has(sp.log) or not (lower == 0 or lower.is_positive):
        return None
    if not any(g.has(sp.log(x)) and g != sp.log(x) for g in logs.terms):
        return None
    ends = (-oo if lower == 0 else sp.log(lower), oo if upper == oo else sp.log(upper))
    u = sp.Dummy("u", positive=True) if ends[0] == 0 else sp.Dummy("u", real=True)
    moved = sp.exp(u) * sp.Mul(*(sp.exp(c * sp.expand_log(g.subs(x, sp.exp(u)), force=False)) for g, c in logs.terms.items()))
    found = _integral(moved, u, *ends, domain, depth)
    return found.times(logs.constant) if found is not None else None


def _exponential(f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int) -> Found:
    """v = exp(k*x), when exp(k*x) appears inside log f."""
    slopes = {sp.cancel(g.args[0] / x) for term in logs.terms for g in term.atoms(sp.exp) if g.has(x)}
    v = sp.Dummy("v", positive=True)
    for k in slopes:
        sign = domain.sign(k) if not k.has(x) else 0
        if not sign:
            continue
        moved = sp.Mul(*(sp.exp(c * g.subs(x, sp.log(v) / k)) for g, c in logs.terms.items())) / v
        ends = [sp.exp(sign * end if end.is_infinite else k * end) for end in (lower, upper)]
        found = _integral(moved, v, *ends[::sign], domain, depth)
        if found is not None:
            return found.times(logs.constant / (sign * k))
    return None


def _reflect(f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int) -> Found:
    """y = 1 - x on (0, 1); tried once, at the end of the chain."""
    if (lower, upper) != (0, 1) or depth == 0:
        return None
    y = sp.Dummy("y", positive=True)
    return _integral(_tidy(f.subs(x, 1 - y)), y, sp.S.Zero, sp.S.One, domain, 1)


def _halves(f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int) -> Found:
    """An even function of x: twice the integral over the right half."""
    if upper != -lower:
        return None
    y = sp.Dummy("y", positive=True)
    right, left = (f.subs(x, sign * y) for sign in (1, -1))
    if right != left:
        return None
    found = _integral(right, y, sp.S.Zero, upper, domain, depth)
    return found.times(sp.Integer(2)) if found is not None else None


def _term_by_term(f: Expr, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int) -> Found:
    """A sum: integrate each term."""
    terms = sp.Add.make_args(sp.expand(f))
    if not 1 < len(terms) <= 30:
        return None
    parts = []
    for term in terms:
        part = _integral(term, x, lower, upper, domain, depth)
        if part is None:
            return None
        parts.append(part)
    return total(parts, sharp=False)
