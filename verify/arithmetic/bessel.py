"""K0 at z and at -z in the upper half-plane, from two power series evaluated together.

With w = z**2 / 4: I0(z) = sum of w**k / k!**2 and K0(z) = -(log(z/2) + gamma) I0(z) + sum of H_k w**k / k!**2
(DLMF 10.31.2), H_k the harmonic numbers. For Re z >= 0 the two parts cancel by exp(2 |z|), which more bits
make good; K0(-z) = K0(z) + pi i I0(z) (DLMF 10.34.2) does not cancel. Far out, Arb's asymptotic series serves.

Beyond term N with N**2 >= 2 |w| each term is at most half the one before (H_k <= k), so the rest is below
2 N |w|**N / N!**2.
"""

from __future__ import annotations

from functools import lru_cache
from math import lgamma, log
from typing import Any

from flint import acb, acb_poly, arb

from verify.arithmetic.ball import balls
from verify.arithmetic.series import either_sign

ComplexBall = Any
FAR = 0.7
"""Arb takes its asymptotic series from about so many times the precision on."""

STEP = 32
"""Bits and numbers of terms are rounded up to this, so that neighbours share their coefficients."""


def k0_both(z: ComplexBall, prec: int) -> tuple[ComplexBall, ComplexBall]:
    """Return K0(-z) and K0(z) to full relative accuracy, for Im z > 0.

    Examples
    --------
    >>> with balls(80):
    ...     minus, plus = k0_both(acb(1, 2), 80)
    ...     print(abs(plus - acb(1, 2).bessel_k(acb(0))) < 1e-20, abs(minus - acb(-1, -2).bessel_k(acb(0))) < 1e-20)
    True True
    """
    if not z.real >= 0:
        with balls(max(prec, z.bits())):
            mirrored = acb(-z.real, z.imag)
        minus, plus = k0_both(mirrored, prec)
        return plus.conjugate(), minus.conjugate()
    size = float(abs(z).upper())
    if size > FAR * prec:
        minus, plus = (-z).bessel_k(acb(0)), z.bessel_k(acb(0))
        if min(minus.rel_accuracy_bits(), plus.rel_accuracy_bits()) > prec - 24:
            return minus, plus
    with balls(_up(prec + 16 + int(3 * size))) as A:
        i0, harmonic = _series(z, size, A.prec)
        plus = harmonic - ((z / 2).log() + arb.const_euler()) * i0
        minus = plus + acb(0, arb.pi()) * i0
    return minus + 0, plus + 0


def _series(z: ComplexBall, size: float, prec: int) -> tuple[ComplexBall, ComplexBall]:
    w, terms = z * z / 4, _terms(size, prec)
    first, second = _coefficients(terms, prec)
    bound = 2 * terms * (abs(w).upper() ** terms / arb.fac_ui(terms) ** 2)
    rest = either_sign(bound)
    return first(w) + acb(rest, rest), second(w) + acb(rest, rest)


def _terms(size: float, prec: int) -> int:
    """A number of terms N with N**2 >= 2 |w| whose rest is below about 2**-prec."""
    terms, log_w = _up(int(size) + 8), 2 * log(size / 2) if size > 0 else -100.0
    while terms * log_w - 2 * lgamma(terms + 1) + log(2.0 * terms) > -prec * log(2.0):
        terms += STEP
    return terms


@lru_cache(maxsize=256)
def _coefficients(terms: int, prec: int) -> tuple[Any, Any]:
    """1 / k!**2 and H_k / k!**2 for k < terms, in balls of ``prec`` bits."""
    plain, harmonic, term, h = [], [], arb(1), arb(0)
    for k in range(terms):
        if k:
            term = term / (k * k)
            h = h + arb(1) / k
        plain.append(acb(term))
        harmonic.append(acb(h * term))
    return acb_poly(plain), acb_poly(harmonic)


def _up(number: int) -> int:
    return -(-number // STEP) * STEP
