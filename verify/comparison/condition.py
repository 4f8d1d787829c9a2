"""How sensitive the numbers are: the condition of the side conditions, from the proven numbers.

A relative error eps in the tails of the law moves a fraction gamma by up to condition * eps, and a continuous
cutoff by up to condition * eps relative to itself. It is the largest row of |M^-1| (levels), M the masses
(densities) of both side conditions at the two cutoffs. The law is evaluated in balls here; no opinion is
formed.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure

if TYPE_CHECKING:
    from verify.solution.solve import Solution

_BITS = 128


@dataclass(frozen=True)
class Sensitivity:
    """What rounding errors do to a solution's numbers.

    Attributes
    ----------
    condition : float or None
        None where it cannot be computed (a mass that underflows, equal rows).
    masses : dict of str to Fraction
        Mass (lattice) under the first limit at each cutoff, by the cutoff's name; empty for a continuous law.
    spread : Fraction
        Standard deviation of V under the first limit.
    """

    condition: float | None
    masses: dict[str, Fraction]
    spread: Fraction


def sensitivity(solution: Solution) -> Sensitivity:
    """Condition, masses at the cutoffs, and spread of V."""
    ends = solution.critical
    one = solution.critical.region in ("above", "below") or ends.c1 == ends.c2
    places = [ends.c1] if one else [ends.c1, ends.c2]
    with balls(_BITS) as A:
        at = [A.interval(c) if isinstance(c, Enclosure) else c for c in places]
        rows = [[_rational(law.density(A, c)) for c in at] for law in solution.laws]
        points = [_rational(solution.laws[0].value(A, c)) for c in at]
        mean = _rational(solution.laws[0].expectation(A))
        spread = _rational(solution.laws[0].spread(A))
        stretch = abs(_rational(A.real(solution.family.scale)))
    levels = [_fraction(level) for level in solution.problem.levels]
    if len(rows) == 1 and len(places) == 2:  # the moment condition of a point null
        rows.append([(point - mean) * mass for point, mass in zip(points, rows[0], strict=True)])
        levels.append(levels[0] * max(abs(point - mean) for point in points))
    units = [Fraction(1)] * len(places)
    if not solution.laws[0].lattice:
        units = [max(abs(point), spread) if solution.laws[0].name == "normal" else abs(point) for point in points]
    return Sensitivity(_condition(rows, levels, units), _masses(solution, places, rows[0]), spread * stretch)


def _masses(solution: Solution, places: list[Any], row: list[Fraction]) -> dict[str, Fraction]:
    if not solution.laws[0].lattice:
        return {}
    if solution.critical.region in ("above", "below"):
        return {"c": row[0]}
    first, last = row[0], row[-1]
    flipped = float(solution.family.scale) < 0
    return {"c1": last, "c2": first} if flipped else {"c1": first, "c2": last}


def _condition(rows: list[list[Fraction]], levels: list[Fraction], units: list[Fraction]) -> float | None:
    if any(unit == 0 for unit in units) or any(mass == 0 for mass in rows[0]):
        return None
    if len(units) == 1:
        return _float(levels[0] / (rows[0][0] * units[0]))
    (a, b), (c, d) = rows[0], rows[1]
    determinant = abs(a * d - b * c)
    if determinant == 0:
        return None
    moves = (abs(d) * levels[0] + abs(b) * levels[1], abs(c) * levels[0] + abs(a) * levels[1])
    return _float(max(move / (determinant * unit) for move, unit in zip(moves, units, strict=True)))


def _float(value: Fraction) -> float | None:
    try:
        return float(value)
    except OverflowError:
        return None


def _rational(ball: Any) -> Fraction:
    return to_enclosure(ball).mid


def _fraction(value: Any) -> Fraction:
    """An exact number as a rational; an irrational one rounded to the working bits."""
    if isinstance(value, Fraction):
        return value
    with balls(_BITS) as A:
        return _rational(A.real(value))
