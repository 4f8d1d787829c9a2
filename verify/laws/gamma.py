"""The gamma law."""

from __future__ import annotations

import math
from dataclasses import dataclass
from statistics import NormalDist
from typing import TYPE_CHECKING, Any, ClassVar, Self

from verify.laws.base import Law, Number, cube_root_score

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

STANDARD = NormalDist()
SHORT = 60.0
"""Shapes below this have a short series."""
LEAST_TAIL = 1e-5


@dataclass(frozen=True)
class Gamma(Law):
    """Gamma law on the positive reals.

    Parameters
    ----------
    shape : Exact
        Shape, positive.
    rate : Exact
        Rate (the inverse of the scale), positive.

    Examples
    --------
    >>> from fractions import Fraction
    >>> Gamma(Fraction(1, 2), Fraction(2)).sum_of(4)
    Gamma(shape=Fraction(2, 1), rate=Fraction(2, 1))
    """

    shape: Exact
    rate: Exact

    name: ClassVar[str] = "gamma"
    source: ClassVar[str] = "DLMF 8.2.4; partial mean by P(a+1, x) = P(a, x) - x^a exp(-x) / Gamma(a+1), DLMF 8.8.5"
    lattice: ClassVar[bool] = False

    def sum_of(self, n: Any) -> Self:
        """Shapes add."""
        return type(self)(n * self.shape, self.rate)

    @property
    def support(self) -> tuple[Any, Any]:
        """The positive reals."""
        return 0, None

    def density(self, A: Any, v: Any) -> Number:
        """Density rate^a v^(a-1) exp(-rate v) / Gamma(a)."""
        x = A.real(self.rate) * v
        return A.power(x, self.shape) * A.exp(-x) / (v * A.gamma(self.shape))

    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v) = P(a, rate v)."""
        return A.gamma_p(self.shape, A.real(self.rate) * v)

    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v) = Q(a, rate v)."""
        return A.gamma_q(self.shape, A.real(self.rate) * v)

    def log_slope(self, A: Any, v: Any) -> Number:
        """Derivative of log density, (a-1)/v - rate."""
        return (A.real(self.shape) - 1) / v - A.real(self.rate)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = v f(v) / rate."""
        return v * self.density(A, v) / A.real(self.rate)

    def expectation(self, A: Any) -> Number:
        """The mean a / rate."""
        return A.real(self.shape) / A.real(self.rate)

    def spread(self, A: Any) -> Number:
        """Standard deviation sqrt(a) / rate."""
        return A.sqrt(A.real(self.shape)) / A.real(self.rate)

    def normal_score(self, v: float, mean: float, spread: float) -> tuple[float, float]:
        """Through the tail itself where its series is short, else through the cube root of V."""
        shape, rate = (mean / spread) ** 2, mean / spread**2
        z, slope = _tail_score(rate * v, shape) or cube_root_score(rate * v, shape)
        return z, rate * slope


def _tail_score(x: float, shape: float) -> tuple[float, float] | None:
    """Normal score of a gamma law of rate 1 by the series of its tail, and its derivative by x.

    None where the series is long, or the tail too small beside 1.

    Source: DLMF 8.11.4.
    """
    if not (0.0 < x < 4 * shape + 20 and shape < SHORT):
        return None
    front = math.exp(shape * math.log(x) - x - math.lgamma(shape + 1))
    total = term = 1.0
    k = shape
    while term > 1e-12 * total:
        k += 1
        term *= x / k
        total += term
    below = front * total
    if not LEAST_TAIL < below < 1 - LEAST_TAIL:
        return None
    z = STANDARD.inv_cdf(below)
    return z, front * shape / x / STANDARD.pdf(z)
