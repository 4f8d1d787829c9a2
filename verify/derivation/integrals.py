"""Closed forms of ``integral of f(x) dx`` by the shape of log f.

log f is taken apart into a constant and multiples of plain functions of x; what is known about such integrals
(:mod:`~verify.derivation.integral_kernels`) looks at the plain functions, never at which density it is. The
substitutions here (shift, scale, logarithm, exponential, splitting at a kink) bring other densities to
those shapes.
"""

from __future__ import annotations

from collections.abc import Iterator

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.closed import Closed, total
from verify.derivation.integral_kernels import known_integral
from verify.derivation.positivity import Domain
from verify.derivation.products import LogTerms, log_terms

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
    found = known_integral(logs.terms, x, lower, upper, here)
    if found is None:
        for change in (_split_at_kink, _shift, _logarithm, _exponential, _halves, _reflect):
            found = change(f, logs, x, lower, upper, domain, depth - 1)
            if found is not None:
                return found
        return _term_by_term(f, x, lower, upper, domain, depth - 1)
    return found.times(logs.constant)


# ---- substitutions: each returns the integral in the new variable


def _split_at_kink(
    f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int
) -> Found:
    """|x - c|: integrate on both sides of c."""
    inside = {g for g in f.atoms(sp.Abs) if g.has(x)}
    corners = {
        sp.expand(x - sp.expand(g.args[0]) / sp.expand(g.args[0]).coeff(x, 1))
        for g in inside
        if sp.expand(g.args[0]).coeff(x, 1) != 0
    }
    if len(corners) != 1 or (corner := corners.pop()).has(x):
        return None
    parts = []
    y = sp.Dummy("y", positive=True)
    for sign, reach in ((1, upper - corner), (-1, corner - lower)):
        if reach != oo and not domain.positive(reach):
            return None
        moved = f.xreplace({g: _open_abs(g, x, y, corner, sign, domain) for g in inside}).subs(
            x, corner + sign * y
        )
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
        if (
            argument is None
            or not isinstance(argument, Expr)
            or not argument.has(x)
            or not argument.is_polynomial(x)
        ):
            continue
        polynomial = sp.Poly(sp.expand(argument), x)
        if polynomial.degree() not in (1, 2):
            continue
        lead, after = polynomial.all_coeffs()[:2]
        centre = sp.cancel(-after / lead / polynomial.degree())
        if centre not in seen:
            seen.add(centre)
            yield centre


def _logarithm(
    f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int
) -> Found:
    """Take u = log x, when log x appears other than as a power of x."""
    if not f.has(sp.log) or not (lower == 0 or lower.is_positive):
        return None
    if not any(g.has(sp.log(x)) and g != sp.log(x) for g in logs.terms):
        return None
    ends = (-oo if lower == 0 else sp.log(lower), oo if upper == oo else sp.log(upper))
    u = sp.Dummy("u", positive=True) if ends[0] == 0 else sp.Dummy("u", real=True)
    moved = sp.exp(u) * sp.Mul(
        *(sp.exp(c * sp.expand_log(g.subs(x, sp.exp(u)), force=False)) for g, c in logs.terms.items())
    )
    found = _integral(moved, u, *ends, domain, depth)
    return found.times(logs.constant) if found is not None else None


def _exponential(
    f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int
) -> Found:
    """Take v = exp(k*x), when exp(k*x) appears inside log f."""
    slopes = {sp.cancel(g.args[0] / x) for term in logs.terms for g in term.atoms(sp.exp) if g.has(x)}
    v = sp.Dummy("v", positive=True)
    for k in slopes:
        sign = domain.sign(k) if not k.has(x) else 0
        if not sign:
            continue
        moved = sp.Mul(*(sp.exp(c * g.subs(x, sp.log(v) / k)) for g, c in logs.terms.items())) / v
        ends = [sp.exp(sign * end if end.is_infinite else k * end) for end in (lower, upper)]
        found = _integral(moved, v, ends[::sign][0], ends[::sign][1], domain, depth)
        if found is not None:
            return found.times(logs.constant / (sign * k))
    return None


def _reflect(
    f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int
) -> Found:
    """Take y = 1 - x on (0, 1); tried once, at the end of the chain."""
    if (lower, upper) != (0, 1) or depth == 0:
        return None
    y = sp.Dummy("y", positive=True)
    return _integral(_tidy(f.subs(x, 1 - y)), y, sp.S.Zero, sp.S.One, domain, 1)


def _halves(
    f: Expr, logs: LogTerms, x: Symbol, lower: Expr, upper: Expr, domain: Domain, depth: int
) -> Found:
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
