"""Integrals of one density from an end of a piece to a point, kept so that the next one nearby is short."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import Balls, balls, midpoint
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.quadrature import integral, integrand
from verify.arithmetic.series import either_sign, up_to
from verify.laws.shape import DEVIATION, FAR, Piece, Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

Number = Any

GRID = 64
"""Bits are rounded up to this, so that a search and its proof share the integrals that they know."""

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
        step = self._between(start, x)
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
        if not self.moment:
            return self.A.real(place), up_to(beyond)
        variance = evaluate(self.one.variance, self.A, {self.one.parameter: self.A.real(self.at)})
        return self.A.real(place), either_sign(self.A.sqrt(variance * beyond))

    def _sliver(self, end: Number) -> Number:
        """What lies between an irrational end and the midpoint of its ball: at most its radius times the
        integrand.
        """
        return self.A.real(0) if end.is_exact() else (end - midpoint(end)) * self._value(end)

    def _between(self, start: Number, end: Number) -> Number:
        if start == end:
            return self.A.real(0)
        names = {self.one.parameter: self.A.real(self.at), DEVIATION: self.mean}
        formula = self.one.centred if self.moment else self.one.core
        function = integrand(formula, self.one.variable, names, self.A.prec)
        return self._constant() * integral(function, start, end)

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
