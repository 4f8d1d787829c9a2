"""The law of the statistic of one continuous observation, by rigorous quadrature of the density itself.

P(V <= v) is the integral of the density over {x : T(x) <= v}, piece by piece where T is monotone. An end at
which T runs to infinity is cut where a likelihood-ratio bound is below 2**-bits; an end at which the density
is not bounded is avoided: the integral over the complement is taken from 1, which leans on the normalisation.

Source: F. Johansson, "Numerical integration in arbitrary-precision ball arithmetic", ICMS 2018.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any, ClassVar

from verify.arithmetic.ball import balls
from verify.arithmetic.evaluate import evaluate
from verify.errors import UndecidedError
from verify.laws.base import Law, Number
from verify.laws.convolution import SumByConvolution
from verify.laws.integrals import Integrals
from verify.laws.inversion import SumByInversion
from verify.laws.pushed import ACROSS, INSIDE, density_of_statistic, position
from verify.laws.shape import SINGULAR, Piece, Shape
from verify.laws.two_routes import SumByTwoRoutes

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

GUARD_BITS = 32


@dataclass(frozen=True)
class OneObservation(Law):
    """The law of T(X) for one continuous X.

    Attributes
    ----------
    one : Shape
        The density, the statistic and its monotone pieces.
    at : Exact
        The parameter value.
    """

    one: Shape
    at: Exact

    name: ClassVar[str] = "one continuous observation"
    source: ClassVar[str] = "rigorous quadrature: Johansson 2018"
    lattice: ClassVar[bool] = False

    @property
    def parameters(self) -> dict[str, Any]:
        """The density as text and the parameter's value."""
        return {"density": self.one.text, self.one.parameter: self.at}

    def map_parameters(self, change: Any) -> OneObservation:
        """Return the law with ``change`` applied to the parameter value."""
        return replace(self, at=change(self.at))

    def sum_of(self, n: Any) -> Law:  # type: ignore[override]
        """Return the law of the sum of n copies, which is another kind of law for n > 1.

        Raises
        ------
        UndecidedError
            When no bound is known for the transform of the observation.
        """
        if n == 1:
            return self
        if self.one.transform is not None:
            return SumByInversion(self.one, self.one.transform, self.at, n)
        if self.one.pushed is None:
            return self._checked(n, "no bound is known for the characteristic function of T")
        enclosed = SumByConvolution(self.one, self.at, n)
        if getattr(self.at, "free_symbols", None):
            return enclosed  # the family as a whole: its members decide
        try:
            enclosed.require_replaceable()
        except UndecidedError as error:
            return self._checked(n, str(error))
        return enclosed

    def _checked(self, n: int, why: str) -> Law:
        if self.one.log_transform is None:
            raise UndecidedError(
                f"{why}; nor was its log normaliser found as a function of the natural parameter, so a sum of several "
                "observations is neither enclosed nor checked numerically; n = 1 is enclosed"
            )
        return SumByTwoRoutes(self.one, self.at, n, why)

    @property
    def support(self) -> tuple[Any, Any]:
        """Smallest and largest value of the statistic."""
        return self.one.ends

    def density(self, A: Any, v: Any) -> Number:
        """Density of T(X): f / abs(T') summed over the points where T = v."""
        return density_of_statistic(self.one, self.at, A, v)

    def cdf(self, A: Any, v: Any) -> Number:
        """P(T(X) <= v)."""
        return self._side(A, v, upper=False, moment=False)

    def sf(self, A: Any, v: Any) -> Number:
        """P(T(X) > v), integrated over its own side."""
        return self._side(A, v, upper=True, moment=False)

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = E[(V - m); V > v], integrated on the side away from the mean."""
        if A.real(v) > self.expectation(A):
            return -self._side(A, v, upper=True, moment=True)
        return self._side(A, v, upper=False, moment=True)

    def expectation(self, A: Any) -> Number:
        """E[T(X)], from the derived log-normaliser."""
        return evaluate(self.one.mean, A, {self.one.parameter: A.real(self.at)})

    def spread(self, A: Any) -> Number:
        """Standard deviation, from the derived log-normaliser."""
        return A.sqrt(evaluate(self.one.variance, A, {self.one.parameter: A.real(self.at)}))

    def _side(self, A: Any, v: Any, *, upper: bool, moment: bool) -> Number:
        """Integral of f, or of (m - T) f, over {T > v} or {T <= v}; by the complement where an end is
        singular.
        """
        if self._avoid(A, v, upper=upper):
            if self._avoid(A, v, upper=not upper):
                raise UndecidedError("the density is unbounded at both ends and the statistic bounded there")
            other = self._sum(A, v, upper=not upper, moment=moment)
            return -other if moment else 1 - other
        return self._sum(A, v, upper=upper, moment=moment)

    def _avoid(self, A: Any, v: Any, *, upper: bool) -> bool:
        return any(
            self.one.end_kind(self.at, piece, upper=end) == SINGULAR
            for piece in self.one.pieces
            for end in _ends_touched(piece, position(A, piece, v), upper=upper)
        )

    def _sum(self, A: Any, v: Any, *, upper: bool, moment: bool) -> Number:
        with balls(A.prec + GUARD_BITS) as B:
            total = B.real(0)
            integrals = Integrals(self.one, self.at, B, moment=moment, mean=self.expectation(B))
            for piece in self.one.pieces:
                place = position(B, piece, v)
                if place == ("below" if upper else "above"):
                    total = total + integrals.whole(piece)
                elif place in (INSIDE, ACROSS):  # the part is a continuous function of v, also over an end
                    x = evaluate(piece.inverse, B, {"v": B.real(v)})
                    total = total + integrals.part(piece, x, to_high=piece.rising == upper)
        return A.real(total) + 0


def _ends_touched(piece: Piece, place: str, *, upper: bool) -> tuple[bool, ...]:
    """Which ends (False: low, True: high) the integral over one side would have to touch."""
    if place not in (INSIDE, ACROSS):
        return (False, True) if place == ("below" if upper else "above") else ()
    return (piece.rising == upper,)
