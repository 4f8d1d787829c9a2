"""One-sided tests: one cutoff, one fraction, one side condition.

Source: Lehmann and Romano 2005, Theorem 3.4.1: the uniformly most powerful test of a family with monotone
likelihood ratio rejects far out on one side, with the fraction gamma at the cutoff that makes the level
exact.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from verify.arithmetic.ball import accuracy_bits, around, balls, magnitude, midpoint, radius, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.exact import enclosure_of, quotient, rationals, summed
from verify.errors import NotRational, UndecidedError
from verify.laws import Law
from verify.solution.conditions import MOST_EXACT_ATOMS
from verify.solution.coordinate import Coordinate
from verify.solution.crossing import crossing
from verify.solution.lattice_step import as_float, cells
from verify.solution.precision import LEAST_GAIN, bits_for, may_be_decimal
from verify.solution.start import Rough, upper_point

MOST_ROUNDS = 200
BISECTIONS = 60
MOST_STEPS = 40
"""Steps of Newton's method on a lattice before bracket and bisection."""
MOST_VAIN = 5
"""Rounds of interval Newton in a row that may gain nothing, before the sure way takes over."""
NEWTON_EVERY = 6
"""Bisections between two attempts of Newton's method, which an expensive law needs soon."""


@dataclass(frozen=True)
class Tail:
    """A solved one-sided test on the scale of its own law.

    Attributes
    ----------
    c : int or Enclosure
        The cutoff.
    phi : Enclosure or None
        The critical function at the cutoff; None for a continuous law.
    condition : Enclosure
        The left-hand side of the side condition at this solution.
    prec : int
        Bits at which the proof succeeded (0: exact fractions).
    """

    c: Any
    phi: Enclosure | None
    condition: Enclosure
    prec: int


