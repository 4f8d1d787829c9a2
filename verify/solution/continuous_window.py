"""The window of a continuous law, proved: Taylor's theorem around a centre, and Brouwer's fixed-point theorem.

Let m1, m2 be the centre and e1, e2 the outward distances of the window's ends from it. With g the units of phi
(:meth:`Conditions.unit`) and s = 1 for a test that rejects inside, -1 outside, the side conditions say

    g(m1) e1 + g(m2) e2 = s * lack + (g'(x1) e1^2 - g'(x2) e2^2) / 2,

lack being what the centre's window misses of the targets, and x1, x2 somewhere between the centre and the ends. Solved
for e on the left with e on the right ranging over a box, this is a continuous map of that box; where it maps the box
into itself, it has a fixed point there, which is a window. That the test has no other window at all follows from the
monotone likelihood ratio. Where a law does not offer g', the same is done with g(x1), g(x2) over the box on the left
and the lack alone on the right: interval Newton.

Source: Moore, Kearfott and Cloud (2009), Theorem 8.2 (interval Newton); Lehmann and Romano 2005, Theorem 3.7.1.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from verify.arithmetic.ball import accuracy_bits, around, balls, midpoint, min_abs, radius, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.errors import UndecidedError
from verify.solution.conditions import Conditions, Row, solve_two_by_two
from verify.solution.continuous_search import ContinuousSearch, Ends
from verify.solution.precision import LEAST_GAIN, accuracy_for
from verify.solution.window import SEARCH_BITS, Window

MOST_ROUNDS = 30
"""Rounds, before every further one must gain something."""

MOST_BITS = 4
"""Times the bits that the search and the digits ask for, at which a proof is given up."""

TRIAL_WIDTHS = (2, 4, 8, 16)
"""Half widths of the first box, in first-order steps to the ends: an end at a jump may lie further than that step."""


def solve_continuous_window(search: ContinuousSearch, digits: int) -> Window:
    """Find the window of a continuous law and prove it.

    Parameters
    ----------
    search : ContinuousSearch
        The side conditions with what the search needs to know.
    digits : int
        Significant digits wanted of the cutoffs.

    Raises
    ------
    UndecidedError
        When no box could be proved to hold the window.
    """
    centre, wanted = search.ends(), accuracy_for(digits)
    bits = max(search.prec, min(2 * search.prec, wanted + search.prec - SEARCH_BITS[False] + 16))
    box: Ends | None = None
    reached = 0
    for tried in range(MOST_ROUNDS + wanted):
        with balls(bits) as A:
            here = Expansion.around(search.conditions, A, centre)
            width = TRIAL_WIDTHS[tried % len(TRIAL_WIDTHS)]
            stretch = here.trial(width) if box is None else here.stretch(box)
            slopes = here.slopes(stretch)
            box = here.sharpen(stretch, slopes, box)
            before, reached = reached, _reached(box) if box is not None else 0
            if box is not None:
                if reached >= wanted:
                    sides = here.left_hand_sides(box, slopes)
                    return Window(to_enclosure(box[0]), to_enclosure(box[1]), None, None, sides, bits)
                centre = midpoint(box[0]), midpoint(box[1])
        if not 0 < before < reached < before + LEAST_GAIN:  # it shrinks, but slowly: no want of precision
            bits = _next_bits(bits, reached, wanted)
        if bits > MOST_BITS * (wanted + search.prec) or (tried >= MOST_ROUNDS and reached <= before):
            break
    raise UndecidedError("no box around the cutoffs could be proved to contain them")


Slopes = tuple[Row, Row] | None


@dataclass(frozen=True)
class Expansion:
    """The side conditions around a centre; every box below is a box of ends.

    Attributes
    ----------
    conditions : Conditions
        The side conditions.
    A : arithmetic
        The balls in use.
    centre : Ends
        Two exact places.
    whole, wanted : Row
        Left-hand sides at the centre, and what the window must gain: s * lack.
    left, right : Row
        Units of phi at the two places.
    """

    conditions: Conditions
    A: Any
    centre: Ends
    whole: Row
    wanted: Row
    left: Row
    right: Row

    @classmethod
    def around(cls, conditions: Conditions, A: Any, centre: Ends) -> Expansion:
        """Evaluate the side conditions at a centre."""
        target, whole = conditions.targets(A), conditions.whole(A, *centre)
        lack = target[0] - whole[0], target[1] - whole[1]
        wanted = (-lack[0], -lack[1]) if conditions.outside else lack
        return cls(conditions, A, centre, whole, wanted, conditions.unit(A, centre[0]), conditions.unit(A, centre[1]))

    def trial(self, width: int) -> Ends:
        """Box around the centre, so many times as wide as the first-order step to the ends."""
        step = solve_two_by_two(self.left, self.right, self.wanted)
        grain = self.A.power(self.A.real(2), 8 - self.A.prec)
        reach = [width * abs(e).upper() + abs(c) * grain for c, e in zip(self.centre, step, strict=True)]
        return around(self.centre[0], reach[0]), around(self.centre[1], reach[1])

    def stretch(self, box: Ends) -> Ends:
        """All places between the centre and a box."""
        return box[0].union(self.centre[0]), box[1].union(self.centre[1])

    def slopes(self, stretch: Ends) -> Slopes:
        """Derivatives of the units over a stretch around the centre; None where the laws do not offer them."""
        (m1, m2), units = self.centre, self.conditions
        left = units.unit_slope(self.A, m1, self.left, stretch[0])
        right = units.unit_slope(self.A, m2, self.right, stretch[1])
        return None if left is None or right is None else (left, right)

    def sharpen(self, stretch: Ends, slopes: Slopes, box: Ends | None) -> Ends | None:
        """Prove a first box inside the stretch (None where it cannot be), or shrink one known to hold the window."""
        image = self._image(stretch, slopes)
        if not (image[0].is_finite() and image[1].is_finite()):
            return box
        if box is None:
            if not (stretch[0].contains_interior(image[0]) and stretch[1].contains_interior(image[1])):
                return None
            box = image
        box = _both(box, image)
        return box if slopes is None else _both(box, self._image(box, slopes))

    def _image(self, box: Ends, slopes: Slopes) -> Ends:
        """Where the side conditions send a box: the ends of the window lie there if they lie in the box."""
        if slopes is None:
            units = self.conditions.unit(self.A, box[0]), self.conditions.unit(self.A, box[1])
            e1, e2 = solve_two_by_two(*units, self.wanted)
        else:
            first, second = self._bends(box, slopes)
            wanted = self.wanted[0] + first[0] - second[0], self.wanted[1] + first[1] - second[1]
            e1, e2 = solve_two_by_two(self.left, self.right, wanted)
        return self.centre[0] - e1, self.centre[1] + e2

    def _bends(self, box: Ends, slopes: tuple[Row, Row]) -> tuple[Row, Row]:
        """Second-order terms g'(x) e^2 / 2 of the two ends."""
        away = [end - c for end, c in zip(box, self.centre, strict=True)]
        half1, half2 = (e * e / 2 for e in away)
        left, right = slopes
        return (left[0] * half1, left[1] * half1), (right[0] * half2, right[1] * half2)

    def left_hand_sides(self, box: Ends, slopes: Slopes) -> tuple[Enclosure, ...]:
        """Enclose the two conditions over a box; the slopes must range over all places between it and the centre."""
        if slopes is None:
            return tuple(to_enclosure(side) for side in self.conditions.whole(self.A, *box))
        e1, e2 = self.centre[0] - box[0], box[1] - self.centre[1]
        first, second = self._bends(box, slopes)
        gains = [self.left[i] * e1 - first[i] + self.right[i] * e2 + second[i] for i in (0, 1)]
        sign = -1 if self.conditions.outside else 1
        return tuple(to_enclosure(self.whole[i] + sign * gains[i]) for i in (0, 1))


def _both(box: Ends, other: Ends) -> Ends:
    return box[0].intersection(other[0]), box[1].intersection(other[1])


def _reached(box: Ends) -> int:
    """Bits to which the ends are known, of their own size and of the window's width: two close ends are told apart."""
    width = midpoint(box[1]) - midpoint(box[0])
    sizes = [min_abs(midpoint(end), width) for end in box]
    bits = [accuracy_bits(around(size, radius(end))) for size, end in zip(sizes, box, strict=True) if size != 0]
    return min(bits, default=0)


def _next_bits(bits: int, reached: int, wanted: int) -> int:
    """Precision of the next round: the accuracy doubles each round, until the loss of the last one is known."""
    if reached <= 0:
        return bits + bits // 4 + 64
    loss = max(bits - reached, 0)
    return max(bits, min(2 * reached, wanted) + min(loss, bits) + 16) if 2 * reached < wanted else wanted + loss + 32
