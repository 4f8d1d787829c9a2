"""Take a positive expression apart into a product of powers, and its logarithm into terms in one variable.

Splitting ``(a*b)**s`` into ``a**s * b**s`` is only true for positive a and b when s is not a whole number;
every split here is backed by a proof of positivity on a :class:`~verify.derivation.positivity.Domain`.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.positivity import Domain

Powers = dict[Expr, Expr]
"""Base -> exponent; the key ``E`` collects the exponentials."""


LARGEST_POWER = 40
"""Sums to a higher power than this are not multiplied out."""

PROVABLE_SIZE = 12
"""Up to so many operations the sign of a sum is proved when only its written form depends on it."""


def rebuild(powers: Mapping[Expr, Expr]) -> Expr:
    """Multiply the powers together again."""
    return sp.Mul(*(base**exponent for base, exponent in powers.items()))


def split(expr: Expr, domain: Domain, keep: Symbol | None = None) -> Powers:
    """Write ``expr`` as a product of powers with as small bases as positivity allows.

    A base ``a + b*keep**p`` is left whole.

    Examples
    --------
    >>> p = Symbol("p", positive=True)
    >>> split(sp.sqrt(6 * p) * sp.exp(-p), Domain())
    {2: 1/2, 3: 1/2, p: 1/2, E: -p}
    """
    powers: Powers = defaultdict(lambda: sp.S.Zero)
    _split(sp.sympify(expr), sp.S.One, domain, powers, keep)
    return {base: total for base, exponent in powers.items() if (total := sp.expand(exponent)) != 0}


def _split(expr: Expr, exponent: Expr, domain: Domain, out: Powers, keep: Symbol | None) -> None:
    if expr.is_Rational:
        _split_number(expr, exponent, out)
    elif isinstance(expr, sp.exp):
        out[sp.E] += sp.expand(expr.args[0] * exponent)
    elif expr.is_Mul:
        _split_product(expr, exponent, domain, out, keep)
    elif expr.is_Pow:
        base, inner = expr.as_base_exp()
        if exponent.is_integer or domain.positive(base):
            _split(base, inner * exponent, domain, out, keep)
        else:
            out[expr] += exponent
    elif expr.is_Add:
        factored = expr if _is_binomial(expr, keep) else _factor(expr)
        if factored.is_Mul or factored.is_Pow:
            _split(factored, exponent, domain, out, keep)
        else:
            _add_sum(expr, exponent, domain, out)
    else:
        out[expr] += exponent


def _add_sum(expr: Expr, exponent: Expr, domain: Domain, out: Powers) -> None:
    """A sum as a base: of a and -a keep the positive one, so that their powers meet."""
    if exponent.is_integer:
        known = domain.sign(expr) if expr.count_ops() <= PROVABLE_SIZE else 0
        sign = known or (-1 if expr.could_extract_minus_sign() else 1)
        if sign < 0:
            out[sp.S.NegativeOne] += exponent
            expr = sp.expand(-expr) if expr.is_polynomial() else -expr
    out[expr] += exponent


def _is_binomial(expr: Expr, x: Symbol | None) -> bool:
    """Tell whether a sum is ``a + b*x**p`` with a and b free of x."""
    if x is None or not expr.has(x):
        return False
    free, rest = expr.as_independent(x, as_Add=True)
    base, exponent = rest.as_independent(x, as_Add=False)[1].as_base_exp()
    return bool(free != 0 and base == x and not exponent.has(x))


def _factor(expr: Expr) -> Expr:
    """Pull a sum apart into factors, each of them in one fixed form (not when that means high powers)."""
    if any(abs(power.exp) > LARGEST_POWER for power in expr.atoms(sp.Pow) if power.exp.is_Integer):
        return expr
    found = sp.factor(expr) if expr.is_rational_function() else sp.factor_terms(sp.together(expr))
    return found if found.is_Mul or found.is_Pow else expr


def _split_number(number: sp.Rational, exponent: Expr, out: Powers) -> None:
    if number < 0:
        out[sp.S.NegativeOne] += exponent
        number = -number
    for part, sign in ((number.p, 1), (number.q, -1)):
        for prime, power in sp.factorint(part, limit=10**4).items():
            out[sp.Integer(prime)] += sign * power * exponent


def _split_product(expr: Expr, exponent: Expr, domain: Domain, out: Powers, keep: Symbol | None) -> None:
    if exponent.is_integer:
        for factor in expr.args:
            _split(factor, exponent, domain, out, keep)
        return
    signs = [domain.sign(factor) for factor in expr.args]
    left = [factor for factor, sign in zip(expr.args, signs, strict=True) if sign == 0]
    rest = sp.Mul(*left) if signs.count(-1) % 2 == 0 else -sp.Mul(*left)
    for factor, sign in zip(expr.args, signs, strict=True):
        if sign < 0 and not factor.is_Number and not factor.is_Add:
            out[-factor] += exponent
        elif sign:
            _split(sp.expand(-factor) if sign < 0 else factor, exponent, domain, out, keep)
    if rest != 1:
        out[rest] += exponent


@dataclass(frozen=True)
class LogTerms:
    """``f(x) = constant * exp(sum of coefficient * basis(x))``; constant and coefficients are free of x."""

    constant: Expr
    terms: dict[Expr, Expr]


def log_terms(expr: Expr, x: Symbol, domain: Domain) -> LogTerms:
    """Take the logarithm of ``expr`` apart into a constant and multiples of plain functions of x.

    A base ``a + b*g(x)`` becomes ``a * (1 + (b/a)*g(x))``, or ``b * (g(x) + a/b)`` when a is not positive.

    Examples
    --------
    >>> x, t = sp.symbols("x t", positive=True)
    >>> found = log_terms(t * sp.exp(-t * x) / sp.sqrt(t * x), x, Domain())
    >>> found.constant, found.terms[x], found.terms[sp.log(x)]
    (sqrt(t), -t, -1/2)
    """
    constant: Powers = defaultdict(lambda: sp.S.Zero)
    terms: Powers = defaultdict(lambda: sp.S.Zero)
    for base, exponent in split(expr, domain, x).items():
        if base.has(x):
            outer, inner = _normal_base(base, x, domain)
            exponents = [(outer, exponent), (inner, exponent)]
        else:
            exponents = [(base, exponent)]
        for part, power in exponents:
            _collect(part, power, x, domain, constant, terms)
    return LogTerms(rebuild(constant), {g: total for g, c in terms.items() if (total := sp.expand(c)) != 0})


def _collect(base: Expr, exponent: Expr, x: Symbol, domain: Domain, constant: Powers, terms: Powers) -> None:
    if base == 1:
        return
    if not base.has(x) and not exponent.has(x):
        constant[base] += exponent
        return
    logarithm = sp.S.One if base == sp.E else sp.log(base)
    for term in sp.Add.make_args(sp.expand(_open_logs(sp.expand(exponent * logarithm), x, domain))):
        coefficient, g = term.as_independent(x, as_Add=False)
        if g == 1:
            constant[sp.E] += coefficient
        else:
            scale, g = _normal_basis(g, x, domain)
            terms[g] += coefficient * scale


def _open_logs(expr: Expr, x: Symbol, domain: Domain) -> Expr:
    """Write log(c*x) as log(c) + log(x) inside an exponent, where both are positive."""
    logs = [g for g in expr.atoms(sp.log) if g.has(x) and (g.args[0].is_Mul or g.args[0].is_Pow)]
    opened = {
        g: sp.Add(*(e * sp.log(b) if b != sp.E else e for b, e in split(g.args[0], domain).items()))
        for g in logs
        if domain.positive(g.args[0])
    }
    return expr.xreplace(opened)


def _normal_base(base: Expr, x: Symbol, domain: Domain) -> tuple[Expr, Expr]:
    """Write a base as (free of x) * (plain in x)."""
    if not base.is_Add:
        return sp.S.One, base
    opened = sp.collect(sp.expand(base), x)
    free, rest = opened.as_independent(x, as_Add=True)
    if free != 0 and domain.positive(free):
        return free, 1 + sp.expand(rest / free)
    lead = sp.LC(sp.expand(base), x) if base.is_polynomial(x) else sp.S.One
    sign = domain.sign(lead)
    return (sign * lead, sp.collect(sp.expand(base / (sign * lead)), x)) if sign else (sp.S.One, base)


def _normal_basis(g: Expr, x: Symbol, domain: Domain) -> tuple[Expr, Expr]:
    """Write a function of x as (positive scale) * (plain function)."""
    if isinstance(g, sp.Abs):
        slope = sp.expand(g.args[0]).coeff(x, 1)
        sign = domain.sign(slope) if slope != 0 else 0
        if sign:
            return sign * slope, sp.Abs(sp.expand(g.args[0] / slope))
    return sp.S.One, g
