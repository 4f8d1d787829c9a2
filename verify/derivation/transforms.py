"""Recognises transforms whose inversion can be bounded: each match is proved by a derivative that vanishes.

Source: DLMF 10.32.1 (I0), 5.12.1 (beta function); Morris 1982 (secant).
"""

from __future__ import annotations

from fractions import Fraction

import sympy as sp
from sympy import Expr, Symbol

from verify.arithmetic.transforms import Bessel, GammaRatio, Secant, Transform
from verify.derivation.certain import sign_at
from verify.derivation.factorisation import Factorisation
from verify.derivation.zero import is_zero
from verify.errors import SidecheckError
from verify.problem.density import Density
from verify.problem.numbers import Exact, as_exact

LOOKS = (sp.Rational(1, 3), sp.Rational(-5, 4), sp.Integer(3))
"""Where two log transforms are compared in balls; outside their domain nothing is concluded."""


def transform_of(density: Density, found: Factorisation) -> Transform | None:
    """Return the transform of one T, or None when it is of no kind that is known here."""
    t, z = density.t, Symbol("z", real=True)
    back = _natural_inverse(found.natural_parameter, t, z)
    if back is None:
        return None
    log_transform = sp.expand_log(found.log_normaliser.subs(t, back))
    for recognise in (_bessel, _secant, _gamma_ratio):
        transform = recognise(log_transform, z, density, found)
        if transform is not None:
            return transform
    return None


def _natural_inverse(natural: Expr, t: Symbol, z: Symbol) -> Expr | None:
    slope = sp.diff(natural, t)
    if slope.has(t) or slope == 0:
        return None
    return (z - sp.expand(natural - slope * t)) / slope


def _same(first: Expr, second: Expr, z: Symbol) -> bool:
    """Whether two log transforms differ by a constant; a look in balls spares the algebra where they do not."""
    slope = sp.diff(first - second, z)
    try:
        if any(sign_at(slope, {z: point}) for point in LOOKS):
            return False
    except SidecheckError:
        pass  # a function that balls do not know: only algebra can tell
    return is_zero(slope)


def _bessel(log_transform: Expr, z: Symbol, density: Density, found: Factorisation) -> Transform | None:
    if not log_transform.has(sp.besseli):
        return None
    return Bessel() if _same(log_transform, sp.log(sp.besseli(0, z)), z) else None


def _secant(log_transform: Expr, z: Symbol, density: Density, found: Factorisation) -> Transform | None:
    for node in log_transform.atoms(sp.cos):
        inner = node.args[0]
        omega = sp.diff(inner, z)
        if omega.has(z) or omega == 0:
            continue
        size = sp.diff(log_transform, z) / (omega * sp.tan(inner))
        r = _constant(size, z)
        if r is None or not _same(log_transform, -r * sp.log(node), z):
            continue
        phase = sp.expand(inner - omega * z)
        ends = sorted(((s * sp.pi / 2 - phase) / omega for s in (1, -1)), key=lambda end: sp.N(end, 30))
        return Secant(_plain(r), _plain(omega), _plain(phase), Fraction(0), *map(_plain, ends))
    return None


def _constant(expr: Expr, z: Symbol) -> Expr | None:
    """The expression in a form without z, the cheap forms first; None when none was found."""
    for form in (lambda e: e, lambda e: sp.cancel(e.replace(sp.tan, lambda w: sp.sin(w) / sp.cos(w))), sp.simplify):
        expr = form(expr)
        if not expr.has(z):
            return expr
    return None


def _plain(value: Expr) -> Exact | int:
    number = as_exact(value)
    return int(number) if isinstance(number, Fraction) and number.denominator == 1 else number


def _gamma_ratio(log_transform: Expr, z: Symbol, density: Density, found: Factorisation) -> Transform | None:
    ends = _gamma_arguments(log_transform.rewrite(sp.gamma), z) or _pole_ends(log_transform, z)
    if ends is None:
        return None
    a, b = ends
    if not (b - a).is_positive or not _same(log_transform, sp.loggamma(z + a) - sp.loggamma(z + b), z):
        return None
    return GammaRatio(as_exact(a), as_exact(b))


def _gamma_arguments(log_transform: Expr, z: Symbol) -> tuple[Expr, Expr] | None:
    nodes = [n for n in log_transform.atoms(sp.gamma, sp.loggamma) if n.has(z)]
    shifts = {sp.expand(n.args[0] - z) for n in nodes}
    if len(shifts) != 2 or any(shift.has(z) for shift in shifts):
        return None
    low, high = sorted(shifts, key=lambda shift: sp.N(shift, 30))
    return low, high


def _pole_ends(log_transform: Expr, z: Symbol) -> tuple[Expr, Expr] | None:
    """A rational transform 1/((z + a) ... (z + b - 1)), which is a ratio of gamma functions."""
    slope = sp.together(sp.diff(log_transform, z))
    if not slope.is_rational_function(z):
        return None
    poles = sp.roots(sp.Poly(sp.fraction(slope)[1], z))
    if not poles or any(not pole.is_real for pole in poles):
        return None
    shifts = sorted((-pole for pole in poles), key=lambda shift: sp.N(shift, 30))
    return shifts[0], shifts[-1] + 1
