"""What every law of the statistic offers: all that the side conditions and the power of a test ask of it.

A law is data plus formulas. Its formulas are written once and take the arithmetic ``A`` in which they are to
be evaluated: balls, mpmath numbers or exact fractions (``verify.arithmetic``). ``A.real(x)`` brings an exact
number into it.

Source: E. L. Lehmann and J. P. Romano, *Testing Statistical Hypotheses* (3rd ed., 2005), sections 3.4, 3.7 and 4.2 (the
side conditions).
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass, fields, replace
from typing import TYPE_CHECKING, Any, ClassVar, Self

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

Number = Any
"""A number of the arithmetic in use: an arb ball, an mpf or a Fraction."""


@dataclass(frozen=True)
class Law(ABC):
    """The law of a statistic V, at one parameter value or with symbolic parameters.

    The dataclass fields of a subclass are its parameters: exact numbers (Fraction, or a SymPy expression
    where the number is irrational), or SymPy expressions in the family's parameter before a value is put in.

    A lattice law lives on integers; its cutoffs are Python ints. A continuous law's cutoffs are numbers of ``A``.
    """

    name: ClassVar[str]
    source: ClassVar[str]
    lattice: ClassVar[bool]
    plain_points: ClassVar[bool] = True
    """Whether a support point is the value of V there; False where points are numbered otherwise (:meth:`value`)."""

    @property
    def parameters(self) -> dict[str, Exact]:
        """Name and value of each parameter, in the order of the definition."""
        return {field.name: getattr(self, field.name) for field in fields(self)}

    def map_parameters(self, change: Any) -> Self:
        """Return the law with ``change`` applied to every parameter (e.g. a substitution)."""
        return replace(self, **{name: change(value) for name, value in self.parameters.items()})

    @abstractmethod
    def sum_of(self, n: Any) -> Self:
        """Return the law of the sum of n independent copies (n an int, or a symbol)."""

    @property
    @abstractmethod
    def support(self) -> tuple[Any, Any]:
        """Smallest and largest support point; None where there is none. Exact numbers (ints on a lattice)."""

    def atom(self, v: int, direction: int) -> int:
        """First lattice point with positive mass at v or beyond it in a direction; v where there are no gaps."""
        return v

    def value(self, A: Any, v: Any) -> Number:
        """The value of V at a support point; other than the point itself only where points are numbered otherwise."""
        return A.real(v) if self.lattice else v

    @abstractmethod
    def density(self, A: Any, v: Any) -> Number:
        """Mass at v (lattice) or density at v (continuous)."""

    @abstractmethod
    def cdf(self, A: Any, v: Any) -> Number:
        """P(V <= v)."""

    @abstractmethod
    def sf(self, A: Any, v: Any) -> Number:
        """P(V > v), computed without cancellation."""

    @abstractmethod
    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] with m = E[V]: never negative, and equal to E[(V - m); V > v], so it serves both tails."""

    def partial_mean(self, A: Any, v: Any) -> Number:
        """E[V; V <= v]."""
        return self.expectation(A) * self.cdf(A, v) - self.shortfall(A, v)

    def upper_partial_mean(self, A: Any, v: Any) -> Number:
        """E[V; V > v]."""
        return self.expectation(A) * self.sf(A, v) + self.shortfall(A, v)

    @abstractmethod
    def expectation(self, A: Any) -> Number:
        """E[V]. (Not called ``mean``: some laws have a parameter of that name.)"""

    @abstractmethod
    def spread(self, A: Any) -> Number:
        """Standard deviation of V."""

    def log_slope(self, A: Any, v: Any) -> Number | None:
        """Derivative of log density at v (continuous laws), None where a law has none: it speeds a search."""
        return None

    def normal_score(self, v: float, mean: float, spread: float) -> tuple[float, float]:
        """Rough z with P(V <= v) = Phi(z), and dz/dv, in floating point: where a search begins, never what it claims.

        ``mean`` and ``spread`` are the rough moments. A law with a better approximation says so.
        """
        return (v - mean) / spread, 1.0 / spread

    def __str__(self) -> str:
        inside = ", ".join(f"{name} = {value}" for name, value in self.parameters.items())
        return f"{self.name}({inside})"


def cube_root_score(x: float, shape: float) -> tuple[float, float]:
    """Wilson and Hilferty's normal score of a gamma law of rate 1, and its derivative by x.

    Source: E. B. Wilson and M. M. Hilferty, Proc. Natl. Acad. Sci. 17 (1931) 684-688 (from memory).

    Examples
    --------
    >>> round(cube_root_score(18.307 / 2, 10 / 2)[0], 2)
    1.65
    """
    root = (max(x, 1e-300) / shape) ** (1 / 3)
    return 3 * shape**0.5 * (root - 1 + 1 / (9 * shape)), shape**0.5 * root / max(x, 1e-300)
