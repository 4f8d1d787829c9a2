"""The inverse Gaussian law."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, ClassVar, Self

from verify.laws.base import Law, Number

if TYPE_CHECKING:
    from verify.problem.numbers import Exact


@dataclass(frozen=True)
class InverseGaussian(Law):
    """Inverse Gaussian law on the positive reals.

    Parameters
    ----------
    mean : Exact
        Mean m, positive.
    shape : Exact
        Shape lambda, positive; the variance is m^3 / lambda.

    Examples
    --------
    >>> from fractions import Fraction
    >>> InverseGaussian(Fraction(2), Fraction(3)).sum_of(10)
    InverseGaussian(mean=Fraction(20, 1), shape=Fraction(300, 1))
    """

    mean: Exact
    shape: Exact

    name: ClassVar[str] = "inverse Gaussian"
    source: ClassVar[str] = "J. Shuster, J. Amer. Statist. Assoc. 63 (1968) 1514-1516 (from memory)"
    lattice: ClassVar[bool] = False

    def sum_of(self, n: Any) -> Self:
        """Means add; the shape grows with the square of n."""
        return type(self)(n * self.mean, n * n * self.shape)

    @property
    def support(self) -> tuple[Any, Any]:
        """The positive reals."""
        return 0, None

    def density(self, A: Any, v: Any) -> Number:
        """Density sqrt(lambda / (2 pi v^3)) exp(-lambda (v-m)^2 / (2 m^2 v))."""
        m, shape = A.real(self.mean), A.real(self.shape)
        z = (v - m) / m
        return A.sqrt(shape / (2 * A.pi * v)) / v * A.exp(-shape * z * z / (2 * v))

    def _ends(self, A: Any, v: Any) -> tuple[Number, Number]:
        """Return a = sqrt(lambda/v)(v/m - 1) and exp(2 lambda/m) Phi(b) with b = -sqrt(lambda/v)(v/m + 1).

        Since b^2 = a^2 + 4 lambda/m, the second is exp(-a^2 / 2) erfcx(-b / sqrt(2)) / 2: no factor of it is huge.
        """
        m, shape = A.real(self.mean), A.real(self.shape)
        root = A.sqrt(shape / v)
        a = root * (v / m - 1)
        return a, A.exp(-a * a / 2) * A.erfcx(root * (v / m + 1) / A.sqrt(A.real(2))) / 2

    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v) = Phi(a) + exp(2 lambda/m) Phi(b)."""
        a, second = self._ends(A, v)
        return A.erfc(-a / A.sqrt(A.real(2))) / 2 + second

    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v) = Phi(-a) - exp(2 lambda/m) Phi(b)."""
        a, second = self._ends(A, v)
        return A.erfc(a / A.sqrt(A.real(2))) / 2 - second

    def log_slope(self, A: Any, v: Any) -> Number:
        """Derivative of log density, lambda/(2 v^2) - lambda/(2 m^2) - 3/(2 v)."""
        m, shape = A.real(self.mean), A.real(self.shape)
        return shape / (2 * v * v) - shape / (2 * m * m) - 3 / (2 * v)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = 2 m exp(2 lambda/m) Phi(b)."""
        _, second = self._ends(A, v)
        return 2 * A.real(self.mean) * second

    def expectation(self, A: Any) -> Number:
        """The mean m."""
        return A.real(self.mean)

    def spread(self, A: Any) -> Number:
        """Standard deviation sqrt(m^3 / lambda)."""
        m = A.real(self.mean)
        return A.sqrt(m * m * m / A.real(self.shape))
