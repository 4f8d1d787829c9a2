"""Where a falling function crosses a level, shown by certain signs alone: nothing is asked of its slope.

The sure way for a cutoff at which the density of the statistic jumps, vanishes or is unbounded, where interval Newton
does not get on.

Source: bisection; that the sign changes is the whole proof (intermediate value theorem; at a jump of the slope the
function itself is continuous).
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from verify.arithmetic.ball import midpoint

Ball = Any

WIDER = 256
"""Factor from one try at a bracket to the next."""

MOST_TRIES = 64


def crossing(
    side: Callable[[Ball], int], centre: Ball, width: Ball, narrow: Callable[[Ball], bool], most: int
) -> Ball | None:
    """Return a ball that certainly holds the crossing, narrow enough; None where signs stay open.

    Parameters
    ----------
    side : callable
        place -> +1 certainly below the crossing (to its left), -1 certainly above it, 0 open.
    centre, width : arb
        Where to look first, and how far to either side.
    narrow : callable
        Whether a ball is narrow enough.
    most : int
        Halvings after which it is given up.

    Examples
    --------
    >>> from flint import arb
    >>> def side(x):
    ...     return 1 if x * x < 2 else -1 if x * x > 2 else 0
    >>> found = crossing(side, arb(7) / 5, arb(2) ** -20, lambda ball: ball.rad() < 2**-30, 100)
    >>> found.contains(arb(2).sqrt().mid()), crossing(lambda x: 0, arb(1), arb(1), bool, 100)
    (True, None)
    """
    bracket = _bracket(side, centre, width)
    if bracket is None:
        return None
    low, high = bracket
    for _ in range(most):
        box: Ball = low.union(high)
        if narrow(box):
            return box
        moved = _halved(side, low, high)
        if moved == (low, high):
            return None
        low, high = moved
    return None


def _bracket(side: Callable[[Ball], int], centre: Ball, width: Ball) -> tuple[Ball, Ball] | None:
    """Two places with certain and different signs."""
    for _ in range(MOST_TRIES):
        low, high = midpoint(centre - width), midpoint(centre + width)
        if side(low) > 0 > side(high):
            return low, high
        width = WIDER * width
    return None


def _halved(side: Callable[[Ball], int], low: Ball, high: Ball) -> tuple[Ball, Ball]:
    """Move one end to the middle; where the sign is open there, both ends nearer to it."""
    middle = midpoint((low + high) / 2)
    sign = side(middle)
    if sign:
        return (middle, high) if sign > 0 else (low, middle)
    nearer = midpoint((3 * low + high) / 4), midpoint((low + 3 * high) / 4)
    return nearer[0] if side(nearer[0]) > 0 else low, nearer[1] if side(nearer[1]) < 0 else high
