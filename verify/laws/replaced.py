"""The density of one continuous statistic replaced by a polynomial on an interval, and what that changes."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import log, log2
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, midpoint, to_fraction
from verify.arithmetic.chebyshev import BOUND_BITS, Approximation, approximate, bounds_on_ellipses, degree_for
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.polynomial_sum import CUMULATIVE, DENSITY, TWICE, PolynomialSum, reflected
from verify.arithmetic.quadrature import integrand
from verify.arithmetic.series import either_sign, up_to
from verify.errors import UndecidedError
from verify.laws.shape import Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

Number = Any
GRID = 64
"""Bits are rounded up to this, so that nearby precisions share one polynomial."""

FIRST_LOST = 2.3
"""A first guess at the bits that the convolution of n copies cancels for each degree, with half the logarithm of n."""

SPARE = 32
"""Bits to spare of what is expected to be cancelled."""

MOST_DOUBLINGS = 6
FARTHEST = 12
"""How many doublings of the standard deviation a point of a half-line may lie from its end."""


@dataclass(frozen=True)
class Stretch:
    """Where the density is replaced.

    Attributes
    ----------
    low, high : Exact
        Its ends.
    beyond : ball
        Bound of the mass outside.
    low_cut, high_cut : bool
        Whether the support goes on beyond an end.
    """

    low: Any
    high: Any
    beyond: Number
    low_cut: bool
    high_cut: bool


@dataclass(frozen=True, eq=False)
class Replaced:
    """The sum of n observations after the replacement.

    Attributes
    ----------
    one, at, n
        The observation, the parameter value, the number of observations.
    bits : int
        The errors of replacement are below about 2**-bits.
    interval : Stretch
        Where the polynomial stands.
    """

    one: Shape
    at: Exact
    n: int
    bits: int
    interval: Stretch

    def read(self, v: Number, kind: int, *, from_low: bool, moved: Number | None = None) -> Number:
        """Return, at v from one end: the density, the probability of that side, or E[(v - V)+] (E[(V - v)+]).

        ``moved`` is a ball around 0 by which v may move (density only).
        """
        settled = ("precision", self.at, self.n, self.bits, self.interval)
        precision = self.one.cache.get(settled) or self.bits + SPARE + int(self._lost() * self.degree()[0])
        for _ in range(MOST_DOUBLINGS):
            with balls(precision) as A:
                low, high = A.real(self.interval.low), A.real(self.interval.high)
                width = high - low
                x = ((v - self.n * low) if from_low else (self.n * high - v)) / width
                near = self._approximation(A)
                value = self._sum(A, near, from_low=from_low).value(x, kind)
                self.one.cache[settled] = precision
                if value.is_finite():
                    self._remember_lost(precision - _bits_of(value.rad()))
                if value.is_finite() and value.rad() < A.power(A.real(2), -self.bits):
                    slack = self._slack(A, near, x, kind, v)
                    if moved is not None:
                        slack += self._change(A, near, abs(moved) / width)
                    value = value + either_sign(slack)
                    return value / width if kind == DENSITY else value * width if kind == TWICE else value
            lost = precision - _bits_of(value.rad()) if value.is_finite() else 2 * (precision - self.bits)
            precision = max(precision, self.bits + lost) + SPARE
        raise UndecidedError(f"the convolution of {self.n} densities cancels beyond {precision} bits")

    def _lost(self) -> float:
        """Bits that the convolution of so many observations cancels for each degree: what was seen, or a guess."""
        seen: float = self.one.cache.get(("lost", self.n), FIRST_LOST + log2(self.n) / 2)
        return seen

    def _remember_lost(self, bits: int) -> None:
        self.one.cache["lost", self.n] = max(bits / self.degree()[0], self.one.cache.get(("lost", self.n), 0.0))

    def _approximation(self, A: Any) -> Approximation:
        key = ("near", self.at, self.bits, self.interval, A.prec)
        cache = self.one.cache
        if key not in cache:
            cache[key] = approximate(self._function(A), *self.degree())
        found: Approximation = cache[key]
        return found

    def degree(self) -> tuple[int, Number]:
        """Return the degree of the polynomial, and its error.

        Raises
        ------
        UndecidedError
            When the density was not shown to be analytic up to the ends of the interval.
        """
        key = ("ellipses", self.at, self.interval)
        if key not in self.one.cache:
            with balls(BOUND_BITS) as A:
                self.one.cache[key] = bounds_on_ellipses(self._function(A))
        return degree_for(self.one.cache[key], self.bits)

    def _function(self, A: Any) -> Any:
        """The density of Y, T = low + (high - low) Y, for complex balls."""
        names = {self.one.parameter: A.real(self.at)}
        low, width = A.real(self.interval.low), A.real(self.interval.high) - A.real(self.interval.low)
        front = evaluate(self.one.constant, A, names) * width
        core = integrand(self.one.pushed, "v", names, A.prec)
        return lambda z, analytic: front * core(low + width * z, analytic)

    def _sum(self, A: Any, near: Approximation, *, from_low: bool) -> PolynomialSum:
        key = ("sum", self.at, self.n, self.bits, self.interval, A.prec, from_low)
        if key not in self.one.cache:
            polynomial = near.polynomial if from_low else reflected(near.polynomial)
            self.one.cache[key] = PolynomialSum(polynomial, self.n)
        found: PolynomialSum = self.one.cache[key]
        return found

    def _slack(self, A: Any, near: Approximation, x: Number, kind: int, v: Number) -> Number:
        """What the polynomial and the cut can change."""
        polynomial = self.n * near.error * (1 + near.error) ** (self.n - 1)
        both = self.interval.low_cut and self.interval.high_cut
        if kind == TWICE:
            polynomial = polynomial * abs(x)
        if not both:
            return polynomial
        return polynomial + self._cut_slack(A, near, kind, v)

    def _cut_slack(self, A: Any, near: Approximation, kind: int, v: Number) -> Number:
        """The part of the cut, where some observation lies outside: by the union bound; by Cauchy and Schwarz.

        With only one end cut nothing is lost before a sum that needs an observation beyond it.
        """
        lost = self.n * self.interval.beyond
        if kind == CUMULATIVE:
            return lost
        if kind == DENSITY:
            return (near.size + near.error) * ((1 + self.interval.beyond) ** self.n - 1)
        names = {self.one.parameter: A.real(self.at)}
        distance = v - self.n * evaluate(self.one.mean, A, names)
        square = distance**2 + self.n * evaluate(self.one.variance, A, names)
        return A.sqrt(square * lost) / (A.real(self.interval.high) - A.real(self.interval.low))

    def _change(self, A: Any, near: Approximation, distance: Number) -> Number:
        """Bound of the change of the convolution over a distance: variation of one factor, size of the rest."""
        return distance * near.variation * near.size * (1 + near.error) ** (self.n - 2)


def _bits_of(size: Number) -> int:
    """Bits after the binary point at which a size begins; many for 0."""
    return 1 << 30 if size == 0 else -int(float(size.log().mid()) / log(2))


def replaced(one: Shape, at: Exact, n: int, bits: int, v: Number, moved: Number | None = None) -> Replaced:
    """Return the replacement that serves a point at a precision, and all that it may be moved by.

    Raises
    ------
    UndecidedError
        When a tail has no bound, or the point is too far out.
    """
    bits = -(-bits // GRID) * GRID
    low, high = one.ends
    if low is None and high is None:
        return Replaced(one, at, n, bits, _cut_on_both_sides(one, at, bits))
    if low is None or high is None:
        return Replaced(one, at, n, bits, _reaching(one, at, n, v, moved))
    return Replaced(one, at, n, bits, Stretch(low, high, up_to(v - v), False, False))


def _cut_on_both_sides(one: Shape, at: Exact, bits: int) -> Stretch:
    key = ("interval", at, bits)
    if key not in one.cache:
        with balls(bits) as A:
            low, lost_low = _cut(one, at, 2 * bits + 16, A, upper=False)
            high, lost_high = _cut(one, at, 2 * bits + 16, A, upper=True)
            _require_falling(one, at, A, low, high)
            one.cache[key] = Stretch(low, high, (lost_low + lost_high).upper(), True, True)
    found: Stretch = one.cache[key]
    return found


def _cut(one: Shape, at: Exact, bits: int, A: Any, *, upper: bool) -> tuple[Fraction, Number]:
    (piece,) = one.pieces
    x, beyond = one.far_cut(at, piece, bits, upper=upper == piece.rising)
    value = evaluate(one.statistic, A, {one.variable: A.real(x)})
    return to_fraction(value.upper() if upper else value.lower()), beyond


def _require_falling(one: Shape, at: Exact, A: Any, low: Fraction, high: Fraction) -> None:
    """A log-concave density that is smaller at both cuts than at a point between them falls beyond them."""
    names = {one.parameter: A.real(at)}
    inner = midpoint(evaluate(one.mean, A, names))
    ends = [evaluate(one.pushed, A, {**names, "v": A.real(v)}) for v in (low, high)]
    peak = evaluate(one.pushed, A, {**names, "v": inner})
    between = A.real(low) < inner and inner < A.real(high)
    if not (one.log_concave and between and all(end < peak for end in ends)):
        raise UndecidedError(
            "the density of the statistic was not shown to fall beyond a cut on both sides, so its sum is not enclosed"
        )


def _reaching(one: Shape, at: Exact, n: int, v: Number, moved: Number | None) -> Stretch:
    """Cut a half-line where a sum of v, wherever it is moved, needs no observation beyond it: then nothing is lost."""
    end = one.ends[0] if one.ends[1] is None else one.ends[1]
    with balls(BOUND_BITS) as A:
        start = A.real(end)
        variance = evaluate(one.variance, A, {one.parameter: A.real(at)})
        gap = A.real(Fraction(2) ** round(log2(float(variance)) / 2))
        distance = abs(v - n * start) + (0 if moved is None else abs(moved))
        for _ in range(FARTHEST):
            if distance < gap:
                break
            gap = 2 * gap
        else:
            raise UndecidedError("the point lies too far out in a tail of the sum")
        cut = to_fraction(midpoint(start + gap if one.ends[1] is None else start - gap))
        if not distance < abs(A.real(cut) - start):
            raise UndecidedError("the point lies too near the cut of a tail")
    if one.ends[1] is None:
        return Stretch(end, cut, A.real(0), False, True)
    return Stretch(cut, end, A.real(0), True, False)
