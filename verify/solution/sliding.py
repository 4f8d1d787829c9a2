"""The monotone search: a window of the right first size slides up until the second condition holds.

With s the probability (under the first law) to the left of the window, the second condition G(s) rises in s,
because the likelihood ratio is monotone: G'(s) = r(right end) - r(left end) >= 0. So bisection on the left
end finds the window in O(log) evaluations, on a finite or an infinite support. This is the slow, sure search;
it works on midpoints, and the proof that follows looks at the fractions only.

Source: Lehmann and Romano 2005, section 3.4 (monotone likelihood ratio), Theorem 3.7.1 and section 4.2 (the side
conditions).
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from verify.arithmetic.ball import balls
from verify.laws import Law
from verify.solution.conditions import Conditions, end_fractions
from verify.solution.start import Rough


def slide(conditions: Conditions, rough: tuple[Rough, ...], rising: bool, prec: int) -> tuple[int, int]:
    """Return the cell (c1, c2) of a lattice law.

    The two levels are taken to be attainable (:mod:`verify.solution.attainable`).
    """
    with balls(2 * prec) as A:
        window = _Sliding(conditions, rough, rising, A)
        low, high = window.range_of_starts()
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (middle, high) if window.excess(middle) <= 0 else (low, middle)
        low = window.law.atom(low, 1)
        return low, window.outermost(low, max(window.end(low), low + 1))


class _Sliding:
    """A window whose first condition holds and which starts with the whole of a lattice point."""

    def __init__(self, conditions: Conditions, rough: tuple[Rough, ...], rising: bool, A: Any) -> None:
        self.conditions, self.rough, self.A = conditions, rough, A
        self.law: Law = conditions.laws[0]
        self.rising = conditions.point or rising
        level = A.real(conditions.levels[0])
        self.outside_mass = level if conditions.outside else 1 - level
        second = A.real(conditions.levels[-1])
        self.second_outside = second if conditions.outside else 1 - second

    def range_of_starts(self) -> tuple[int, int]:
        """Least start, and one beyond the last start for which a window of this size exists."""
        low, high = self.law.support
        if low is None:
            low = self._first(lambda k: self.law.cdf(self.A, k) > 0, round(self.rough[0].mean - 1), -1)
        start = round(self.rough[0].mean)
        last = high if high is not None else self._beyond(start)
        a, b = low, last + 1
        while b - a > 1:
            middle = (a + b) // 2
            a, b = (middle, b) if self.law.cdf(self.A, middle - 1) < self.outside_mass else (a, middle)
        return low, b

    def _first(self, holds: Callable[[int], Any], start: int, step: int) -> int:
        while holds(start) and abs(step) < 1 << 62:
            start, step = start + step, 2 * step
        return start

    def _beyond(self, start: int) -> int:
        k, step = start, max(1, int(self.rough[0].spread))
        while self.law.cdf(self.A, k).mid() < self.outside_mass.mid():
            k, step = k + step, 2 * step
        return k

    def end(self, c1: int) -> int:
        """Least c2 such that the window from the whole of c1 to the whole of c2 reaches its size."""
        A, law = self.A, self.law
        right = (self.outside_mass - law.cdf(A, c1 - 1)).mid()
        low, step = c1 - 1, max(1, int(self.rough[0].spread))
        high = self.law.support[1]
        if high is None:
            high = c1
            while law.sf(A, high).mid() > right:
                low, high, step = high, high + step, 2 * step
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (low, middle) if law.sf(A, middle).mid() <= right else (middle, high)
        return int(high)

    def outermost(self, c1: int, c2: int) -> int:
        """Least end from c2 on that need not go further out: a large atom at c1 leaves room for many ends."""
        top = self.law.support[1]
        low, high, step = c2 - 1, c2, 1
        while self._wants_more(c1, high) and (top is None or high < top):
            low, high, step = high, high + step if top is None else min(top, high + step), 2 * step
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (middle, high) if self._wants_more(c1, middle) else (low, middle)
        return self.law.atom(int(high), 1)

    def _wants_more(self, c1: int, c2: int) -> bool:
        """Whether the window on these two atoms would need more than the whole of c2."""
        fraction = end_fractions(self.conditions, self.A, c1, self.law.atom(c2, 1))[1]
        return bool(fraction.mid() < 0 if self.conditions.outside else fraction.mid() > 1)

    def excess(self, c1: int) -> Any:
        """Second condition of this window less its target, as a number that rises with c1."""
        A, law, c2 = self.A, self.law, self.end(c1)
        spare = self.outside_mass - law.cdf(A, c1 - 1) - law.sf(A, c2)
        if self.conditions.point:
            centre = law.expectation(A)
            moment = law.shortfall(A, c2) - law.shortfall(A, c1 - 1) + spare * (law.value(A, c2) - centre)
            return -moment.mid()
        other = self.conditions.laws[1]
        part = spare / law.density(A, c2) * other.density(A, c2)
        outside = other.cdf(A, c1 - 1) + other.sf(A, c2) + part
        difference = (self.second_outside - outside).mid()
        return difference if self.rising else -difference