@dataclass(frozen=True)
class TailProblem:
    """Find the cutoff beyond which the test rejects.

    Attributes
    ----------
    law : Law
        Law at the limit of the null.
    level : Exact
        The level.
    above : bool
        Whether the test rejects large values.
    rough : Rough
        Rough moments of the law.
    prec : int
        Bits of the search.
    """

    law: Law
    level: Any
    above: bool
    rough: Rough
    prec: int

    def beyond(self, A: Any, c: Any) -> Any:
        """Probability of values strictly beyond c."""
        if self.above:
            return self.law.sf(A, c)
        return self.law.cdf(A, c - 1 if self.law.lattice else c)

    @property
    def outward(self) -> int:
        """Direction of rejection."""
        return 1 if self.above else -1

    def solve(self, digits: int) -> Tail:
        """Return the proved cutoff (and fraction)."""
        return self._lattice(digits) if self.law.lattice else self._continuous(digits)

    def _lattice(self, digits: int) -> Tail:
        """Bracket and bisect the cutoff, then prove 0 < gamma <= 1 there."""
        with balls(self.prec) as A:
            c = self._lattice_cutoff(A)
        wanted = bits_for(digits)
        bits = wanted + self.prec - 56
        cap, seen = 8 * bits + 4096, set[int]()
        while bits <= cap:
            with balls(bits) as A:
                beyond, mass = self.beyond(A, c), self.law.density(A, c)
                gamma = (A.real(self.level) - beyond) / mass
                if gamma > 0 and gamma < 1:
                    reached = accuracy_bits(gamma)
                    if reached >= wanted:
                        tail = Tail(c, unit(gamma), to_enclosure(beyond + gamma * mass), bits)
                        return (self._exact(c, bits) if may_be_decimal(unit(gamma), digits) else None) or tail
                    bits += wanted - reached + 8
                    continue
                certain = gamma > 1 or gamma < 0
                if certain:
                    step = self._step(A, c, gamma, beyond, 1.0 if c in seen else self._reach)
                    seen.add(c)
                    c = self._moved(c, step)
            if not certain:
                exact = self._exact(c, bits)
                if exact is not None:
                    return exact
                bits *= 2
        raise UndecidedError(f"the fraction at {c} could not be told from 0 or 1 within {cap} bits")

    def _lattice_cutoff(self, A: Any) -> int:
        """Innermost lattice point beyond which less than the level lies (on midpoints)."""
        level = A.real(self.level).mid()
        low, high = self.law.support
        start = round(self.rough.mean + self.outward * self._score(A) * self.rough.spread)
        start = max(start, low) if low is not None else start
        start = min(start, high) if high is not None else start

        def enough(c: int) -> bool:
            return bool(self.beyond(A, c).mid() < level)

        found = self._lattice_newton(A, start)
        return self._lattice_bracket(enough, start) if found is None else found

    def _score(self, A: Any) -> float:
        """Normal score of the level, also where what it leaves is tiny."""
        level, rest = (max(float(side), 1e-300) for side in (A.real(self.level), 1 - A.real(self.level)))
        return upper_point(level) if level < rest else -upper_point(rest)

    @property
    def _reach(self) -> float:
        """Longest first step of a search on the lattice."""
        return 4 * self.rough.spread + 2

    def _step(self, A: Any, c: int, gamma: Any, beyond: Any, cap: float) -> int:
        """How far to move a cutoff where gamma is not between 0 and 1."""
        return -self.outward * cells(A, self.law, c, -self.outward, gamma, cap, beyond, A.real(self.level))

    def _moved(self, c: int, step: int) -> int:
        """Move a cutoff, within the support, to an atom."""
        low, high = self.law.support
        c = c + step if low is None else max(c + step, low)
        return self.law.atom(c if high is None else min(c, high), 1 if step > 0 else -1)

    def _lattice_newton(self, A: Any, c: int) -> int | None:
        """Step by the weight that is missing; None where the steps do not settle."""
        level, law, cap = A.real(self.level), self.law, self._reach
        for _ in range(MOST_STEPS):
            beyond = self.beyond(A, c)
            gamma = (level - beyond) / law.density(A, c)
            if math.isnan(as_float(gamma)):
                return None
            step = self._step(A, c, gamma, beyond, cap)
            if step == 0:
                return c
            cap = 2 * cap if abs(step) >= cap / 2 else cap
            c = self._moved(c, step)
        return None

    def _lattice_bracket(self, enough: Callable[[int], bool], start: int) -> int:
        """The sure, slower search: a bracket by doubling steps, then bisection."""
        low, high = self.law.support
        step = max(1, int(self.rough.spread / 8))
        inner, outer = start, start
        while not enough(outer):
            inner, outer, step = outer, outer + self.outward * step, 2 * step
        while enough(inner) and (low is None or inner >= low) and (high is None or inner <= high):
            inner, outer, step = inner - self.outward * step, inner, 2 * step
        while abs(outer - inner) > 1:
            middle = (inner + outer) // 2
            inner, outer = (inner, middle) if enough(middle) else (middle, outer)
        return self.law.atom(int(outer), -self.outward)

    def _exact(self, c: int, bits: int) -> Tail | None:
        """Decide a tie in exact fractions; None when the masses are irrational or the sum too long."""
        low, high = self.law.support
        A = rationals()
        atoms = high - c if self.above and high is not None else c - low if low is not None else MOST_EXACT_ATOMS + 1
        if atoms > MOST_EXACT_ATOMS:
            return None
        try:
            level = A.real(self.level)
            inside = not (self.above and high is None)
            points = range(c + 1, high + 1) if self.above and inside else range(low, c + self.above)
            [total] = summed(((self.law.density(A, k),) for k in points), 1)
            mass = quotient(self.law.density(A, c))
        except NotRational:
            return None
        gamma = (quotient(level) - (total if inside else 1 - total)) / mass
        if gamma == 0:
            return Tail(self.law.atom(c + self.outward, self.outward), Enclosure.of(1), Enclosure.of(level), 0)
        return Tail(c, enclosure_of(gamma, bits), Enclosure.of(level), 0) if 0 < gamma <= 1 else None

    def _continuous(self, digits: int) -> Tail:
        """Bisect in the coordinate of the support, then interval Newton in one dimension, else certain signs."""
        wanted = bits_for(digits)
        with balls(self.prec) as A:
            centre = self.continuous_cutoff(A)
        bits, box, reached = max(self.prec, min(2 * self.prec, wanted + self.prec - 64)), None, 0
        vain = 0
        while vain < MOST_VAIN:
            with balls(bits) as A:
                box = self._sharpen(A, centre, box)
                before, reached = reached, self._reached(box, wanted) if box is not None else 0
                if reached >= wanted:
                    return self._around(A, box)
                centre = centre if box is None else midpoint(box)
            vain = 0 if reached >= before + LEAST_GAIN else vain + 1
            bits = min(2 * bits, wanted + (bits - reached) + 32) if reached > 0 else bits + bits // 4 + 64
        with balls(2 * (wanted + self.prec)) as A:  # a cutoff at 0 is told from it to the square of the accuracy
            return self._around(A, self._crossed(A, centre, wanted))

    def _around(self, A: Any, box: Any) -> Tail:
        return Tail(to_enclosure(box), None, to_enclosure(self.beyond(A, box)), A.prec)

    def _crossed(self, A: Any, centre: Any, wanted: int) -> Any:
        """Enclose the cutoff by certain signs of what lies beyond, less the level.

        Raises
        ------
        UndecidedError
            When the signs stay open.
        """
        level = A.real(self.level)

        def side(c: Any) -> int:
            lack = level - self.beyond(A, c)
            return 0 if not (lack < 0 or lack > 0) else self.outward if lack < 0 else -self.outward

        width = max(abs(centre), A.real(Fraction(self.rough.spread))) * A.power(A.real(2), -wanted - 2)
        found = crossing(side, centre, width, lambda box: self._reached(box, wanted) >= wanted, 4 * A.prec)
        if found is None:
            raise UndecidedError("no interval around the cutoff could be proved to contain it")
        return found

    def _reached(self, box: Any, wanted: int) -> int:
        """Bits to which the cutoff is known: of its own size, or, where it may be 0, far below the law's spread."""
        if box.contains(0):
            spread = math.frexp(self.rough.spread)[1]
            width = magnitude(radius(box))
            return wanted if width is None or width < spread - 2 * wanted else 0
        return accuracy_bits(box)

    def _sharpen(self, A: Any, centre: Any, box: Any) -> Any:
        lack = A.real(self.level) - self.beyond(A, centre)
        density = self.law.density(A, centre if box is None else box)
        if density.contains(0) or not density.is_finite():
            return box
        step = -self.outward * lack / density
        if box is not None:
            return box.intersection(centre + step)
        trial = around(centre, 2 * abs(step).upper() + abs(centre) * A.power(A.real(2), 8 - A.prec))
        slope = self.law.density(A, trial)
        if slope.contains(0) or not slope.is_finite():
            return None
        image = centre - self.outward * lack / slope
        return image if trial.contains_interior(image) else None

    def continuous_cutoff(self, A: Any) -> Any:
        """Bracket from the normal approximation, bisection, a few Newton steps; nothing is claimed of the result."""
        coordinate = Coordinate(*self.law.support)
        rough = coordinate.rough(A, self.rough)
        level, z = A.real(self.level).mid(), self._score(A)

        def enough(u: Fraction) -> bool:
            return bool(self.beyond(A, midpoint(coordinate.place(A, A.real(u)))).mid() < level)

        inner, outer = self._bracket(Fraction(rough.mean + self.outward * z * rough.spread), rough.spread, enough)
        for round_ in range(BISECTIONS):
            middle = (inner + outer) / 2
            inner, outer = (inner, middle) if enough(middle) else (middle, outer)
            if round_ % NEWTON_EVERY == NEWTON_EVERY - 1:
                centre = self._newton(A, midpoint(coordinate.place(A, A.real((inner + outer) / 2))))
                if centre is not None:
                    return centre
        return midpoint(coordinate.place(A, A.real((inner + outer) / 2)))

    def _newton(self, A: Any, centre: Any) -> Any | None:
        """Newton steps from a place; None when they do not shrink from one to the next until they are lost in noise."""
        previous = None
        for _ in range(int(math.log2(self.prec)) + 4):
            step = (A.real(self.level) - self.beyond(A, centre)) / self.law.density(A, centre)
            size = abs(step).mid()
            if not step.is_finite() or (previous is not None and not size < previous / 2 and not step.contains(0)):
                return None
            centre, previous = midpoint(centre - self.outward * step), size
            if step.contains(0):
                return centre
        return centre

    def _bracket(self, start: Fraction, spread: float, enough: Callable[[Fraction], bool]) -> tuple[Fraction, Fraction]:
        """Two places, the inner one with too much beyond it and the outer one with little enough."""
        inner = outer = start
        reach = Fraction(max(spread / 4, 1e-9))
        for _ in range(MOST_ROUNDS):
            if enough(outer):
                break
            inner, outer, reach = outer, outer + self.outward * reach, 2 * reach
        for _ in range(MOST_ROUNDS):
            if not enough(inner):
                break
            inner, outer, reach = inner - self.outward * reach, inner, 2 * reach
        return inner, outer


def unit(gamma: Any) -> Enclosure:
    """Enclose a fraction."""
    return to_enclosure(gamma, low=Fraction(0), high=Fraction(1))
