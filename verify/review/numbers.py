"""The numbers of a test on the scale of V = sum of T(Xi), and small arithmetic on enclosures."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction

from verify.arithmetic.enclosure import Enclosure
from verify.solution.critical import Region
from verify.solution.solve import Solution


def affine(x: Enclosure, scale: Fraction, shift: Fraction = Fraction(0)) -> Enclosure:
    """Return scale * x + shift.

    Examples
    --------
    >>> affine(Enclosure.of(3), Fraction(-2), Fraction(1)).lower
    Fraction(-5, 1)
    """
    if scale == 1 and not shift:
        return x
    if scale == -1 and shift == 1:
        return Enclosure(1 - x.upper, 1 - x.lower)
    return Enclosure(*sorted((scale * x.lower + shift, scale * x.upper + shift)))


def plus(x: Enclosure, y: Enclosure) -> Enclosure:
    """Return x + y."""
    return Enclosure(x.lower + y.lower, x.upper + y.upper)


def complement(x: Enclosure | None) -> Enclosure | None:
    """Return 1 - x."""
    return None if x is None else affine(x, Fraction(-1), Fraction(1))


@dataclass(frozen=True)
class Numbers:
    """Cutoffs and fractions of a test; a one-sided test has its cutoff and fraction in ``c1`` and
    ``gamma1`` alone.

    Attributes
    ----------
    region : {"inside", "outside", "above", "below"}
        Where the test rejects.
    c1, c2 : Enclosure or None
        Cutoffs on the scale of V.
    gamma1, gamma2 : Enclosure or None
        Probability of rejecting at the cutoffs; None where there are no fractions.
    """

    region: Region
    c1: Enclosure
    c2: Enclosure | None = None
    gamma1: Enclosure | None = None
    gamma2: Enclosure | None = None

    @property
    def two_sided(self) -> bool:
        """Whether there are two cutoffs."""
        return self.c2 is not None

    def moved(self, by1: Enclosure, by2: Enclosure | None = None) -> Numbers:
        """Return the same with the cutoffs moved by some amounts."""
        second = self.c2 if self.c2 is None or by2 is None else plus(self.c2, by2)
        return replace(self, c1=plus(self.c1, by1), c2=second)

    def scaled(self, factor: Fraction) -> Numbers:
        """Return the same with the cutoffs multiplied by a positive factor."""
        return replace(self, c1=affine(self.c1, factor), c2=None if self.c2 is None else affine(self.c2, factor))

    def exchanged(self, *, ends: bool, fractions: bool) -> Numbers:
        """Return the same with the ends or the fractions exchanged."""
        changed = self
        if ends and self.c2 is not None:
            changed = replace(changed, c1=self.c2, c2=self.c1)
        return replace(changed, gamma1=self.gamma2, gamma2=self.gamma1) if fractions else changed

    def complemented(self) -> Numbers:
        """Return the same with 1 less each fraction."""
        return replace(self, gamma1=complement(self.gamma1), gamma2=complement(self.gamma2))

    def without_fractions(self) -> Numbers:
        """Return the cutoffs alone."""
        return replace(self, gamma1=None, gamma2=None)


def numbers_of(solution: Solution) -> Numbers:
    """Return the numbers of a solved problem."""
    if solution.c is not None:
        return Numbers(solution.rejects, solution.c, None, solution.gamma)
    if solution.c1 is None:
        raise ValueError("a solution without cutoffs")
    return Numbers(solution.rejects, solution.c1, solution.c2, solution.gamma1, solution.gamma2)
