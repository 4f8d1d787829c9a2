"""The Poisson law."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, ClassVar, Self

from verify.laws.base import Law, Number, cube_root_score

if TYPE_CHECKING:
    from verify.problem.numbers import Exact


@dataclass(frozen=True)
class Poisson(Law):
    """Poisson law on 0, 1, 2, ...

    Parameters
    ----------
    mean : Exact
        Mean, positive.

    Examples
    --------
    >>> from fractions import Fraction
    >>> Poisson(Fraction(8)).sum_of(10)
    Poisson(mean=Fraction(80, 1))
    """

    mean: Exact

    name: ClassVar[str] = "Poisson"
    source: ClassVar[str] = "DLMF 8.4.10 with 8.2.4; partial mean by k p(k) = m p(k-1)"
    lattice: ClassVar[bool] = True

    def sum_of(self, n: Any) -> Self:
        """Means add."""
        return type(self)(n * self.mean)

    @property
    def support(self) -> tuple[Any, Any]:
        """The whole numbers from 0."""
        return 0, None

    def density(self, A: Any, v: Any) -> Number:
        """Mass exp(-m) m^v / v!."""
        if v < 0:
            return A.real(0)
        m = A.real(self.mean)
        return A.exp(-m) * A.power(m, v) / A.factorial(v)

    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v) = Q(v + 1, m)."""
        return A.gamma_q(v + 1, self.mean) if v >= 0 else A.real(0)

    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v) = P(v + 1, m)."""
        return A.gamma_p(v + 1, self.mean) if v >= 0 else A.real(1)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = m p(v), since E[V; V <= v] = m P(V <= v - 1)."""
        return A.real(self.mean) * self.density(A, v)

    def expectation(self, A: Any) -> Number:
        """The mean m."""
        return A.real(self.mean)

    def spread(self, A: Any) -> Number:
        """Standard deviation sqrt(m)."""
        return A.sqrt(A.real(self.mean))

    def normal_score(self, v: float, mean: float, spread: float) -> tuple[float, float]:
        """Through the cube root: P(V <= v) is the upper tail at m of a gamma law of shape v + 1."""
        shape = max(v + 1.0, 1e-3)
        here, there = (-cube_root_score(mean, a)[0] for a in (shape, shape * 1.0001))
        return here, (there - here) / (shape * 0.0001)
