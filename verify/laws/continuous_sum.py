"""What the laws of a sum of continuous observations have in common: the support, the moments, which tail is worked out.

Source: E. L. Lehmann and J. P. Romano, *Testing Statistical Hypotheses* (3rd ed., 2005), Theorem 2.7.1: the moments
of the statistic are derivatives of the log normaliser.
"""

from __future__ import annotations

from abc import abstractmethod
from typing import Any, ClassVar

from verify.arithmetic.ball import midpoint
from verify.arithmetic.evaluate import evaluate
from verify.laws.base import Number
from verify.laws.built import BuiltLaw


class ContinuousSum(BuiltLaw):
    """The law of T(X1) + ... + T(Xn), n > 1, for a continuous T; subclasses say how a tail is worked out."""

    name: ClassVar[str] = "sum of continuous observations"
    lattice: ClassVar[bool] = False
    what: ClassVar[str] = "density"

    @property
    def support(self) -> tuple[Any, Any]:
        """Ends of the support of V."""
        low, high = self.one.ends
        return (None if low is None else self.n * low, None if high is None else self.n * high)

    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v)."""
        place = self._place(A, v)
        if place:
            return A.real(0 if place < 0 else 1)
        upper = self._from_above(v)
        tail = self._tail(A, v, upper=upper)
        return 1 - tail if upper else tail

    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v)."""
        place = self._place(A, v)
        if place:
            return A.real(1 if place < 0 else 0)
        upper = self._from_above(v)
        tail = self._tail(A, v, upper=upper)
        return tail if upper else 1 - tail

    def expectation(self, A: Any) -> Number:
        """E[V] from the derived log-normaliser."""
        return self.n * evaluate(self.one.mean, A, {self.one.parameter: A.real(self.at)})

    def spread(self, A: Any) -> Number:
        """Standard deviation from the derived log-normaliser."""
        return A.sqrt(self.n * evaluate(self.one.variance, A, {self.one.parameter: A.real(self.at)}))

    @abstractmethod
    def _from_above(self, v: Any) -> bool:
        """Whether the tail above v is the one to work out."""

    @abstractmethod
    def _tail(self, A: Any, v: Any, *, upper: bool) -> Number:
        """P(V > v) or P(V <= v), inside the support."""

    def _place(self, A: Any, v: Any) -> int:
        """-1 when v is certainly at or below the support, 1 at or above it, else 0."""
        low, high = self.support
        if low is not None and A.real(v) <= A.real(low):
            return -1
        return 1 if high is not None and A.real(v) >= A.real(high) else 0


def split(A: Any, v: Any) -> tuple[Number, Number]:
    """Midpoint of v and what is left: a tail is worked out at the midpoint and moved by the density."""
    v = A.real(v)
    middle = midpoint(v)
    return (v, A.real(0)) if v.is_exact() else (middle, v - middle)
