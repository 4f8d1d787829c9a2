"""The window of a continuous law: Newton's method, then interval Newton as the proof.

Let F be the two side conditions less their targets and J their derivative. If N(X) = m - J(X)^-1 F(m) lies in
the interior of a box X around m, then F has exactly one zero in X, and it lies in N(X). That the test has no
other window at all follows from the monotone likelihood ratio.

Source: Moore, Kearfott and Cloud (2009), Theorem 8.2 (interval Newton); Lehmann and Romano 2005, Theorem 3.7.1.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from verify.arithmetic.ball import accuracy_bits, around, balls, midpoint, min_abs, radius, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.errors import UndecidedError
from verify.solution.conditions import Conditions, Row, improved_start, linear_system, solve_two_by_two
from verify.solution.coordinate import Coordinate
from verify.solution.one_sided import TailProblem
from verify.solution.precision import accuracy_for
from verify.solution.sliding_continuous import slide_continuous
from verify.solution.start import Rough, extend, window_start
from verify.solution.window import SEARCH_BITS, Window

MOST_STEPS = 60
MOST_ROUNDS = 30
NOISE_BITS = 40
"""A step that may be 0 counts as settled below this share of the window's width."""
NARROW = 1e-4
"""Below this level a window that rejects inside is narrow: both ends are sought from one centre."""

Ends = tuple[Any, Any]
Units = tuple[Row, Row]


