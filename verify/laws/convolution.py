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
from verify.arithmetic.polynomial_sum import CUMULATIVE, DENSITY, TWICE
from verify.laws.base import Number
from verify.laws.continuous_sum import ContinuousSum, split
from verify.laws.replaced import Replaced, replaced
from verify.laws.shape import Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

GUARD_BITS = 24
COARSE_BITS = 64
ROUNDS = 4


@dataclass(frozen=True)
class SumByConvolution(ContinuousSum):
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

    source: ClassVar[str] = "convolution of a polynomial, its error bounded on an ellipse: Trefethen 2013"

    def require_replaceable(self) -> None:
        """Raise UndecidedError where the density is not shown to be near a polynomial at all."""
        with balls(COARSE_BITS) as A:
            self._replaced(midpoint(self.expectation(A)), COARSE_BITS).degree()

    def density(self, A: Any, v: Any) -> Number:
        """Density at v; over a ball, its value in the middle and what the density can change."""
        if self._place(A, v):
            return A.real(0)
        middle, rest = split(A, v)
        return self._read(A, middle, DENSITY, from_low=not self._from_above(v), moved=rest)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = (m - v) P(V <= v) + E[(v - V)+], or the same from the other side."""
        if self._place(A, v):
            return A.real(0)
        from_low = not self._from_above(v)
        with balls(A.prec + GUARD_BITS) as B:
            middle, rest = split(B, v)
            beyond = self.expectation(B) - middle if from_low else middle - self.expectation(B)
            side = self._read(B, middle, CUMULATIVE, from_low=from_low)
            value = beyond * side + self._read(B, middle, TWICE, from_low=from_low)
            if not rest.is_zero():
                value += rest * (self.expectation(B) - B.real(v)) * self.density(B, v)
        return value + A.real(0)

    def _tail(self, A: Any, v: Any, *, upper: bool) -> Number:
        """P(V <= v) from the low end, P(V > v) from the high end."""
        middle, rest = split(A, v)
        value = self._read(A, middle, CUMULATIVE, from_low=not upper)
        if rest == 0:
            return value
        change = rest * self.density(A, v)
        return value - change if upper else value + change

    def _read(self, A: Any, v: Number, kind: int, *, from_low: bool, moved: Number | None = None) -> Number:
        """Return a function of the sum at an exact point, with more bits until its relative accuracy suffices."""
        bits, value = A.prec + GUARD_BITS, None
        for _ in range(ROUNDS):
            value = self._replaced(v, bits, moved).read(v, kind, from_low=from_low, moved=moved)
            reached = value.rel_accuracy_bits()
            if reached >= A.prec - 8 or moved is not None:
                break
            bits += min(max(A.prec - reached, 8), 4 * A.prec) + 8
        return value + A.real(0)

    def _replaced(self, v: Number, bits: int, moved: Number | None = None) -> Replaced:
        return replaced(self.one, self.at, self.n, bits, v, moved)

    def _from_above(self, v: Any) -> bool:
        """Whether to read from the high end: the near one, or the only one there is."""
        low, high = self.support
        if (low is None) != (high is None):
            return low is None
        with balls(COARSE_BITS) as A:
            return not midpoint(A.real(v)) < self.expectation(A)
