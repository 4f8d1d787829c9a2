"""Integrals of one density from an end of a piece to a point, kept so that the next one nearby is short."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import Balls, balls, complex_ball, midpoint
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.quadrature import EVALUATIONS, integral, integrand
from verify.arithmetic.series import either_sign, up_to
from verify.laws.shape import DEVIATION, FAR, Piece, Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

Number = Any

GRID = 64
"""Bits are rounded up to this, so that a search and its proof share the integrals that they know."""

EVALUATIONS_FOR = 128
"""Bits for which the usual number of evaluations is meant."""

LOG_TWO = 0.6931471805599453

KNOTS = 64
"""How many end points are remembered for one end of one piece."""


@dataclass(frozen=True)
class Integrals:
    """Integrals of f, or of (mean - T) f, at one parameter value and one precision.

    Attributes
    ----------
    one : Shape
        The observation.
    at : Exact
        The parameter value.
    A : Balls
        The arithmetic, whose precision is in force.
    moment : bool
        Whether the integrand is (mean - T) f.
    mean : ball
        E[T(X)].
    """

    one: Shape
    at: Exact
    A: Balls
    moment: bool
    mean: Number

    def whole(self, piece: Piece) -> Number:
        """Integral over a whole piece."""
        middle = self._some_point(piece)
        return self.part(piece, middle, to_high=False) + self.part(piece, middle, to_high=True)

    def part(self, piece: Piece, x: Number, *, to_high: bool) -> Number:
        """Integral from x to the high end, or from the low end to x.

        For a ball x: the integral to its midpoint, widened by the values of the integrand over the ball. It is taken
        at a precision of the grid.
        """
        with balls(-(-self.A.prec // GRID) * GRID) as A:
            mean = evaluate(self.one.mean, A, {self.one.parameter: A.real(self.at)}) if self.moment else self.mean
            value = replace(self, A=A, mean=mean)._part(piece, x, to_high=to_high)
        return value + 0

    def _part(self, piece: Piece, x: Number, *, to_high: bool) -> Number:
        middle = midpoint(x)
        value = self._to_point(piece, middle, to_high=to_high)
        if x.is_exact():
            return value
        slack = (x - middle) * self._value(x)
        return value - slack if to_high else value + slack

    def _value(self, x: Number) -> Number:
        f = self.one.density(self.A, self.at, x)
        if not self.moment:
            return f
        return (self.mean - evaluate(self.one.statistic, self.A, {self.one.variable: x})) * f

    def _to_point(self, piece: Piece, x: Number, *, to_high: bool) -> Number:
        key = ("knots", self.at, self.A.prec, piece, to_high, self.moment)
        knots: list[tuple[Number, Number]] = self.one.cache.setdefault(key, [])
        if not knots:
            knots.append(self._end(piece, to_high=to_high))
        start, known = min(knots, key=lambda knot: float(abs(knot[0] - x)))
        end = piece.high if to_high else piece.low
        near = end is not None and self.one.end_kind(self.at, piece, upper=to_high) == FAR
        near = near and self.one.pushed is not None
        step = self._near_end(piece, start, x, end) if near else self._between(start, x)
        value = known - step if to_high else known + step
        if len(knots) < KNOTS:
            knots.append((x, value))
        return value

    def _end(self, piece: Piece, *, to_high: bool) -> tuple[Number, Number]:
        """A first knot: the regular end itself, or the cut of a far end with its bounded remainder."""
        end = piece.high if to_high else piece.low
        if self.one.end_kind(self.at, piece, upper=to_high) != FAR:
            return midpoint(self.A.real(end)), self._sliver(self.A.real(end))
        bits = 2 * self.A.prec + 16
        place, beyond = self.one.far_cut(self.at, piece, bits, upper=to_high)
        with balls(self.A.prec + place.denominator.bit_length()) as fine:
            knot = fine.real(place)
        if not self.moment:
            return knot, up_to(beyond)
        variance = evaluate(self.one.variance, self.A, {self.one.parameter: self.A.real(self.at)})
        return knot, either_sign(self.A.sqrt(variance * beyond))

    def _sliver(self, end: Number) -> Number:
        """What lies between an irrational end and the midpoint of its ball: at most its radius times the
        integrand.
        """
        return self.A.real(0) if end.is_exact() else (end - midpoint(end)) * self._value(end)

    def _between(self, start: Number, end: Number) -> Number:
        if start == end:
            return self.A.real(0)
        return self._constant() * integral(self._integrand(self.A), start, end, evaluations=self._most())

    def _near_end(self, piece: Piece, start: Number, stop: Number, end: Exact) -> Number:
        """The same near an end at which T runs to infinity, as an integral over the values of T.

        There the integrand is smooth, however near the end is, where in x it takes a panel for every halving.
        """
        if start == stop:
            return self.A.real(0)
        gap = abs(start - self.A.real(end)).min(abs(stop - self.A.real(end)))
        near = 8 - int(float(gap.log().lower()) / LOG_TWO)
        with balls(self.A.prec + (0 if end == 0 else near)) as fine:
            first, last = (evaluate(self.one.statistic, fine, {self.one.variable: x}) for x in (start, stop))
            names = {self.one.parameter: fine.real(self.at)}
            pushed = integrand(self.one.pushed, "v", names, fine.prec)
        mean = complex_ball(self.mean) if self.moment else None

        def function(v: Any, analytic: bool) -> Any:
            with balls(fine.prec):
                return pushed(v, analytic) if mean is None else (mean - v) * pushed(v, analytic)

        value = self._constant() * integral(function, first, last, evaluations=self._most())
        return value if piece.rising else -value

    def _integrand(self, A: Balls) -> Callable[[Any, bool], Any]:
        names = {self.one.parameter: A.real(self.at), DEVIATION: self.mean}
        return integrand(self.one.centred if self.moment else self.one.core, self.one.variable, names, A.prec)

    def _most(self) -> int:
        """Most evaluations of the integrand: more at a higher precision."""
        return EVALUATIONS * (1 + self.A.prec // EVALUATIONS_FOR)

    def _constant(self) -> Number:
        key = ("constant", self.at, self.A.prec)
        if key not in self.one.cache:
            names = {self.one.parameter: self.A.real(self.at)}
            self.one.cache[key] = evaluate(self.one.constant, self.A, names)
        return self.one.cache[key]

    def _some_point(self, piece: Piece) -> Number:
        low, high = piece.low, piece.high
        if low is not None and high is not None:
            return midpoint((self.A.real(low) + self.A.real(high)) / 2)
        if low is None and high is None:
            return self.A.real(0)
        return midpoint(self.A.real(low) + 1 if high is None else self.A.real(high) - 1)
