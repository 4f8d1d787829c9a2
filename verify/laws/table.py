"""A table of masses on consecutive lattice points, with its sums, in balls or in whole numbers over one
denominator.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import accumulate
from typing import Any

Number = Any


@dataclass(frozen=True, eq=False)
class Table:
    """Masses of V at start, start + 1, ...

    Attributes
    ----------
    start : int
        The first lattice point.
    raw : sequence of numbers
        Masses times ``total``: balls, or ints.
    total : number
        What the raw masses are divided by (1 for balls that are masses already).
    complete : bool
        Whether nothing lies above the last point, but for what ``missing`` bounds.
    exact_below : int or None
        Masses at points below this are complete in any case; None for all of them.
    missing : number
        Bound of the mass that the table lacks, wherever it lies (0 when nothing was cut).
    """

    start: int
    raw: Sequence[Number]
    total: Number
    complete: bool
    exact_below: int | None = None
    missing: Number = 0

    @property
    def end(self) -> int:
        """The last lattice point of the table."""
        return self.start + len(self.raw) - 1

    @cached_property
    def below(self) -> list[Number]:
        """Sums of raw masses up to each point."""
        return list(accumulate(self.raw))

    @cached_property
    def above(self) -> list[Number]:
        """Sums of raw masses above each point; index 0 is the sum of them all."""
        return list(accumulate(reversed(self.raw)))[::-1]

    @cached_property
    def _moments(self) -> list[Number]:
        return [(self.start + i) * mass for i, mass in enumerate(self.raw)]

    @cached_property
    def mean_below(self) -> list[Number]:
        """Sums of point times raw mass up to each point."""
        return list(accumulate(self._moments))

    @cached_property
    def mean_above(self) -> list[Number]:
        """Sums of point times raw mass above each point."""
        return list(accumulate(reversed(self._moments)))[::-1]

    def lower(self, v: int, *, moment: bool = False) -> Number:
        """Raw sum over points up to v."""
        if v < self.start:
            return 0
        sums = self.mean_below if moment else self.below
        return sums[min(v, self.end) - self.start]

    def upper(self, v: int, *, moment: bool = False) -> Number:
        """Raw sum over points beyond v, as far as the table goes."""
        if v >= self.end:
            return 0
        sums = self.mean_above if moment else self.above
        return sums[max(v + 1, self.start) - self.start]

    def cut_touches(self, v: int) -> bool:
        """Whether masses up to v may lack something."""
        return self.exact_below is not None and v >= self.exact_below
