"""The law of a sum from the density of one observation alone: one of two routes that check each other.

The transform of one observation is integrated by double-exponential quadrature. A point in the first cell from an end
(or on a half-line) needs only what the density is up to there, since no observation can be farther out than the sum:
the density is then cut at twice the distance, where nothing is singular.

Source: H. Takahasi and M. Mori, *Publ. RIMS* 9 (1974) 721-741; J. Abate and W. Whitt, *Queueing Systems* 10 (1992) 5-88
(both from memory).
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cached_property
from typing import TYPE_CHECKING, Any

from verify.arithmetic.acceleration import levin
from verify.arithmetic.ball import Balls, balls
from verify.arithmetic.double_exponential import nodes, reach_for
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.exponential_sums import ExponentialSums
from verify.arithmetic.fourier_series import CUMULATIVE, DENSITY, FourierSeries, terms_for
from verify.laws.pushed import Frame, density_of_statistic
from verify.laws.shape import Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

Number = Any

NEAR_END = 0.375
"""A point of the first cell, nearer to its low end than this, is read with the density cut beyond it."""

STEPS_A_DOUBLING = 4
"""Widths of a cut density are rounded up to so many a doubling, so that points near each other share one."""

MOST_TURNS = 3
"""Most multiples of the cells that the quadrature is asked to follow."""

GUARD_BITS = 64

LOOK_BITS = 384
"""Precision at which the order of a singularity is read off."""


@dataclass(frozen=True, eq=False)
class ByDensity:
    """U = sign * (V - n * start), V the sum of n observations; the attributes are those of the other route."""

    one: Shape
    at: Exact
    n: int
    frame: Frame
    bits: int
    kept: dict[Any, FourierSeries] = field(default_factory=dict, repr=False)

    def read(self, u: Number, order: int) -> Number:
        """Return the density of U at u, P(U <= u), or E (u - U)+ (orders 0, 1, 2), from the nearer end."""
        frame = self.frame
        with balls(self.fine + GUARD_BITS) as A:
            if frame.cell is None or 2 * u <= self._width(A):
                return self._near(A, u, order)
            value = self._other._near(A, self._width(A) - u, order)
            if order == DENSITY:
                return value
            return 1 - value if order == CUMULATIVE else u - self._mean(A) + value

    @property
    def fine(self) -> int:
        """Accuracy of the quadrature: the acceleration asks for more of its terms than it gives."""
        return 2 * self.bits

    @cached_property
    def _reach(self) -> int:
        width = Fraction(1) if self.frame.cell is None else self.frame.cell
        with balls(LOOK_BITS) as A:
            return reach_for(self._density(A, width), self.frame.cells, self.fine)

    @cached_property
    def _other(self) -> ByDensity:
        return ByDensity(self.one, self.at, self.n, self.frame.mirrored(), self.bits)

    def _width(self, A: Balls) -> Number:
        return self.n * self.frame.cells * A.real(self.frame.cell)

    def _mean(self, A: Balls) -> Number:
        """E U, from the derived mean: it only shifts the integral from one end to the other."""
        mean = evaluate(self.one.mean, A, {self.one.parameter: A.real(self.at)})
        return self.frame.sign * self.n * (mean - A.real(self.frame.start))

    def _density(self, A: Balls, width: Any) -> Callable[[int, Number, Number], Number]:
        """The density of one observation on cells of some width, per width."""
        start, step = A.real(self.frame.start), self.frame.sign * A.real(width)

        def density(cell: int, theta: Number, rest: Number) -> Number:
            return abs(step) * density_of_statistic(self.one, self.at, A, start + step * (cell + theta))

        return density

    def _near(self, A: Balls, u: Number, order: int) -> Number:
        cell = self.frame.cell
        if cell is None or u < NEAR_END * A.real(cell):
            width, cells, turns = _rounded_up(2 * float(u)), 1, 1
        else:
            width, cells, turns = cell, self.frame.cells, MOST_TURNS
        if width not in self.kept:
            self.kept[width] = self._series(A, width, cells, turns)
        size = A.real(width)
        return self.kept[width].value(u / size, order) * size ** (order - 1)

    def _series(self, A: Balls, width: Any, cells: int, turns: int) -> FourierSeries:
        """The series of the sum in units of the width, one cell longer than its support."""
        period = self.n * cells + 1
        tilt = A.real(Fraction(-1, period))
        places, weights = self._nodes(width, cells, turns * terms_for(self.bits))
        sums = ExponentialSums(
            [x / period for x in places], [w * (-tilt * x).exp() for x, w in zip(places, weights, strict=True)]
        )
        mass = sum(weights, A.real(0))
        first = sum((x * w for x, w in zip(places, weights, strict=True)), A.real(0))
        return FourierSeries(
            lambda k: sums.at(k) ** self.n, A.real(period), tilt, period, self.bits, levin,
            mass**self.n, self.n * mass ** (self.n - 1) * first, turns,
        )  # fmt: skip

    def _nodes(self, width: Any, cells: int, turns: float) -> tuple[list[Number], list[Number]]:
        """Nodes in all cells, in units of the width, and their weights; near an end more bits are needed."""
        with balls(self._reach + 2 * self.fine + GUARD_BITS) as A:
            density, points = self._density(A, width), nodes(self.fine, self._reach, turns)
            places = [cell + node.theta for cell in range(cells) for node in points]
            weights = [node.weight * density(cell, node.theta, node.rest) for cell in range(cells) for node in points]
        return places, weights


def _rounded_up(width: float) -> Fraction:
    """A width a little larger, out of few."""
    return Fraction(2.0 ** (math.ceil(STEPS_A_DOUBLING * math.log2(width)) / STEPS_A_DOUBLING))
