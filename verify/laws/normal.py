"""The normal law."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, ClassVar, Self

from verify.laws.base import Law, Number

if TYPE_CHECKING:
    from verify.problem.numbers import Exact


@dataclass(frozen=True)
class Normal(Law):
    """Normal law on the reals.

    Parameters
    ----------
    mean : Exact
        Mean.
    variance : Exact
        Variance, positive.

    Examples
    --------
    >>> from fractions import Fraction
    >>> Normal(Fraction(1), Fraction(4)).sum_of(3)
    Normal(mean=Fraction(3, 1), variance=Fraction(12, 1))
    """

    mean: Exact
    variance: Exact

    name: ClassVar[str] = "normal"
    source: ClassVar[str] = "DLMF 7.18.13 (Phi through erfc); E[(m - V); V <= c] = variance f(c)"
    lattice: ClassVar[bool] = False

    def sum_of(self, n: Any) -> Self:
        """Means and variances add."""
        return type(self)(n * self.mean, n * self.variance)

    @property
    def support(self) -> tuple[Any, Any]:
        """The reals."""
        return None, None

    def density(self, A: Any, v: Any) -> Number:
        """Density exp(-(v-m)^2 / (2 variance)) / sqrt(2 pi variance)."""
        s2 = A.real(self.variance)
        d = v - A.real(self.mean)
        return A.exp(-d * d / (2 * s2)) / A.sqrt(2 * A.pi * s2)

    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v) = erfc(-(v-m) / sqrt(2 variance)) / 2."""
        return A.erfc((A.real(self.mean) - v) / A.sqrt(2 * A.real(self.variance))) / 2

    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v) = erfc((v-m) / sqrt(2 variance)) / 2."""
        return A.erfc((v - A.real(self.mean)) / A.sqrt(2 * A.real(self.variance))) / 2

    def log_slope(self, A: Any, v: Any) -> Number:
        """Derivative of log density, -(v-m) / variance."""
        return (A.real(self.mean) - v) / A.real(self.variance)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = variance f(v)."""
        return A.real(self.variance) * self.density(A, v)

    def expectation(self, A: Any) -> Number:
        """The mean m."""
        return A.real(self.mean)

    def spread(self, A: Any) -> Number:
        """Standard deviation."""
        return A.sqrt(A.real(self.variance))
