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
from verify.laws.built import BuiltLaw
from verify.laws.shape import Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

GUARD_BITS = 24
COARSE_BITS = 64


@dataclass(frozen=True)
class SumByInversion(BuiltLaw):
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

    name: ClassVar[str] = "sum of continuous observations"
    source: ClassVar[str] = "Gil-Pelaez 1951, the cut tail bounded"
    lattice: ClassVar[bool] = False
    what: ClassVar[str] = "density"

    @property
    def support(self) -> tuple[Any, Any]:
        """Ends of the support of V."""
        low, high = self.one.ends
        return (None if low is None else self.n * low, None if high is None else self.n * high)

    def density(self, A: Any, v: Any) -> Number:
        """Density at v."""
        if self._place(A, v):
            return A.real(0)
        return self._invert(A, A.real(v), DENSITY, upper=self._is_high(v))

    def log_slope(self, A: Any, v: Any) -> Number:
        """Derivative of the logarithm of the density."""
        v, upper = A.real(v), self._is_high(v)
        return self._invert(A, v, SLOPE, upper=upper) / self._invert(A, v, DENSITY, upper=upper)

    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v): by its own side below the mean, else 1 minus the other."""
        place = self._place(A, v)
        if place:
            return A.real(0 if place < 0 else 1)
        return 1 - self._tail(A, v, upper=True) if self._is_high(v) else self._tail(A, v, upper=False)

    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v): by its own side above the mean, else 1 minus the other."""
        place = self._place(A, v)
        if place:
            return A.real(1 if place < 0 else 0)
        return self._tail(A, v, upper=True) if self._is_high(v) else 1 - self._tail(A, v, upper=False)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = E[(V - m); V > v], on the side where the tail is small."""
        if self._place(A, v):
            return A.real(0)
        middle, rest = self._split(A, v)
        value = self._invert(A, middle, SHORTFALL, upper=self._is_high(v))
        if rest == 0:
            return value
        return value + rest * (self.expectation(A) - A.real(v)) * self.density(A, v)

    def expectation(self, A: Any) -> Number:
        """E[V] from the derived log-normaliser."""
        return self.n * evaluate(self.one.mean, A, {self.one.parameter: A.real(self.at)})

    def spread(self, A: Any) -> Number:
        """Standard deviation from the derived log-normaliser."""
        return A.sqrt(self.n * evaluate(self.one.variance, A, {self.one.parameter: A.real(self.at)}))

    def _tail(self, A: Any, v: Any, *, upper: bool) -> Number:
        middle, rest = self._split(A, v)
        value = self._invert(A, middle, TAIL, upper=upper)
        if rest == 0:
            return value
        change = rest * self.density(A, v)
        return value - change if upper else value + change

    def _split(self, A: Any, v: Any) -> tuple[Number, Number]:
        """Midpoint of v and what is left: the integrals are taken to the midpoint and moved by the density."""
        v = A.real(v)
        middle = midpoint(v)
        return (v, A.real(0)) if v.is_exact() else (middle, v - middle)

    def _place(self, A: Any, v: Any) -> int:
        """-1 when v is certainly at or below the support, 1 at or above it, else 0."""
        low, high = self.support
        if low is not None and A.real(v) <= A.real(low):
            return -1
        return 1 if high is not None and A.real(v) >= A.real(high) else 0

    def _is_high(self, v: Any) -> bool:
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
