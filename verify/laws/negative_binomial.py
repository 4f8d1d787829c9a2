"""The negative binomial law."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, ClassVar, Self

from verify.laws.base import Law, Number

if TYPE_CHECKING:
    from verify.problem.numbers import Exact


@dataclass(frozen=True)
class NegativeBinomial(Law):
    """Negative binomial law on 0, 1, 2, ...: failures before the r-th success, r not necessarily whole.

    Parameters
    ----------
    size : Exact
        Size r, positive.
    probability : Exact
        Probability p of a success, in (0, 1).

    Examples
    --------
    >>> from fractions import Fraction
    >>> from verify.arithmetic.exact import rationals
    >>> NegativeBinomial(Fraction(2), Fraction(1, 2)).density(rationals(), 1)
    Fraction(1, 4)
    """

    size: Exact
    probability: Exact

    name: ClassVar[str] = "negative binomial"
    source: ClassVar[str] = "DLMF 8.17.5 with 8.17.4; partial mean by k p_r(k) = r (1-p)/p p_{r+1}(k-1)"
    lattice: ClassVar[bool] = True

    def sum_of(self, n: Any) -> Self:
        """Sizes add."""
        return type(self)(n * self.size, self.probability)

    @property
    def support(self) -> tuple[Any, Any]:
        """The whole numbers from 0."""
        return 0, None

    def density(self, A: Any, v: Any) -> Number:
        """Mass r (r+1) ... (r+v-1) / v! p^r (1-p)^v."""
        if v < 0:
            return A.real(0)
        p = A.real(self.probability)
        return A.rising(self.size, v) / A.factorial(v) * A.power(p, self.size) * A.power(1 - p, v)

    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v) = I_p(r, v + 1)."""
        return A.beta_p(A.real(self.probability), self.size, v + 1) if v >= 0 else A.real(0)

    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v) = I_{1-p}(v + 1, r)."""
        return A.beta_p(1 - A.real(self.probability), v + 1, self.size) if v >= 0 else A.real(1)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = (r + v) (1-p)/p p(v)."""
        p = A.real(self.probability)
        return (A.real(self.size) + v) * (1 - p) / p * self.density(A, v)

    def expectation(self, A: Any) -> Number:
        """The mean r (1-p)/p."""
        p = A.real(self.probability)
        return A.real(self.size) * (1 - p) / p

    def spread(self, A: Any) -> Number:
        """Standard deviation sqrt(r (1-p)) / p."""
        p = A.real(self.probability)
        return A.sqrt(A.real(self.size) * (1 - p)) / p
