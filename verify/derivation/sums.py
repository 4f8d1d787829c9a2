"""Closed forms of ``sum of f(x)`` over whole numbers, from the ratio of neighbouring terms.

When f(x+1)/f(x) is a rational function of x, the sum is f(first) times a generalised hypergeometric series
whose parameters can be read off the ratio (Petkovsek, Wilf and Zeilberger, "A = B", 1996, chapter 3).
Zeta-like sums, Abel's sum and the generating function of the Bessel functions are recognised by the shape
of log f.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.closed import Closed, by_gamma, total
from verify.derivation.positivity import Domain
from verify.derivation.products import LogTerms, log_terms, split

Found = Closed | None

oo = sp.oo
LONGEST_PREFIX = 60
"""How many terms are added one by one, at most, when a sum starts late or stops early."""


def series(f: Expr, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """Return the sum of ``f`` over the whole numbers from ``lower`` to ``upper``, or None when no rule fits.

    The caller proves the conditions of the result.

    Examples
    --------
    >>> x = Symbol("x", integer=True, nonnegative=True)
    >>> t = Symbol("t", positive=True)
    >>> series(t**x / sp.factorial(x), x, sp.S.Zero, sp.oo, Domain({t: (sp.S.Zero, sp.oo)})).value
    exp(t)
    """
    if lower == -oo:
        return _two_sided(f, x, upper, domain)
    found = _one_sided(f, x, lower, upper, domain)
    if found is None and upper.is_Integer and upper - lower <= LONGEST_PREFIX:
        terms = (f.subs(x, lower + k) for k in range(int(upper - lower) + 1))
        return Closed(sp.Add(*terms), (), ("finitely many terms, added",))
    return found


def _one_sided(f: Expr, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    here = domain.having(x, lower - sp.Rational(1, 2), upper + sp.Rational(1, 2))
    found = hypergeometric_sum(f, x, lower, upper, here)
    if found is None and upper == oo:
        logs = log_terms(by_gamma(f), x, here)
        for rule in (_zeta, _abel):
            found = rule(logs, x, lower, here)
            if found is not None:
                return found.times(logs.constant)
    if found is None:
        found = _term_by_term(f, x, lower, upper, domain)
    return found


def _term_by_term(f: Expr, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    terms = sp.Add.make_args(sp.expand(f))
    if not 1 < len(terms) <= 30:
        return None
    parts = []
    for term in terms:
        part = _one_sided(term, x, lower, upper, domain)
        if part is None:
            return None
        parts.append(part)
    return total(parts, sharp=False)


# ---- the ratio of neighbouring terms


@dataclass(frozen=True)
class Ratio:
    """``f(x+1)/f(x) = scale * prod (x + a) / prod (x + b)``, a in ``above`` and b in ``below``."""

    scale: Expr
    above: tuple[Expr, ...]
    below: tuple[Expr, ...]

    def at(self, x: Expr) -> Expr:
        """The ratio f(x+1)/f(x) at a point."""
        return self.scale * sp.Mul(*(x + a for a in self.above)) / sp.Mul(*(x + b for b in self.below))


def term_ratio(f: Expr, x: Symbol, domain: Domain) -> Ratio | None:
    """Return f(x+1)/f(x) in factored form when it is a rational function of x, else None.

    Examples
    --------
    >>> x, t = Symbol("x", integer=True, nonnegative=True), Symbol("t", positive=True)
    >>> term_ratio(t**x / sp.factorial(x), x, Domain())
    Ratio(scale=t, above=(), below=(1,))
    """
    scale, rational = sp.S.One, sp.S.One
    moving = f.as_independent(x, as_Add=False)[1].replace(
        sp.binomial, lambda n, k: _binomial_up_to_constant(n, k, x)
    )
    for base, exponent in split(by_gamma(moving), domain).items():
        if not base.has(x):
            step = sp.expand(exponent.subs(x, x + 1) - exponent)
            if step.has(x):
                return None
            scale *= base**step
            continue
        if not exponent.is_Integer:
            return None
        part = _gamma_step(base, x) if isinstance(base, sp.gamma) else _rational_step(base, x)
        if part is None:
            return None
        rational *= part**exponent
    return _factored(scale, rational, x)


def _binomial_up_to_constant(n: Expr, k: Expr, x: Symbol) -> Expr:
    """C(n, k) without n!, which cancels in the ratio and is huge for many trials."""
    if n.has(x) or not n.is_nonnegative:
        return sp.binomial(n, k)
    return 1 / (sp.gamma(k + 1) * sp.gamma(n - k + 1))


def _gamma_step(base: Expr, x: Symbol) -> Expr | None:
    """gamma(k*x + b) at x + 1 over that at x, for a whole number k (DLMF 5.5.1)."""
    argument = sp.expand(base.args[0])
    slope = argument.coeff(x, 1)
    if not slope.is_Integer or sp.expand(argument - slope * x).has(x):
        return None
    if slope > 0:
        return sp.Mul(*(argument + i for i in range(int(slope))))
    return 1 / sp.Mul(*(argument - i for i in range(1, -int(slope) + 1)))


def _rational_step(base: Expr, x: Symbol) -> Expr | None:
    return base.subs(x, x + 1) / base if base.is_rational_function(x) else None


def _factored(scale: Expr, rational: Expr, x: Symbol) -> Ratio | None:
    sides = []
    for side in sp.fraction(sp.cancel(sp.together(rational))):
        lead, factors = sp.factor_list(side, x)
        roots: list[Expr] = []
        for factor, multiplicity in factors:
            polynomial = sp.Poly(factor, x)
            if polynomial.degree() != 1:
                return None
            slope, free = polynomial.all_coeffs()
            lead *= slope**multiplicity
            roots += [sp.cancel(free / slope)] * multiplicity
        sides.append((lead, tuple(roots)))
    (top, above), (bottom, below) = sides
    return Ratio(scale * top / bottom, above, below)


# ---- hypergeometric series


def hypergeometric_sum(f: Expr, x: Symbol, lower: Expr, upper: Expr, domain: Domain) -> Found:
    """Sum a hypergeometric term: extend it to its natural first point, and take the extra terms off again."""
    ratio = term_ratio(f, x, domain)
    if ratio is None:
        return None
    lower, first = _first_term(f, x, lower, upper)
    if first.has(sp.nan, sp.zoo, oo) or first == 0:
        return None
    start = _natural_start(ratio, lower)
    if start is None:
        found = _known_series(ratio, lower, upper)
        return found.times(first) if found is not None else None
    extra, term = sp.S.Zero, first
    for k in range(int(lower - start)):
        term = term / ratio.at(lower - 1 - k)
        extra += term
    found = _known_series(ratio, start, upper)
    if found is None:
        return None
    return Closed(term * found.value - extra, found.conditions, found.sources)


def _first_term(f: Expr, x: Symbol, lower: Expr, upper: Expr) -> tuple[Expr, Expr]:
    """The first point at which f is not identically zero, with its term."""
    for k in range(LONGEST_PREFIX):
        first = f.subs(x, lower + k)
        if first != 0 or lower + k == upper:
            break
    return lower + k, first


def _natural_start(ratio: Ratio, lower: Expr) -> Expr | None:
    """The point before which all terms vanish, not far below ``lower`` and reached without a zero ratio."""
    if not lower.is_Integer:
        return None
    starts = [1 - b for b in ratio.below if b.is_Integer and 0 <= lower - (1 - b) <= LONGEST_PREFIX]
    if not starts:
        return None
    start = max(starts)
    blocked = any(a.is_Integer and start <= -a < lower for a in ratio.above)
    return None if blocked else start


def _known_series(ratio: Ratio, start: Expr, upper: Expr) -> Found:
    """The sum of the terms from ``start`` on, the first of them being 1."""
    above = [sp.expand(a + start) for a in ratio.above]
    below = [sp.expand(b + start) for b in ratio.below]
    if sp.S.One in below:
        below.remove(sp.S.One)
    else:
        above.append(sp.S.One)
    ends = [-a for a in above if a.is_Integer and a <= 0]
    stop = min(ends) if ends else oo
    if stop > upper - start or any(b.is_Integer and b <= 0 for b in below):
        return None
    shape = (len(above), len(below))
    rule = SERIES.get(shape)
    return rule(above, below, ratio.scale, stop) if rule is not None else None


def _exponential(above: list[Expr], below: list[Expr], z: Expr, stop: Expr) -> Found:
    return Closed(sp.exp(z), (), ("exponential series, DLMF 4.2.19",))


def _binomial(above: list[Expr], below: list[Expr], z: Expr, stop: Expr) -> Found:
    if stop == oo and z == 1:
        return Closed(sp.S.Zero, (-above[0],), ("Gauss, DLMF 15.4.20",))
    if stop == oo and z == -1:
        return None
    name = "binomial theorem" if stop != oo else "geometric series" if above[0] == 1 else "binomial series"
    conditions = () if stop != oo else (1 - z, 1 + z)
    return Closed((1 - z) ** (-above[0]), conditions, (f"{name}, DLMF 15.4.6",))


def _bessel(above: list[Expr], below: list[Expr], z: Expr, stop: Expr) -> Found:
    b = below[0]
    value = sp.gamma(b) * z ** ((1 - b) / 2) * sp.besseli(b - 1, 2 * sp.sqrt(z))
    return Closed(value, (), ("Bessel I series, DLMF 10.39.9",))


def _gauss(above: list[Expr], below: list[Expr], z: Expr, stop: Expr) -> Found:
    (a, b), c = above, below[0]
    if z == 1 and stop != oo:
        n, other = stop, b if a == -stop else a
        return Closed(sp.rf(c - other, n) / sp.rf(c, n), (), ("Chu-Vandermonde, DLMF 15.4.24",))
    if z == 1:
        value = sp.gamma(c) * sp.gamma(c - a - b) / (sp.gamma(c - a) * sp.gamma(c - b))
        return Closed(value, (c - a - b,), ("Gauss, DLMF 15.4.20",))
    if z == -1 and stop == oo:
        return None
    if (a, b, c) == (1, 1, 2):
        return Closed(-sp.log(1 - z) / z, (1 - z, 1 + z), ("logarithmic series, DLMF 15.4.1",))
    conditions = () if stop != oo else (1 - z, 1 + z)
    return Closed(sp.hyper(above, below, z), conditions, ("hypergeometric series, DLMF 15.2.1",))


def _entire(above: list[Expr], below: list[Expr], z: Expr, stop: Expr) -> Found:
    return Closed(sp.hyper(above, below, z), (), ("hypergeometric series, DLMF 16.2.1",))


SERIES: dict[tuple[int, int], Callable[[list[Expr], list[Expr], Expr, Expr], Found]] = {
    (0, 0): _exponential,
    (1, 0): _binomial,
    (0, 1): _bessel,
    (2, 1): _gauss,
    (1, 1): _entire,
}


# ---- sums that are not hypergeometric


def _zeta(logs: LogTerms, x: Symbol, lower: Expr, domain: Domain) -> Found:
    """(x + a)**(-s), and z**x * x**(-s): DLMF 25.2.1, 25.11.1, 25.12.10."""
    logarithms = [g for g in logs.terms if isinstance(g, sp.log)]
    if len(logarithms) != 1 or set(logs.terms) - set(logarithms) - {x}:
        return None
    inner = logarithms[0].args[0]
    slope = sp.expand(inner).coeff(x, 1)
    offset = sp.cancel(inner / slope - x) if slope != 0 else x
    if offset.has(x):
        return None
    s, z = -logs.terms[logarithms[0]], sp.exp(logs.terms.get(x, sp.S.Zero))
    outer, first = slope ** (-s), sp.expand(lower + offset)
    if x not in logs.terms:
        value = sp.zeta(s) if first == 1 else sp.zeta(s, first)
        return Closed(outer * value, (s - 1,), ("zeta function, DLMF 25.2.1 and 25.11.1",))
    if first == 1 and offset.is_Integer:
        return Closed(outer * z ** (-offset) * sp.polylog(s, z), (1 - z,), ("polylogarithm, DLMF 25.12.10",))
    return None


def _abel(logs: LogTerms, x: Symbol, lower: Expr, domain: Domain) -> Found:
    """Abel's sum: sum of r*(r + j)**(j - 1) * (m*exp(-m))**j / j! = exp(r*m) for 0 < m <= 1.

    Source: Consul and Famoye, "Lagrangian Probability Distributions" (2006), section 2.2; Borel 1942 for r
    = 1.
    """
    terms = dict(logs.terms)
    mixed = [g for g in terms if g.is_Mul and x in g.args and len(g.args) == 2]
    gammas = [g for g in terms if isinstance(g, sp.log) and isinstance(g.args[0], sp.gamma)]
    if len(mixed) != 1 or len(gammas) != 1 or terms.pop(mixed[0]) != 1 or terms.pop(gammas[0]) != -1:
        return None
    inner = (mixed[0] / x).args[0]
    slope, j = sp.expand(inner).coeff(x, 1), x - lower
    r = sp.cancel((inner / slope).subs(x, lower)) if slope != 0 else x
    if r.has(x) or sp.expand(inner - slope * (j + r)) != 0:
        return None
    # Bring powers of x + (a whole number) and the gamma function to (r + j)**(j - 1) / j!.
    rate = terms.pop(x, sp.S.Zero) + sp.log(slope)
    rest = sp.Mul(*(sp.exp(c * g) for g, c in terms.items())) / gammas[0].args[0]
    wanted = (r + j) ** (-1 - lower) / sp.gamma(j + 1)
    return _abel_value(sp.gammasimp(rest / wanted), rate, r, lower, slope, x, domain)


def _abel_value(
    rest: Expr, rate: Expr, r: Expr, lower: Expr, slope: Expr, x: Symbol, domain: Domain
) -> Found:
    rest = sp.simplify(rest)
    if rest.has(x):
        return None
    m = _inverse_of_m_exp_minus_m(rate, domain)
    source = "Abel's sum, Consul and Famoye 2006, section 2.2"
    conditions = (r, sp.exp(-1) - sp.exp(rate)) if m.has(sp.LambertW) else (r,)
    return Closed(rest * sp.exp(rate * lower) * sp.exp(r * m) / r, conditions, (source,))


def _inverse_of_m_exp_minus_m(rate: Expr, domain: Domain) -> Expr:
    """The m in (0, 1] with m*exp(-m) = exp(rate)."""
    for candidate in [sp.exp(part) for part in sp.Add.make_args(rate)] + [
        -part for part in sp.Add.make_args(rate)
    ]:
        if sp.expand_log(sp.log(candidate) - candidate - rate) == 0 and _at_most_one(candidate, domain):
            return candidate
    return -sp.LambertW(-sp.exp(rate))


def _at_most_one(m: Expr, domain: Domain) -> bool:
    return domain.positive(m) and (m == 1 or domain.positive(1 - m))


def _two_sided(f: Expr, x: Symbol, upper: Expr, domain: Domain) -> Found:
    """All whole numbers (or all up to ``upper``): Bessel generating function, else both halves."""
    if upper != oo:
        y = Symbol("y", integer=True)
        return series(f.subs(x, -y), y, -upper, oo, domain)
    found = _bessel_generating(f, x, domain)
    if found is not None:
        return found
    y = sp.Dummy("y", integer=True, positive=True)
    z = sp.Dummy("z", integer=True, nonnegative=True)
    right = series(f.subs(x, z), z, sp.S.Zero, oo, domain)
    left = series(f.subs(x, -y), y, sp.S.One, oo, domain) if right is not None else None
    return total((right, left), sharp=True) if right is not None and left is not None else None


def _bessel_generating(f: Expr, x: Symbol, domain: Domain) -> Found:
    """The sum of w**x * I_x(z) = exp(z*(w + 1/w)/2), with I_{-x} = I_x: DLMF 10.35.1 and 10.27.1."""
    scale, constant, z = sp.S.One, sp.S.One, None
    for base, exponent in split(f, domain).items():
        if (
            isinstance(base, sp.besseli)
            and base.args[0] in (x, -x, sp.Abs(x))
            and exponent == 1
            and z is None
        ):
            z = base.args[1]
        elif base.has(x) or sp.expand(exponent).coeff(x, 2) != 0 or not exponent.is_polynomial(x):
            return None
        else:
            slope = sp.expand(exponent).coeff(x, 1)
            scale, constant = scale * base**slope, constant * base ** sp.expand(exponent - slope * x)
    if z is None or z.has(x) or constant.has(x):
        return None
    value = constant * sp.exp(z * (scale + 1 / scale) / 2)
    return Closed(value, (), ("Bessel generating function, DLMF 10.35.1",))
