"""Proving a remembered place again: one evaluation, and nothing of it believed before.

What is remembered says only where to look. On a lattice the fractions are computed anew at the remembered precision,
and must lie certainly within (0, 1); for a continuous law one step of the proof (or, one-sided, a change of
sign) must show that the remembered enclosures hold the cutoffs.

The exact test satisfies its side conditions exactly, so an enclosure of one is true as soon as it contains the target.

Source: Lehmann and Romano 2005, Theorem 3.7.1 (a pair that fits is the only one); Moore, Kearfott and Cloud (2009),
Theorem 8.2.
"""

from __future__ import annotations

from verify.arithmetic.ball import accuracy_bits, around, balls, midpoint, radius, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.laws import Law
from verify.solution.conditions import Conditions
from verify.solution.continuous_window import Expansion
from verify.solution.one_sided import Tail, TailProblem, unit
from verify.solution.precision import accuracy_for, may_be_decimal
from verify.solution.window import Window

EXTRA_BITS = 64


def continuous_window(
    conditions: Conditions, c1: Enclosure, c2: Enclosure, sides: tuple[Enclosure, ...], prec: int, digits: int
) -> Window | None:
    """Return the window of a continuous law with these enclosures, or None where they are not proved to hold it."""
    with balls(prec + EXTRA_BITS) as A:
        if not (_within(c1, conditions.laws[0]) and _within(c2, conditions.laws[0]) and c1.upper < c2.lower):
            return None
        kept = [A.interval(c) for c in (c1, c2)]
        if min(accuracy_bits(box) for box in kept) < accuracy_for(digits):
            return None
        first, second = (around(box, 2 * radius(box)) for box in kept)
        here, box = Expansion.around(conditions, A, (midpoint(first), midpoint(second))), (first, second)
        image = here.sharpen(box, here.slopes(box), None)
        if image is None:
            return None
        found = [to_enclosure(i) for i in image]
        inside = all(c.lower <= f.lower and f.upper <= c.upper for c, f in zip((c1, c2), found, strict=True))
        targets = [to_enclosure(target) for target in conditions.targets(A)]
    holds = all(s.lower <= t.lower and t.upper <= s.upper for s, t in zip(sides, targets, strict=True))
    return Window(c1, c2, None, None, sides, prec) if inside and holds else None


def lattice_tail(problem: TailProblem, c: int, prec: int, digits: int) -> Tail | None:
    """Return the one-sided test of a lattice law with this cutoff, or None where it is not proved."""
    with balls(prec) as A:
        beyond, mass = problem.beyond(A, c), problem.law.density(A, c)
        gamma = (A.real(problem.level) - beyond) / mass
        if not (gamma > 0 and gamma < 1 and accuracy_bits(gamma) >= accuracy_for(digits)):
            return None
        phi = unit(gamma)
        return None if may_be_decimal(phi, digits) else Tail(c, phi, to_enclosure(beyond + gamma * mass), prec)


def continuous_tail(problem: TailProblem, c: Enclosure, side: Enclosure, prec: int, digits: int) -> Tail | None:
    """Return the one-sided test of a continuous law with this enclosure: within it the tail crosses the level."""
    if not _within(c, problem.law):
        return None
    with balls(prec + EXTRA_BITS) as A:
        level = A.real(problem.level)
        inner, outer = (c.lower, c.upper) if problem.above else (c.upper, c.lower)
        sharp = accuracy_bits(A.interval(c)) >= accuracy_for(digits)
        holds = problem.beyond(A, A.real(inner)) > level and problem.beyond(A, A.real(outer)) < level
        target = to_enclosure(level)
    true_side = side.lower <= target.lower and target.upper <= side.upper
    return Tail(c, None, side, prec) if sharp and holds and true_side else None


def _within(c: Enclosure, law: Law) -> bool:
    """Whether an enclosure lies inside the support, as far as its ends are rational; the formulas see to the rest."""
    low, high = law.support
    above = not isinstance(low, int | type(c.lower)) or c.lower > low
    below = not isinstance(high, int | type(c.lower)) or c.upper < high
    return above and below
