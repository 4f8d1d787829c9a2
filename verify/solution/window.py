"""A solved two-sided test on the scale of its own law: two ends and two fractions, in canonical form."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from verify.arithmetic.ball import balls, magnitude
from verify.arithmetic.enclosure import Enclosure
from verify.errors import UndecidedError
from verify.laws import Law
from verify.solution.conditions import Conditions
from verify.solution.start import Rough

MOST_CLOSENESS = 1 << 16
"""Bits at which two laws that still look alike are given up."""


@dataclass(frozen=True)
class Window:
    """Ends and fractions of a two-sided critical function.

    Attributes
    ----------
    c1, c2 : int or Enclosure
        The ends: ints on a lattice, enclosures for a continuous law.
    phi1, phi2 : Enclosure or None
        The critical function at the ends; None for a continuous law. Equal when c1 = c2.
    conditions : tuple of Enclosure
        The left-hand sides of the side conditions, enclosed at this solution.
    prec : int
        Bits at which the proof succeeded.
    """

    c1: Any
    c2: Any
    phi1: Enclosure | None
    phi2: Enclosure | None
    conditions: tuple[Enclosure, ...]
    prec: int


@dataclass(frozen=True)
class WindowSearch:
    """What a search for the window knows.

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


def rough_laws(laws: tuple[Law, ...]) -> tuple[tuple[Rough, ...], int, bool]:
    """Return rough moments, the bits by which the laws lie close together, and whether the second has the larger mean.

    Raises
    ------
    UndecidedError
        When the moments cannot be enclosed, or the two laws cannot be told apart.
    """
    bits = 64
    while bits <= MOST_CLOSENESS:
        with balls(bits) as A:
            moments = [(law.expectation(A), law.spread(A)) for law in laws]
            rough = tuple(Rough(float(m.mid()), float(s.mid())) for m, s in moments)
            if not all(math.isfinite(law.mean) and math.isfinite(law.spread) for law in rough):
                bits *= 2
                continue
            if len(laws) == 1:
                return rough, 0, True
            gap = (moments[1][0] - moments[0][0]) / moments[0][1]
            if gap > 0 or gap < 0:
                return rough, max(0, -(magnitude(gap) or 0)), bool(gap > 0)
        bits *= 2
    if len(laws) == 1:
        raise UndecidedError("the mean and the standard deviation of the law at the limit cannot be enclosed")
    raise UndecidedError("the laws at the two limits cannot be told apart")


SEARCH_BITS = {True: 64, False: 112}
"""Bits of the search for a lattice law and for a continuous one, before what tails and scales cost."""


def search_precision(
    rough: tuple[Rough, ...],
    levels: tuple[Any, ...],
    closeness: int,
    *,
    narrow: bool = False,
    base: int = SEARCH_BITS[True],
) -> int:
    """Bits for the search: for a tail of the level's size (or of what it leaves), one mass of many, two close laws.

    A narrow window of a continuous law has both ends in nearly the same place, which costs the level's size once more.
    """
    scale = max(abs(law.mean) + law.spread for law in rough)
    with balls(64) as A:
        sides = [side for level in levels for side in (A.real(level), 1 - A.real(level))]
        depth = max(0, *(-(magnitude(side) or 0) for side in sides))
    return base + (2 if narrow else 1) * depth + int(1.5 * math.log2(scale + 2)) + 2 * closeness
