"""The law of a sum of continuous observations, by inversion of its transform in balls.

Source: J. Gil-Pelaez, *Biometrika* 38 (1951) 481-482; the bounds are in :mod:`verify.arithmetic.transforms`.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import log2
from typing import TYPE_CHECKING, Any, ClassVar

from verify.arithmetic.ball import balls, midpoint, to_fraction
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.inversion import DENSITY, SHORTFALL, SLOPE, TAIL, Inversion, saddle_point
from verify.arithmetic.transforms import Transform
from verify.laws.base import Number
from verify.laws.continuous_sum import ContinuousSum, split
from verify.laws.shape import Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

GUARD_BITS = 24
COARSE_BITS = 64


@dataclass(frozen=True)
class SumByInversion(ContinuousSum):
    """The law of T(X1) + ... + T(Xn), n > 1.

    Attributes
    ----------
    one : Shape
        One observation.
    transform : Transform
        The exponential of its log normaliser as a function of the natural parameter.
    at : Exact
        The parameter value.
    n : int
        Number of observations.
    """

    one: Shape
    transform: Transform
    at: Exact
    n: int

    source: ClassVar[str] = "Gil-Pelaez 1951, the cut tail bounded"

    def density(self, A: Any, v: Any) -> Number:
        """Density at v."""
        if self._place(A, v):
            return A.real(0)
        return self._invert(A, A.real(v), DENSITY, upper=self._from_above(v))

    def log_slope(self, A: Any, v: Any) -> Number:
        """Derivative of the logarithm of the density."""
        v, upper = A.real(v), self._from_above(v)
        return self._invert(A, v, SLOPE, upper=upper) / self._invert(A, v, DENSITY, upper=upper)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = E[(V - m); V > v], on the side where the tail is small."""
        if self._place(A, v):
            return A.real(0)
        middle, rest = split(A, v)
        value = self._invert(A, middle, SHORTFALL, upper=self._from_above(v))
        if rest == 0:
            return value
        return value + rest * (self.expectation(A) - A.real(v)) * self.density(A, v)

    def _tail(self, A: Any, v: Any, *, upper: bool) -> Number:
        middle, rest = split(A, v)
        value = self._invert(A, middle, TAIL, upper=upper)
        if rest == 0:
            return value
        change = rest * self.density(A, v)
        return value - change if upper else value + change

    def _from_above(self, v: Any) -> bool:
        """Above the mean, where that tail is the smaller one."""
        with balls(COARSE_BITS) as A:
            return bool(midpoint(A.real(v)) > self.expectation(A))

    def _invert(self, A: Any, v: Number, kind: str, *, upper: bool) -> Number:
        """One inversion, remembered: a search asks for the same point again."""
        if not v.is_exact():
            return self._inverted(A, v, kind, upper=upper)
        key = ("inverted", self.n, A.prec, str(v.man_exp()), kind, self.at, upper)
        if key not in self.one.cache:
            self.one.cache[key] = self._inverted(A, v, kind, upper=upper)
        return self.one.cache[key]

    def _inverted(self, A: Any, v: Number, kind: str, *, upper: bool) -> Number:
        paths = self.one.cache.setdefault(("paths", self.n), [])
        with balls(A.prec + GUARD_BITS) as B:
            eta = evaluate(self.one.natural, B, {self.one.parameter: B.real(self.at)})
            question = Inversion(self.transform, self.n, eta, B.real(v), kind, self.expectation(B), paths)
            value = question.known(B, upper=upper)
            if value is None:
                value = question.value(B, B.real(self._crossing(midpoint(v), upper=upper)))
        return value + A.real(0)

    def _crossing(self, v: Number, *, upper: bool) -> Fraction:
        """Where the path crosses the real axis: near the saddle point, on a coarse grid, off the pole at
        eta.
        """
        with balls(COARSE_BITS) as A:
            eta = to_fraction(midpoint(evaluate(self.one.natural, A, {self.one.parameter: A.real(self.at)})))
            gap = 1 / to_fraction(midpoint(self.spread(A)))
            low, high = (None if end is None else to_fraction(midpoint(A.real(end))) for end in self.transform.domain())
            saddle = saddle_point(self.transform, self.n, midpoint(A.real(v)), eta, A)
        saddle = max(saddle, eta + gap) if upper else min(saddle, eta - gap)
        return _on_grid(saddle, gap, low, high, eta)


def _on_grid(place: Fraction, gap: Fraction, low: Fraction | None, high: Fraction | None, pole: Fraction) -> Fraction:
    """Round to a grid of about the gap, or halve towards the pole or the middle where that leaves the
    domain.
    """
    grid = Fraction(2) ** round(log2(float(gap)))
    rounded = round(place / grid) * grid
    if abs(rounded - pole) < gap / 4:
        rounded += grid if place > pole else -grid
    if low is not None and rounded <= low:
        rounded = (pole + low) / 2
    if high is not None and rounded >= high:
        rounded = (pole + high) / 2
    return rounded.limit_denominator(1 << 24)
