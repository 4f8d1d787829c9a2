"""The binomial law."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, ClassVar, Self

from verify.laws.base import Law, Number

if TYPE_CHECKING:
    from verify.problem.numbers import Exact


@dataclass(frozen=True)
class Binomial(Law):
    """Binomial law on 0..trials.

    Parameters
    ----------
    trials : Exact
        Number of trials N, whole and positive.
    probability : Exact
        Probability p of one success, in (0, 1).

    Examples
    --------
    >>> from fractions import Fraction
    >>> from verify.arithmetic.exact import rationals
    >>> Binomial(Fraction(10), Fraction(1, 2)).density(rationals(), 5)
    Fraction(63, 256)
    """

    trials: Exact
    probability: Exact

    name: ClassVar[str] = "binomial"
    source: ClassVar[str] = "DLMF 8.17.5; partial mean by k C(N,k) = N C(N-1,k-1)"
    lattice: ClassVar[bool] = True

    def sum_of(self, n: Any) -> Self:
        """Trials add."""
        return type(self)(n * self.trials, self.probability)

    @property
    def support(self) -> tuple[Any, Any]:
        """The whole numbers 0..N."""
        return 0, int(self.trials)

    def density(self, A: Any, v: Any) -> Number:
        """Mass C(N, v) p^v (1-p)^(N-v)."""
        N, p = int(self.trials), A.real(self.probability)
        if not 0 <= v <= N:
            return A.real(0)
        return A.binomial(N, v) * A.power(p, v) * A.power(1 - p, N - v)

    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v) = I_{1-p}(N - v, v + 1)."""
        N = int(self.trials)
        if v < 0 or v >= N:
            return A.real(0 if v < 0 else 1)
        return A.beta_p(1 - A.real(self.probability), N - v, v + 1)

    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v) = I_p(v + 1, N - v)."""
        N = int(self.trials)
        if v < 0 or v >= N:
            return A.real(1 if v < 0 else 0)
        return A.beta_p(A.real(self.probability), v + 1, N - v)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(Np - V); V <= v] = (N - v) p p(v)."""
        return (int(self.trials) - v) * A.real(self.probability) * self.density(A, v)

    def expectation(self, A: Any) -> Number:
        """The mean N p."""
        return A.real(self.trials) * A.real(self.probability)

    def spread(self, A: Any) -> Number:
        """Standard deviation sqrt(N p (1-p))."""
        p = A.real(self.probability)
        return A.sqrt(A.real(self.trials) * p * (1 - p))
