"""The law of a sum of continuous observations, by convolution of a polynomial near their density.

The density of T is cut to an interval (with a bound of the mass beyond, where its support is infinite) and
replaced by a polynomial with a proven bound of the difference. The n-fold convolution of the polynomial is
exact; what n replacements change is bounded by Young's inequality, norm by norm:
|f*...*f - q*...*q| <= n |f - q| (1 + |f - q|)**(n-1).

Source: L. N. Trefethen (2013), Theorem 8.2 (the polynomial); W. H. Young, *Proc. London Math. Soc.* 12 (1913)
71-88 (norms of convolutions).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, ClassVar

from verify.arithmetic.ball import balls, midpoint
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.polynomial_sum import CUMULATIVE, DENSITY, TWICE
from verify.laws.base import Number
from verify.laws.built import BuiltLaw
from verify.laws.replaced import Replaced, replaced
from verify.laws.shape import Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

GUARD_BITS = 24
COARSE_BITS = 64
ROUNDS = 4


@dataclass(frozen=True)
class SumByConvolution(BuiltLaw):
    """The law of T(X1) + ... + T(Xn), n > 1, T monotone with an analytic density.

    Attributes
    ----------
    one : Shape
        One observation.
    at : Exact
        The parameter value.
    n : int
        Number of observations.
    """

    one: Shape
    at: Exact
    n: int

    name: ClassVar[str] = "sum of continuous observations"
    source: ClassVar[str] = "convolution of a polynomial, its error bounded on an ellipse: Trefethen 2013"
    lattice: ClassVar[bool] = False
    what: ClassVar[str] = "density"

    def require_replaceable(self) -> None:
        """Raise UndecidedError where the density is not shown to be near a polynomial at all."""
        with balls(COARSE_BITS) as A:
            self._replaced(midpoint(self.expectation(A)), COARSE_BITS).degree()

    @property
    def support(self) -> tuple[Any, Any]:
        """Ends of the support of V."""
        low, high = self.one.ends
        return (None if low is None else self.n * low, None if high is None else self.n * high)

    def density(self, A: Any, v: Any) -> Number:
        """Density at v; over a ball, its value in the middle and what the density can change."""
        if self._place(A, v):
            return A.real(0)
        middle, rest = _split(A, v)
        return self._read(A, middle, DENSITY, from_low=self._from_low(v), moved=rest)

    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v)."""
        place = self._place(A, v)
        if place:
            return A.real(0 if place < 0 else 1)
        from_low = self._from_low(v)
        side = self._side(A, v, from_low=from_low)
        return side if from_low else 1 - side

    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v)."""
        place = self._place(A, v)
        if place:
            return A.real(1 if place < 0 else 0)
        from_low = self._from_low(v)
        side = self._side(A, v, from_low=from_low)
        return 1 - side if from_low else side

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = (m - v) P(V <= v) + E[(v - V)+], or the same from the other side."""
        if self._place(A, v):
            return A.real(0)
        from_low = self._from_low(v)
        with balls(A.prec + GUARD_BITS) as B:
            middle, rest = _split(B, v)
            beyond = self.expectation(B) - middle if from_low else middle - self.expectation(B)
            side = self._read(B, middle, CUMULATIVE, from_low=from_low)
            value = beyond * side + self._read(B, middle, TWICE, from_low=from_low)
            if not rest.is_zero():
                value += rest * (self.expectation(B) - B.real(v)) * self.density(B, v)
        return value + A.real(0)

    def expectation(self, A: Any) -> Number:
        """E[V] from the derived log-normaliser."""
        return self.n * evaluate(self.one.mean, A, {self.one.parameter: A.real(self.at)})

    def spread(self, A: Any) -> Number:
        """Standard deviation from the derived log-normaliser."""
        return A.sqrt(self.n * evaluate(self.one.variance, A, {self.one.parameter: A.real(self.at)}))

    def _side(self, A: Any, v: Any, *, from_low: bool) -> Number:
        """P(V <= v) from the low end, P(V > v) from the high end."""
        middle, rest = _split(A, v)
        value = self._read(A, middle, CUMULATIVE, from_low=from_low)
        if rest == 0:
            return value
        change = rest * self.density(A, v)
        return value + change if from_low else value - change

    def _read(self, A: Any, v: Number, kind: int, *, from_low: bool, moved: Number | None = None) -> Number:
        """Return a function of the sum at an exact point, with more bits until its relative accuracy suffices."""
        bits, value = A.prec + GUARD_BITS, None
        for _ in range(ROUNDS):
            value = self._replaced(v, bits).read(v, kind, from_low=from_low, moved=moved)
            reached = value.rel_accuracy_bits()
            if reached >= A.prec - 8 or moved is not None:
                break
            bits += min(max(A.prec - reached, 8), 4 * A.prec) + 8
        return value + A.real(0)

    def _replaced(self, v: Number, bits: int) -> Replaced:
        return replaced(self.one, self.at, self.n, bits, v)

    def _from_low(self, v: Any) -> bool:
        """Whether to read from the low end: the near one, or the only one there is."""
        low, high = self.support
        if (low is None) != (high is None):
            return low is not None
        with balls(COARSE_BITS) as A:
            return bool(midpoint(A.real(v)) < self.expectation(A))

    def _place(self, A: Any, v: Any) -> int:
        """-1 when v is certainly at or below the support, 1 at or above it, else 0."""
        low, high = self.support
        if low is not None and A.real(v) <= A.real(low):
            return -1
        return 1 if high is not None and A.real(v) >= A.real(high) else 0


def _split(A: Any, v: Any) -> tuple[Number, Number]:
    """Midpoint of v and what is left."""
    v = A.real(v)
    middle = midpoint(v)
    return (v, A.real(0)) if v.is_exact() else (middle, v - middle)
