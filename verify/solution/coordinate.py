"""A coordinate on the support in which a search can move freely: its logarithm where the support has an end.

A first cutoff of 1e-26 makes absolute steps meaningless; in log c it is an ordinary number.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from verify.solution.start import Rough


@dataclass(frozen=True)
class Coordinate:
    """Map between the support of a continuous law and the whole line.

    Attributes
    ----------
    low, high : Exact or None
        Ends of the support.
    """

    low: Any
    high: Any

    @property
    def free(self) -> bool:
        """Whether the support is the whole line, so that the coordinate is the point itself."""
        return self.low is None and self.high is None

    def place(self, A: Any, u: Any) -> Any:
        """Return the point of the support at coordinate u."""
        if self.free:
            return u
        if self.high is None:
            return A.real(self.low) + A.exp(u)
        if self.low is None:
            return A.real(self.high) - A.exp(-u)
        low, high = A.real(self.low), A.real(self.high)
        return (low + high * A.exp(u)) / (1 + A.exp(u))

    def of(self, A: Any, c: Any) -> Any:
        """Return the coordinate of a point of the support."""
        if self.free:
            return c
        if self.high is None:
            return A.log(c - A.real(self.low))
        if self.low is None:
            return -A.log(A.real(self.high) - c)
        return A.log((c - A.real(self.low)) / (A.real(self.high) - c))

    def speed(self, A: Any, c: Any) -> Any:
        """Return dc/du at a point of the support."""
        if self.free:
            return A.real(1)
        if self.high is None:
            return c - A.real(self.low)
        if self.low is None:
            return A.real(self.high) - c
        low, high = A.real(self.low), A.real(self.high)
        return (c - low) * (high - c) / (high - low)

    def holds(self, A: Any, c: Any) -> bool:
        """Whether a place lies inside the support."""
        return (self.low is None or bool(c > A.real(self.low))) and (self.high is None or bool(c < A.real(self.high)))

    def place_roughly(self, A: Any, u: float) -> float:
        """Return the same in floating point, for a search."""
        return u if self.free else float(self.place(A, A.real(Fraction(u))).mid())

    def rough(self, A: Any, law: Rough) -> Rough:
        """Return rough moments in the coordinate.

        For a half-line those of the log-normal law with these moments; else by the delta method.
        """
        if self.free:
            return law
        m = A.real(Fraction(law.mean))
        spread = law.spread / float(self.speed(A, m).mid())
        place = float(self.of(A, m).mid())
        if self.high is not None and self.low is not None:
            return Rough(place, spread)
        variance = math.log1p(spread * spread)
        return Rough(place - math.copysign(variance / 2, spread), math.sqrt(variance))
