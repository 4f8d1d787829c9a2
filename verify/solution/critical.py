"""The critical function phi of a test on the scale of the law of Y, and its expectation under any law of the family."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Literal

from verify.arithmetic.ball import Balls, balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.laws import Law
from verify.solution.conditions import interior

Region = Literal["inside", "outside", "above", "below"]


@dataclass(frozen=True)
class CriticalFunction:
    """Probability of rejection as a function of the statistic.

    Attributes
    ----------
    region : {"inside", "outside", "above", "below"}
        Where the test rejects for certain: strictly inside or outside (c1, c2), strictly above or below c1.
    c1, c2 : int or Enclosure
        The ends (ints on a lattice); one-sided tests have c1 = c2.
    phi1, phi2 : Enclosure or None
        The fractions at the ends; None for a continuous law. On a single atom both are the same number.
    """

    region: Region
    c1: Any
    c2: Any
    phi1: Enclosure | None
    phi2: Enclosure | None

    def _place(self, A: Balls, c: Any) -> Any:
        return A.interval(c) if isinstance(c, Enclosure) else c

    def expectation(self, law: Law, A: Balls) -> Any:
        """Return the ball of E phi(V) under a law of the family."""
        c1, c2 = self._place(A, self.c1), self._place(A, self.c2)
        first, last = (c1 - 1, c2) if law.lattice else (c1, c2)
        if self.region == "inside":
            centre = float(law.expectation(A).mid())
            total = interior(law, A, c1, c2, centre) if self.c1 != self.c2 else A.real(0)
        elif self.region == "outside":
            total = law.cdf(A, first) + law.sf(A, last)
        elif self.region == "above":
            total = law.sf(A, last)
        else:
            total = law.cdf(A, first)
        if self.phi1 is not None and self.phi2 is not None:
            total = total + A.interval(self.phi1) * law.density(A, c1)
            if self.c1 != self.c2:
                total = total + A.interval(self.phi2) * law.density(A, c2)
        return total

    def power(self, law: Law, prec: int) -> Enclosure:
        """Return E phi(V) as an enclosure inside [0, 1], computed at so many bits."""
        zero, one = Enclosure.of(0).lower, Enclosure.of(1).lower
        with balls(prec) as A:
            return to_enclosure(self.expectation(law, A), low=zero, high=one)

    def at(self, v: Any) -> Enclosure | None:
        """Return phi(v) for an exact v on the scale of Y, None where v cannot be told from a cutoff."""
        if isinstance(self.c1, int):
            if v == self.c1:
                return self.phi1
            if v == self.c2:
                return self.phi2
            low, high = v < self.c1, v > self.c2
        else:
            if self.c1.contains(v) or self.c2.contains(v):
                return None
            low, high = v < self.c1.lower, v > self.c2.upper
        rejected = {"inside": not (low or high), "outside": low or high, "above": high, "below": low}[self.region]
        return Enclosure.of(int(rejected))
