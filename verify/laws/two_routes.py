"""The law of a sum of continuous observations where no bound is known: the digits that two routes share.

One route inverts the derived log normaliser, the other knows nothing but the density. A number is handed out as an
interval around both values, widened by their distance and by the largest distance seen at a few points of the law. It
is checked numerically, never proved: should both routes be wrong in the same way, so is the interval.

Source: J. Abate and W. Whitt, *Queueing Systems* 10 (1992) 5-88 (from memory), who advise two inversions that differ.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Any, ClassVar

from verify.arithmetic.ball import around, balls, midpoint, radius
from verify.arithmetic.fourier_series import CUMULATIVE, DENSITY, TWICE
from verify.laws.base import Number
from verify.laws.by_density import ByDensity
from verify.laws.by_normaliser import ByNormaliser
from verify.laws.continuous_sum import ContinuousSum, split
from verify.laws.pushed import Frame, frame_of
from verify.laws.shape import Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

LEAST_BITS, MOST_BITS, STEP_BITS = 96, 256, 32
"""The accuracy aimed at by the routes, and its steps."""

WIDENING = 4
"""By how much the distance of the routes is multiplied: what each says of its own error is an estimate."""

OFF_BREAKS = 0.2
"""The share of a cell by which these points stay away from its ends."""

LOG_TEN = 2.302585
GUARD_BITS = 16

LOOKS = (Fraction(-9, 10), Fraction(1, 7), Fraction(11, 10))
"""Where the routes are compared for the law as a whole, in standard deviations from the mean: off any symmetry."""


@dataclass(frozen=True)
class SumByTwoRoutes(ContinuousSum):
    """The law of T(X1) + ... + T(Xn), n > 1, checked numerically.

    Attributes
    ----------
    one : Shape
        One observation.
    at : Exact
        The parameter value.
    n : int
        Number of observations.
    why : str
        Why nothing better is known.
    """

    one: Shape
    at: Exact
    n: int
    why: str = ""

    source: ClassVar[str] = "two numerical inversions: Abate and Whitt 1992"

    def density(self, A: Any, v: Any) -> Number:
        """Density at v; over a ball, from its values at both ends and in the middle."""
        v = A.real(v)
        if self._place(A, v):
            return A.real(0)
        middle = self._shared(A, midpoint(v), DENSITY)
        if v.is_exact():
            return middle
        hull = middle.union(self._shared(A, v.lower(), DENSITY)).union(self._shared(A, v.upper(), DENSITY))
        return around(hull, 2 * radius(hull))

    def shortfall(self, A: Any, v: Any) -> Number:
        """E[(m - V); V <= v] = (m - v) P(V <= v) + E (v - V)+."""
        if self._place(A, v):
            return A.real(0)
        v = A.real(v)
        middle, mean = midpoint(v), self.expectation(A)
        beyond = self._frame().sign * (mean - middle)
        value = beyond * self._shared(A, middle, CUMULATIVE) + self._shared(A, middle, TWICE)
        return value if v.is_exact() else value + (v - middle) * (mean - v) * self.density(A, v)

    def shared_digits(self, prec: int) -> int:
        """Digits that the two routes share where they are compared for the law as a whole, at some precision."""
        with balls(2 * MOST_BITS) as A:
            apart = self._apart(A, _bits(prec))
            return max(0, int(-float(apart.log().mid()) / LOG_TEN)) if apart > 0 else 0

    def _from_above(self, v: Any) -> bool:
        """Whether U is measured from the high end."""
        return self._frame().sign < 0

    def _tail(self, A: Any, v: Any, *, upper: bool) -> Number:
        """P(U <= u); over a ball, in the middle, and what the density adds."""
        middle, rest = split(A, v)
        value = self._shared(A, middle, CUMULATIVE)
        return value if rest == 0 else value + self._frame().sign * rest * self.density(A, v)

    def _shared(self, A: Any, v: Number, order: int) -> Number:
        """What the two routes share at an exact point: an interval around both, widened."""
        bits = _bits(A.prec)
        first, second = self._read(A, v, order, bits)
        unit = self.spread(A) ** (order - 1)
        reach = abs(first - second) + radius(first) + radius(second) + self._apart(A, bits) * unit
        centre = (first + second) / 2
        return around(centre, WIDENING * reach + radius(centre))

    def _apart(self, A: Any, bits: int) -> Number:
        """Largest distance of the two routes at a few points, in units in which each kind of number is about 1."""
        key = "apart", self.at, self.n, bits
        if key not in self.one.cache:
            mean, spread, largest = midpoint(self.expectation(A)), midpoint(self.spread(A)), A.real(0)
            for look in LOOKS:
                v = self._off_breaks(A, midpoint(mean + A.real(look) * spread))
                for order in (DENSITY, CUMULATIVE, TWICE) if not self._place(A, v) else ():
                    first, second = self._read(A, v, order, bits)
                    distance = abs(first - second) * spread ** (1 - order)
                    largest = largest.max(distance.upper()) if distance.is_finite() else A.real(1)
            self.one.cache[key] = largest
        return self.one.cache[key]

    def _off_breaks(self, A: Any, v: Number) -> Number:
        """A point moved off the ends of its cell: near a break of the density the routes share less, and show it."""
        frame = self._frame()
        if frame.cell is None:
            return v
        cell, start = A.real(frame.cell), self.n * A.real(frame.start)
        place = float((v - start) / cell)
        inside = min(max(place % 1, OFF_BREAKS), 1 - OFF_BREAKS)
        return midpoint(start + cell * A.real(Fraction(math.floor(place) + inside)))

    def _read(self, A: Any, v: Number, order: int, bits: int) -> tuple[Number, Number]:
        """The two values at an exact point; kept, since a search returns to its points."""
        key = "read", self.at, self.n, bits, v.man_exp(), order
        if key not in self.one.cache:
            frame = self._frame(bits)
            with balls(2 * A.prec) as B:
                u = frame.sign * (v - self.n * B.real(frame.start))
            self.one.cache[key] = tuple(route.read(u, order) for route in self._routes(A, bits))
        found: tuple[Number, Number] = self.one.cache[key]
        return found

    def _routes(self, A: Any, bits: int) -> tuple[ByNormaliser, ByDensity]:
        key = "routes", self.at, self.n, bits
        if key not in self.one.cache:
            given = self.one, self.at, self.n, self._frame(bits), bits
            self.one.cache[key] = ByNormaliser(*given), ByDensity(*given)
        found: tuple[ByNormaliser, ByDensity] = self.one.cache[key]
        return found

    def _frame(self, bits: int = LEAST_BITS) -> Frame:
        """Where U is measured from; only an infinite line is cut differently at another accuracy."""
        key = "frame", self.at, bits
        if key not in self.one.cache:
            self.one.cache[key] = frame_of(self.one, self.at, bits + GUARD_BITS)
        found: Frame = self.one.cache[key]
        return found


def _bits(prec: int) -> int:
    """The accuracy at which the routes aim when numbers of some precision are asked for."""
    return min(MOST_BITS, max(LEAST_BITS, -(-prec // STEP_BITS) * STEP_BITS))
