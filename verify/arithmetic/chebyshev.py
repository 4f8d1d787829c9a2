"""Polynomials near an analytic function on [0, 1], with a proven bound of the difference.

The function is bounded by M on an ellipse around the interval by complex balls, which also show that it is
analytic there. A polynomial that meets it at the Chebyshev points of degree d differs from it by at most
4 M rho**-d / (rho - 1).

Source: L. N. Trefethen, *Approximation Theory and Approximation Practice* (2013), Theorem 8.2.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from typing import Any

from flint import acb, arb, arb_poly, fmpq

from verify.arithmetic.ball import balls
from verify.errors import UndecidedError

Ball = Any
Function = Callable[[Any, bool], Any]
"""A function of a complex ball, and whether it must be analytic on the whole ball (else not finite)."""

ELLIPSES = tuple(Fraction(k, 100) for k in (102, 105, 110, 120, 135, 150, 200, 300, 450, 700, 1100, 1800))
"""Sums of the half axes that are tried, for the interval [-1, 1]."""

BOUND_BITS = 64
USUAL_BITS = 128
COLUMNS = 16
DEEPEST = 5
MOST_DEGREE = 2000
STRIDE = 4
"""Numbers of nodes are multiples of this, which suits the Fourier transform."""


@dataclass(frozen=True)
class Approximation:
    """A polynomial on [0, 1].

    Attributes
    ----------
    polynomial : arb_poly
        Its coefficients.
    error : ball
        Bound of abs(function - polynomial) on [0, 1].
    size, variation : ball
        Bounds of abs(polynomial), and of its total variation, the steps from and to 0 at the ends included.
    """

    polynomial: Any
    error: Ball
    size: Ball
    variation: Ball


def bounds_on_ellipses(function: Function) -> tuple[tuple[Fraction, Ball], ...]:
    """Return ellipses on which a function is analytic, each with a bound of it.

    Raises
    ------
    UndecidedError
        When the function was not bounded on any ellipse.
    """
    found: list[tuple[Fraction, Ball]] = []
    with balls(BOUND_BITS):
        for rho in ELLIPSES:
            bound = _bound_on_ellipse(function, rho)
            if bound is None:
                break
            found.append((rho, bound))
            least = min(_least_degree(other, r, USUAL_BITS)[0] for r, other in found)
            if _least_degree(bound, rho, USUAL_BITS)[0] > 2 * least:
                break
    if not found:
        raise UndecidedError(
            "the density of the statistic was not shown to be analytic up to the ends of its support, so the law of a "
            "sum of several observations is not enclosed; one observation would be"
        )
    return tuple(found)


def degree_for(bounds: tuple[tuple[Fraction, Ball], ...], bits: int) -> tuple[int, Ball]:
    """Return a degree whose error is below 2**-bits, by the best of some ellipses, and that error.

    Raises
    ------
    UndecidedError
        Beyond ``MOST_DEGREE``.
    """
    with balls(BOUND_BITS):
        degree, error = min((_least_degree(bound, rho, bits) for rho, bound in bounds), key=lambda pair: pair[0])
    if degree > MOST_DEGREE:
        raise UndecidedError(f"the density of the statistic needs a polynomial of degree {degree}")
    return degree, error


def approximate(function: Function, degree: int, error: Ball) -> Approximation:
    """Return the polynomial of a degree through the Chebyshev points, at the precision in force.

    Examples
    --------
    >>> with balls(100):
    ...     bounds = bounds_on_ellipses(lambda z, analytic: z.exp())
    ...     near = approximate(lambda z, analytic: z.exp(), *degree_for(bounds, 40))
    ...     print(near.polynomial(arb(1)).str(8, radius=False), near.polynomial.degree() < 32)
    2.7182818 True
    """
    count = -(-(degree + 1) // STRIDE) * STRIDE
    coefficients = _cosine_sums(function, count)
    sizes = [c.abs_upper() for c in coefficients]
    size = sum(sizes, arb(0))
    variation = 2 * size + sum((2 * k * c for k, c in enumerate(sizes)), arb(0))
    return Approximation(_clenshaw(coefficients), error, size, variation)


def _cosine_sums(function: Function, count: int) -> list[Ball]:
    """Coefficients in Chebyshev polynomials of the interpolant, by one discrete Fourier transform.

    With the values y_i at cos(pi (2 i + 1) / (2 N)) continued by y_(2N-1-i) = y_i, the transform Y_k is
    2 exp(i pi k / (2 N)) times the sum of y_i cos(pi k (2 i + 1) / (2 N)).
    """
    places = [arb.cos_pi_fmpq(fmpq(2 * i + 1, 2 * count)) for i in range(count)]
    values = [acb(function(acb((1 + place) / 2), False).real) for place in places]
    transform = acb.dft([*values, *reversed(values)])
    turns = [acb(arb.cos_pi_fmpq(fmpq(k, 2 * count)), -arb.sin_pi_fmpq(fmpq(k, 2 * count))) for k in range(count)]
    sums = [(turn * y).real / count for turn, y in zip(turns, transform, strict=False)]
    return [sums[0] / 2, *sums[1:]]


def _clenshaw(coefficients: list[Ball]) -> Any:
    """Sum of c_k T_k(2 y - 1) as a polynomial in y."""
    line = arb_poly([-1, 2])
    later, latest = arb_poly([0]), arb_poly([0])
    for c in reversed(coefficients[1:]):
        later, latest = arb_poly([c]) + 2 * line * later - latest, later
    return arb_poly([coefficients[0]]) + line * later - latest


def _least_degree(bound: Ball, rho: Fraction, bits: int) -> tuple[int, Ball]:
    ratio = arb(fmpq(rho.numerator, rho.denominator))
    front = 4 * bound / (ratio - 1)
    wanted = (front.log() / arb(2).log() + bits) / (ratio.log() / arb(2).log())
    degree = max(4, int(float(wanted.upper())) + 1)
    return degree, (front / ratio**degree).abs_upper()


def _bound_on_ellipse(function: Function, rho: Fraction) -> Ball | None:
    """Bound of the function on the ellipse, mapped from [-1, 1] to [0, 1]; None where none is found.

    A function that is real on the real line takes conjugate values below it.
    """
    largest = arb(0)
    for x, y in _cover(rho):
        value = _bound_on_box(function, x, y, DEEPEST)
        if value is None:
            return None
        largest = largest.max(value)
    return largest.abs_upper()


def _bound_on_box(function: Function, x: Ball, y: Ball, depth: int) -> Ball | None:
    value = function(acb(x, y), True)
    if value.is_finite():
        return abs(value).upper()
    if depth == 0:
        return None
    largest = arb(0)
    for left in _halves(x):
        for low in _halves(y):
            part = _bound_on_box(function, left, low, depth - 1)
            if part is None:
                return None
            largest = largest.max(part)
    return largest


def _halves(x: Ball) -> tuple[Ball, Ball]:
    middle = x.mid()
    return x.lower().union(middle), middle.union(x.upper())


@cache
def _cover(rho: Fraction) -> tuple[tuple[Ball, Ball], ...]:
    """Boxes that cover the upper half of the ellipse in [0, 1] coordinates."""
    with balls(BOUND_BITS):
        r = arb(fmpq(rho.numerator, rho.denominator))
        wide, high = ((r + 1 / r) / 2).upper(), ((r - 1 / r) / 2).upper()
        boxes = []
        for k in range(COLUMNS):
            left, right = wide * (2 * k - COLUMNS) / COLUMNS, wide * (2 * k + 2 - COLUMNS) / COLUMNS
            near = arb(0) if (2 * k - COLUMNS) * (2 * k + 2 - COLUMNS) <= 0 else abs(left).min(abs(right))
            inside = (1 - (near / wide) ** 2).max(arb(0))
            top = (high * inside.sqrt()).upper()
            x = ((1 + left) / 2).union((1 + right) / 2)
            rows = max(1, int(float(top) / (2 * float(wide) / COLUMNS)) + 1)
            boxes += [(x, (top * j / rows / 2).union(top * (j + 1) / rows / 2)) for j in range(rows)]
        return tuple(boxes)
