"""The search for the window of a continuous law: Newton's method with a curvature term, from a rough start.

Nothing is claimed of what it finds; :mod:`verify.solution.continuous_window` proves it.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from typing import Any

from verify.arithmetic.ball import balls, midpoint, min_abs
from verify.errors import UndecidedError
from verify.solution.conditions import Conditions, improved_start, linear_system, solve_two_by_two
from verify.solution.coordinate import Coordinate
from verify.solution.narrow import even_point, narrow_contents
from verify.solution.one_sided import TailProblem
from verify.solution.sliding_continuous import slide_continuous
from verify.solution.start import extend, window_start
from verify.solution.window import WindowSearch

MOST_STEPS = 60
NOISE_BITS = 40
"""A step that may be 0 counts as settled below this share of the window's width."""
FEW_SCALES = 2.0
"""Longest step outward into a falling density, in lengths over which it falls by a factor e."""

Ends = tuple[Any, Any]


@dataclass(frozen=True)
class ContinuousSearch(WindowSearch):
    """Search for the window of a continuous law."""

    @cached_property
    def coordinate(self) -> Coordinate:
        """The coordinate in which the search moves."""
        return Coordinate(*self.conditions.laws[0].support)

    @cached_property
    def spread(self) -> float:
        """The larger standard deviation."""
        return max(law.spread for law in self.rough)

    def ends(self) -> Ends:
        """Return two approximate ends; nothing is claimed of them."""
        with balls(self.prec) as A:
            found = self._newton(A, self._first(A))
            if found is None:
                apart = self._apart(A)
                found = self._newton(A, apart) if apart is not None else None
            if found is None:
                found = self._newton(A, slide_continuous(self.conditions, self.rough, self.rising, self.coordinate, A))
            if found is None:
                raise UndecidedError("the search for the cutoffs did not settle")
            return found

    def _first(self, A: Any) -> Ends:
        contents = narrow_contents(self.conditions, A)
        narrow = self._narrow(A, contents) if contents is not None else None
        if narrow is not None:
            return narrow
        levels = tuple(float(A.real(level).mid()) for level in self.conditions.levels)
        coordinate = self.coordinate
        moved = tuple(coordinate.rough(A, law) for law in self.rough)
        rough_ends = window_start(moved, max(levels[0], 1e-300), self.conditions.outside)
        c1, c2 = (coordinate.place_roughly(A, end) for end in rough_ends)
        a, b = improved_start(self.conditions, self.rough, levels, (c1, c2))
        inside = coordinate.free or (a > c1 / 2 and math.isfinite(b))
        return A.real(Fraction(a if inside else c1)), A.real(Fraction(b if inside else c2))

    def _apart(self, A: Any) -> Ends | None:
        """Ends that are each a matter of one law alone: nearly right for laws far apart, or levels far out.

        None where the two would cross.
        """
        conditions = self.conditions
        order = sorted(range(len(conditions.laws)), key=lambda i: self.rough[i].mean)
        ends = []
        for i, left in ((order[0], True), (order[-1], False)):
            level = conditions.levels[i] / 2 if conditions.point else conditions.levels[i]
            tail = TailProblem(conditions.laws[i], level, left != conditions.outside, self.rough[i], self.prec)
            ends.append(tail.continuous_cutoff(A))
        return (ends[0], ends[1]) if ends[0] < ends[1] else None

    def _narrow(self, A: Any, contents: list[Any]) -> Ends | None:
        """Window around the point where the densities are as the contents; None where it would not be narrow."""
        centre = even_point(self.conditions, A, contents)
        half = contents[0] / self.conditions.laws[0].density(A, centre) / 2
        if not half.mid() < A.real(Fraction(self.rough[0].spread)) / 16:
            return None
        return midpoint(centre - half), midpoint(centre + half)

    def _newton(self, A: Any, ends: Ends) -> Ends | None:
        """Damped Newton steps in the coordinate; settled when a step is far below the window's own width."""
        c1, c2 = ends
        settled, noise = 2.0 ** -(self.prec // 6), 2.0**-NOISE_BITS
        for _ in range(MOST_STEPS):
            step, curved = outward_steps(self.conditions, A, c1, c2)
            width = abs(midpoint(c2 - c1))
            speeds = [abs(midpoint(self.coordinate.speed(A, c))) for c in (c1, c2)]
            e1, e2 = (midpoint(e) for e in step)
            if not all(x.is_finite() for x in (e1, e2, *speeds)) or 0 in speeds:
                return None
            sizes = [min_abs(width, speed) for speed in speeds]
            if all(_settled(e, size * settled, size * noise) for e, size in zip(step, sizes, strict=True)):
                return midpoint(c1 - e1), midpoint(c2 + e2)
            places = midpoint(c1 - e1), midpoint(c2 + e2)
            if curved and all(self.coordinate.holds(A, c) for c in places):
                c1, c2 = places
            else:
                c1, c2 = self._moved(A, c1, e1, -1, speeds[0]), self._moved(A, c2, e2, +1, speeds[1])
        return None

    def _moved(self, A: Any, c: Any, e: Any, side: int, speed: Any) -> Any:
        """Move an end outward by e, gathering mass geometrically where e is not small."""
        u = float(midpoint(e / speed))
        few = max(float(midpoint(A.real(Fraction(4.0 * self.spread)) / speed)), 1e-12)
        few = few if self.coordinate.free else min(few, 2.0)
        if abs(u) < 1e-3 * min(few, 1.0):
            return midpoint(c + side * e)
        slope = side * self._log_slope(A, c)
        if u < 0:
            few = self._inward_reach(A, c, side, few)
        elif slope < 0:
            few = max(few, FEW_SCALES / -slope)
        distance = extend(u, slope, few)
        return midpoint(self.coordinate.place(A, self.coordinate.of(A, c) + side * A.real(Fraction(distance))))

    def _inward_reach(self, A: Any, c: Any, side: int, few: float) -> float:
        """Longest step inward that is worth taking: as far as the mean on that side."""
        mean = A.real(Fraction((min if side < 0 else max)(law.mean for law in self.rough)))
        return max(few, abs(float((self.coordinate.of(A, c) - self.coordinate.of(A, mean)).mid())))

    def _log_slope(self, A: Any, c: Any) -> float:
        """Derivative of log(density * dc/du) along the coordinate, by a difference: only a guide."""
        coordinate = self.coordinate
        law = max(self.conditions.laws, key=lambda candidate: _log(candidate.density(A, c)))
        h = 1e-6 * (self.rough[0].spread if coordinate.free else 1.0)
        next_c = midpoint(coordinate.place(A, coordinate.of(A, c) + A.real(Fraction(h))))
        here = law.density(A, c) * coordinate.speed(A, c)
        there = law.density(A, next_c) * coordinate.speed(A, next_c)
        ratio = A.log(there / here)
        return float(ratio.mid()) / h if ratio.is_finite() else 0.0


def _log(density: Any) -> float:
    return float(density.log().mid()) if density > 0 else -math.inf


def _settled(step: Any, small: Any, noise: Any) -> bool:
    """Whether a step is small, or no longer to be told from 0 at this precision."""
    size = abs(midpoint(step))
    return bool(size <= small) or bool(size < noise and step.contains(0))


def outward_steps(conditions: Conditions, A: Any, c1: Any, c2: Any) -> tuple[Ends, bool]:
    """Return the step of both ends, outward, and whether the slope of the densities could be taken into account.

    It is Newton's step; corrected for the slope, where the laws offer it and the step is short, it cubes the error.
    """
    system = linear_system(conditions, A, c1, c2)
    sign = -1 if conditions.outside else 1
    e1, e2 = sign * system.fractions[0], sign * system.fractions[1]
    left, right = (conditions.unit_slope(A, c, unit) for c, unit in ((c1, system.first), (c2, system.second)))
    if left is None or right is None:
        return (e1, e2), False
    half1, half2 = e1 * e1 / 2, e2 * e2 / 2
    curved = left[0] * half1 - right[0] * half2, left[1] * half1 - right[1] * half2
    d1, d2 = solve_two_by_two(system.first, system.second, curved)
    width = abs(c2 - c1) / 4
    helps = abs(e1) < width and abs(e2) < width and abs(d1) < abs(e1) / 4 and abs(d2) < abs(e2) / 4
    return ((e1 + d1, e2 + d2), True) if helps else ((e1, e2), False)
