"""Powers of weight series: the n-fold sum of a lattice law, in balls and in exact fractions.

The masses of X1 + ... + Xn are the coefficients of the n-th power of the series of one mass function.
Coefficients up to a degree depend on coefficients up to that degree only, so cutting the series there loses
nothing. All weights are non-negative: no multiplication cancels, and every coefficient keeps its relative
accuracy.

Source: P. Henrici, *Applied and Computational Complex Analysis*, vol. 1 (1974), section 1.6 (powers of formal
power series).
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import lcm
from typing import Any

from flint import arb, arb_series, ctx, fmpz_poly

MAX_EXACT_BITS = 40_000_000
"""Exact coefficients beyond this many bits in all are not attempted."""


def ball_power(coefficients: Sequence[Any], n: int, length: int) -> list[Any]:
    """Return the first ``length`` coefficients of the n-th power of a series of balls.

    Parameters
    ----------
    coefficients : sequence of arb
        The series, constant term first.
    n : int
        A positive exponent.
    length : int
        How many coefficients to return.

    Examples
    --------
    >>> from flint import arb
    >>> [int(c.unique_fmpz()) for c in ball_power([arb(1), arb(1)], 4, 3)]
    [1, 4, 6]
    """
    kept = ctx.cap
    ctx.cap = length
    try:
        series = _binary_power(arb_series(list(coefficients[:length]), length), n)
        return [series[i] for i in range(length)]
    finally:
        ctx.cap = kept


def _binary_power(base: Any, n: int) -> Any:
    if n < 1:
        raise ValueError("a power of a weight series has a positive exponent")
    result = None
    while n:
        if n & 1:
            result = base if result is None else result * base
        n >>= 1
        if n:
            base = base * base
    return result


def exact_power(coefficients: Sequence[Fraction], n: int, length: int) -> tuple[list[int], int] | None:
    """Return the first coefficients of an n-th power as whole numerators over one denominator.

    Returns None where the numbers would fill more than ``MAX_EXACT_BITS`` bits.

    Examples
    --------
    >>> exact_power([Fraction(1, 2), Fraction(1, 3)], 2, 3)
    ([9, 12, 4], 36)
    """
    cut = list(coefficients[:length])
    denominator = lcm(*(c.denominator for c in cut))
    numerators = [c.numerator * (denominator // c.denominator) for c in cut]
    size = max(sum(numerators), denominator).bit_length() * n
    if size * min(length, n * len(cut)) > MAX_EXACT_BITS:
        return None
    power = _truncated_power(fmpz_poly(numerators), n, length)
    found = [int(power[i]) for i in range(length)]
    return found, denominator**n


def _truncated_power(base: Any, n: int, length: int) -> Any:
    if (len(base.coeffs()) - 1) * n < 2 * length:
        return base**n
    result = fmpz_poly([1])
    while n:
        if n & 1:
            result = _cut(result * base, length)
        n >>= 1
        if n:
            base = _cut(base * base, length)
    return result


def _cut(poly: Any, length: int) -> Any:
    return fmpz_poly(poly.coeffs()[:length])


def product_power(weights: Sequence[Any], n: int) -> list[Any]:
    """Return the n-fold convolution over products (Dirichlet convolution) of weights at 1, 2, ...,
    len(weights).

    Source: T. M. Apostol, *Introduction to Analytic Number Theory* (1976), section 2.6.

    Examples
    --------
    >>> product_power([1, 1, 1, 1, 1, 1], 2)  # the number of divisors
    [1, 2, 2, 3, 2, 4]
    """
    base, result = list(weights), None
    while n:
        if n & 1:
            result = base if result is None else _dirichlet(result, base)
        n >>= 1
        if n:
            base = _dirichlet(base, base)
    return result or []


def _dirichlet(left: list[Any], right: list[Any]) -> list[Any]:
    size = len(left)
    out: list[Any] = [left[0] * 0] * size
    for d, weight in enumerate(left, start=1):
        for m in range(1, size // d + 1):
            out[d * m - 1] = out[d * m - 1] + weight * right[m - 1]
    return out


def up_to(bound: Any) -> Any:
    """Return the ball that contains [0, bound] for a non-negative ball ``bound``."""
    return arb(0).union(bound.abs_upper())


def either_sign(bound: Any) -> Any:
    """Return the ball that contains [-bound, bound]."""
    return arb(0, bound.abs_upper())