@dataclass(frozen=True)
class ContinuousSearch:
    """Search for the window of a continuous law.

    Attributes
    ----------
    conditions : Conditions
        The side conditions.
    rough : tuple of Rough
        Rough moments of the laws.
    rising : bool
        Whether the second law has the larger mean.
    prec : int
        Bits of the search.
    """

    conditions: Conditions
    rough: tuple[Rough, ...]
    rising: bool
    prec: int

    @property
    def coordinate(self) -> Coordinate:
        """The coordinate in which the search moves."""
        return Coordinate(*self.conditions.laws[0].support)

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
        levels = tuple(float(A.real(level).mid()) for level in self.conditions.levels)
        contents = [A.real(1 - level if self.conditions.outside else level) for level in self.conditions.levels]
        if all(content.mid() < NARROW for content in contents):
            narrow = self._narrow(A, contents)
            if narrow is not None:
                return narrow
        coordinate = self.coordinate
        moved = tuple(coordinate.rough(A, law) for law in self.rough)
        rough_ends = window_start(moved, max(levels[0], 1e-300), self.conditions.outside)
        c1, c2 = (float(coordinate.place(A, A.real(Fraction(end))).mid()) for end in rough_ends)
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
        """Window around the point where the densities are as the contents; their log ratio is linear in the statistic.

        For a point null, around the mean. None where the window would not be narrow after all.
        """
        centre = self._even_point(A, contents)
        half = contents[0] / self.conditions.laws[0].density(A, centre) / 2
        if not half.mid() < A.real(Fraction(self.rough[0].spread)) / 16:
            return None
        return midpoint(centre - half), midpoint(centre + half)

    def _even_point(self, A: Any, contents: list[Any]) -> Any:
        if self.conditions.point:
            return midpoint(self.conditions.laws[0].expectation(A))
        first, second = self.conditions.laws
        a, b = (midpoint(law.expectation(A)) for law in (first, second))

        def log_ratio(c: Any) -> Any:
            return A.log(second.density(A, c) / first.density(A, c))

        wanted = A.log(contents[1] / contents[0])
        return midpoint(a + (b - a) * (wanted - log_ratio(a)) / (log_ratio(b) - log_ratio(a)))

    def _newton(self, A: Any, ends: Ends) -> Ends | None:
        """Damped Newton steps in the coordinate; settled when a step is far below the window's own width."""
        c1, c2 = ends
        settled, noise = (A.power(A.real(2), -bits) for bits in (self.prec // 6, NOISE_BITS))
        for _ in range(MOST_STEPS):
            step = outward_steps(self.conditions, A, c1, c2)
            e1, e2 = (midpoint(e) for e in step)
            speeds = [abs(float(self.coordinate.speed(A, c).mid())) for c in (c1, c2)]
            if not (e1.is_finite() and e2.is_finite() and all(0.0 < v < math.inf for v in speeds)):
                return None
            width = abs(c2 - c1)
            sizes = [min_abs(width, self.coordinate.speed(A, c)).mid() for c in (c1, c2)]
            if all(_settled(e, size * settled, size * noise) for e, size in zip(step, sizes, strict=True)):
                return midpoint(c1 - e1), midpoint(c2 + e2)
            c1, c2 = self._moved(A, c1, e1, -1), self._moved(A, c2, e2, +1)
        return None

    def _moved(self, A: Any, c: Any, e: Any, side: int) -> Any:
        """Move an end outward by e, gathering mass geometrically where e is not small."""
        speed = self.coordinate.speed(A, c)
        u = float((e / speed).mid())
        cap = self._reach(A, c, side, outward=u > 0)
        if abs(u) < 1e-3 * min(cap, 1.0):
            return midpoint(c + side * e)
        distance = extend(u, side * self._log_slope(A, c), cap)
        return midpoint(self.coordinate.place(A, self.coordinate.of(A, c) + side * A.real(Fraction(distance))))

    def _reach(self, A: Any, c: Any, side: int, *, outward: bool) -> float:
        """Longest step worth taking: outward a few standard deviations, inward as far as the mean on that side."""
        spread = max(law.spread for law in self.rough)
        speed = abs(float(self.coordinate.speed(A, c).mid()))
        few = max(4.0 * spread / speed, 1e-12)
        few = few if self.coordinate.free else min(few, 2.0)
        if outward:
            return few
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
    return bool(abs(step).mid() <= small or (step.contains(0) and abs(step) < noise))


def outward_steps(conditions: Conditions, A: Any, c1: Any, c2: Any) -> Ends:
    """Return the step of both ends, outward: what must be added to the window at each end.

    Newton's step, corrected for the slope of the densities where the laws offer it, so that the error is cubed.
    """
    system = linear_system(conditions, A, c1, c2)
    sign = -1 if conditions.outside else 1
    e1, e2 = sign * system.fractions[0], sign * system.fractions[1]
    left, right = (conditions.unit_slope(A, c, unit) for c, unit in ((c1, system.first), (c2, system.second)))
    if left is None or right is None:
        return e1, e2
    curved = [(left[i] * e1 * e1 - right[i] * e2 * e2) / 2 for i in (0, 1)]
    d1, d2 = solve_two_by_two(system.first, system.second, (curved[0], curved[1]))
    width = abs(c2 - c1) / 4
    helps = abs(e1) < width and abs(e2) < width and abs(d1) < abs(e1) / 4 and abs(d2) < abs(e2) / 4
    return (e1 + d1, e2 + d2) if helps else (e1, e2)


def solve_continuous_window(search: ContinuousSearch, digits: int) -> Window:
    """Find the window of a continuous law and prove it by interval Newton.

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
    centre, conditions, wanted = search.ends(), search.conditions, accuracy_for(digits)
    bits = max(search.prec, min(2 * search.prec, wanted + search.prec - SEARCH_BITS[False] + 16))
    box: Ends | None = None
    for _ in range(MOST_ROUNDS):
        with balls(bits) as A:
            target, whole = conditions.targets(A), conditions.whole(A, *centre)
            units = conditions.unit(A, centre[0]), conditions.unit(A, centre[1])
            box = _sharpen(conditions, A, centre, box, units, (target[0] - whole[0], target[1] - whole[1]))
            reached = _reached(box) if box is not None else 0
            if box is not None:
                if reached >= wanted:
                    sides = _left_hand_sides(conditions, A, centre, box, units, whole)
                    return Window(to_enclosure(box[0]), to_enclosure(box[1]), None, None, sides, bits)
                centre = midpoint(box[0]), midpoint(box[1])
        bits = _next_bits(bits, reached, wanted)
    raise UndecidedError("no box around the cutoffs could be proved to contain them")


def _sharpen(
    conditions: Conditions, A: Any, centre: Ends, box: Ends | None, units: Units, lack: Row
) -> Ends | None:
    """One round: prove a first box around the centre, or shrink a box that is known to contain the window."""
    if box is None:
        step = _newton_step(conditions, units, lack)
        if step is None:
            return None
        grain = A.power(A.real(2), 8 - A.prec)
        first, second = (around(c, 2 * abs(e).upper() + abs(c) * grain) for c, e in zip(centre, step, strict=True))
        image = _image(conditions, A, centre, (first, second), lack)
        if image is None or not (first.contains_interior(image[0]) and second.contains_interior(image[1])):
            return None
        return _curved(conditions, A, centre, image, units, lack)
    image = _image(conditions, A, centre, box, lack)
    if image is None:
        return box
    return _curved(conditions, A, centre, (box[0].intersection(image[0]), box[1].intersection(image[1])), units, lack)


def _curved(conditions: Conditions, A: Any, centre: Ends, box: Ends, units: Units, lack: Row) -> Ends:
    """Shrink a box that contains the window by the second-order form of the side conditions.

    With e the outward distances of the ends from the centre and g the units of phi, Taylor's theorem says
    g(c1) e1 - g'(x1) e1^2 / 2 + g(c2) e2 + g'(x2) e2^2 / 2 = what the window lacks, x1 and x2 somewhere between
    the centre and the box. So e lies in what this gives when e ranges over the box and g' over that stretch.
    """
    left, right = _slopes(conditions, A, centre, box)
    if left is None or right is None:
        return box
    sign = -1 if conditions.outside else 1
    e1, e2 = centre[0] - box[0], box[1] - centre[1]
    wanted = [sign * lack[i] + (left[i] * e1 * e1 - right[i] * e2 * e2) / 2 for i in (0, 1)]
    d1, d2 = solve_two_by_two(*units, (wanted[0], wanted[1]))
    found = centre[0] - d1, centre[1] + d2
    if not all(end.is_finite() for end in found):
        return box
    return box[0].intersection(found[0]), box[1].intersection(found[1])


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


def _newton_step(conditions: Conditions, units: Units, lack: Row) -> Ends | None:
    """Return -J(X)^-1 F(m), the step of both ends to the right; None when J(X) may be singular."""
    left, right = units
    determinant = left[0] * right[1] - right[0] * left[1]
    if not determinant.is_finite() or determinant.contains(0):
        return None
    first, second = solve_two_by_two(left, right, lack)
    return (first, -second) if conditions.outside else (-first, second)


def _image(conditions: Conditions, A: Any, centre: Ends, box: Ends, lack: Row) -> Ends | None:
    """Return the interval Newton image N(X), X the box and m its centre."""
    step = _newton_step(conditions, (conditions.unit(A, box[0]), conditions.unit(A, box[1])), lack)
    return None if step is None else (centre[0] + step[0], centre[1] + step[1])


def _slopes(conditions: Conditions, A: Any, centre: Ends, box: Ends) -> tuple[Row | None, Row | None]:
    """Derivatives of the units of phi, each over the whole stretch between the centre and the box."""
    stretch = [end.union(c) for end, c in zip(box, centre, strict=True)]
    left, right = (conditions.unit_slope(A, end, conditions.unit(A, end)) for end in stretch)
    return left, right


def _left_hand_sides(
    conditions: Conditions, A: Any, centre: Ends, box: Ends, units: Units, whole: Row
) -> tuple[Enclosure, ...]:
    """Enclose the two conditions over the box by Taylor's theorem around its centre; see :func:`_curved`."""
    left, right = _slopes(conditions, A, centre, box)
    if left is None or right is None:
        return tuple(to_enclosure(side) for side in conditions.whole(A, *box))
    e1, e2 = centre[0] - box[0], box[1] - centre[1]
    sign = -1 if conditions.outside else 1
    change = [
        units[0][i] * e1 - left[i] * e1 * e1 / 2 + units[1][i] * e2 + right[i] * e2 * e2 / 2 for i in (0, 1)
    ]
    return tuple(to_enclosure(whole[i] + sign * change[i]) for i in (0, 1))
