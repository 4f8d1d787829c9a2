"""Bounds for what is cut from an infinite lattice, through the normalisation at a second parameter value.

For parameter values t, t' of one family, mass(y; t) / mass(y; t') = C * rho**y. Where rho < 1 this ratio
falls with y, so

    P_t(Y > b) = sum over y > b of C rho**y mass(y; t') <= C rho**(b+1) * P_t'(Y > b) <= C rho**(b+1),

since the masses at t' sum to one. The lower tail is the same with rho > 1. Nothing is estimated: the bound
holds for every t' of the parameter space, and the best of a few is taken.

Source: H. Chernoff, *Ann. Math. Statist.* 23 (1952) 493-507 (the bound); the argument above is the proof
used.
"""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, midpoint, to_fraction

if TYPE_CHECKING:
    from verify.laws.atoms import Atoms
    from verify.problem.numbers import Exact

RATIO_BITS = 128


def candidates(at: Exact, space: tuple[Any, Any], *, far: bool = False) -> list[Fraction]:
    """Return some rational parameter values on both sides of ``at``, inside the space; ``far`` adds distant ones."""
    with balls(RATIO_BITS) as A:
        value = _rounded(to_fraction(midpoint(A.real(at))))
        lower, upper = (None if end is None else to_fraction(midpoint(A.real(end))) for end in space)
    steps = [Fraction(1, 8), Fraction(1, 2), Fraction(1), Fraction(2), Fraction(4)]
    steps += [Fraction(8), Fraction(16), Fraction(32)] if far else []
    out = [value + s * k for k in steps for s in (1, -1)]
    for end in (lower, upper):
        if end is not None:
            gap = end - value
            out += [_rounded(value + gap * Fraction(k, 8)) for k in (-24, -8, -4, 1, 2, 4, 6, 7)]
            out += [_rounded(value + gap * (1 - Fraction(1, 2**k))) for k in (5, 7)]
    return sorted({t for t in out if (lower is None or t > lower) and (upper is None or t < upper)})


def _rounded(value: Fraction) -> Fraction:
    scale = 2 ** max(0, 24 - (value.numerator.bit_length() - value.denominator.bit_length()))
    return Fraction(round(value * scale), scale)


def cut(atoms: Atoms, at: Exact, bits: int, *, upper: bool) -> tuple[int, Any] | None:
    """Return where one observation may be cut, and the ball bounding the mass beyond; None where no bound is
    found.

    The mass of Y > place (``upper``) or Y < place is below 2**-bits.
    """
    best: tuple[int, Any] | None = None
    near = atoms.first if atoms.first is not None else 0
    with balls(RATIO_BITS) as A:
        for other in candidates(at, atoms.space):
            C, rho = atoms.ratio(A, at, other, near)
            found = _place(A, C, rho, bits, upper=upper)
            if found is not None and (best is None or (found[0] < best[0] if upper else found[0] > best[0])):
                best = found
    return best


def _place(A: Any, C: Any, rho: Any, bits: int, *, upper: bool) -> tuple[int, Any] | None:
    falls = rho < 1 if upper else rho > 1
    if not falls:
        return None
    size = abs(A.log(rho))
    needed = (A.log(C) + A.real(bits) * A.log(A.real(2))) / size
    distance = int(to_fraction(needed.upper())) + 2
    place = distance if upper else -distance
    beyond = place + 1 if upper else place - 1
    bound = C * A.power(rho, A.real(beyond))
    return place, bound.upper()
