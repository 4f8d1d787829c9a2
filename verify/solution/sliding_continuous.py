"""The monotone search for a continuous law: nested bisection in the coordinate of the support.

The lower end is bisected; the upper end follows from the first condition; the second condition rises with the lower
end (see :mod:`verify.solution.sliding` for the argument). Rough on purpose: Newton's method finishes.
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from verify.solution.conditions import Conditions
from verify.solution.coordinate import Coordinate
from verify.solution.start import Rough

ROUNDS = 70


def slide_continuous(
    conditions: Conditions, rough: tuple[Rough, ...], rising: bool, coordinate: Coordinate, A: Any
) -> tuple[Any, Any]:
    """Return rough ends (c1, c2) of the window; the two levels are taken to be attainable."""
    law = conditions.laws[0]
    level = A.real(conditions.levels[0])
    outside_mass = level if conditions.outside else 1 - level
    reach = _reach(coordinate, rough)

    def quantile(upper_tail: Any) -> Any:
        return _bisect(A, coordinate, reach, lambda c: law.sf(A, c).mid() > upper_tail.mid())

    def end(c1: Any) -> Any:
        return quantile(outside_mass - law.cdf(A, c1))

    def too_low(c1: Any) -> bool:
        if law.cdf(A, c1).mid() >= outside_mass.mid():
            return False
        return bool(excess(conditions, rising, A, c1, end(c1)) <= 0)

    c1 = _bisect(A, coordinate, reach, too_low)
    return c1, end(c1)


def excess(conditions: Conditions, rising: bool, A: Any, c1: Any, c2: Any) -> Any:
    """Second condition of the window less its target, signed so that it rises as the window slides up."""
    whole, target = conditions.whole(A, c1, c2)[1], conditions.targets(A)[1]
    difference = (whole - target).mid()
    inside = -difference if conditions.outside else difference
    return inside if conditions.point or rising else -inside


def _reach(coordinate: Coordinate, rough: tuple[Rough, ...]) -> tuple[float, float]:
    """Range of the coordinate that holds every cutoff worth looking at."""
    if coordinate.low is None and coordinate.high is None:
        spread = max(r.spread for r in rough)
        return min(r.mean for r in rough) - 60 * spread, max(r.mean for r in rough) + 60 * spread
    return -2000.0, 2000.0 if coordinate.high is not None else 60.0 + max(
        0.0, *(abs(r.mean) + r.spread for r in rough)
    ) ** 0.1


def _bisect(A: Any, coordinate: Coordinate, reach: tuple[float, float], goes_right: Any) -> Any:
    low, high = (A.real(Fraction(end)) for end in reach)
    for _ in range(ROUNDS):
        middle = ((low + high) / 2).mid()
        low, high = (middle, high) if goes_right(coordinate.place(A, middle).mid()) else (low, middle)
    return coordinate.place(A, ((low + high) / 2).mid()).mid()
