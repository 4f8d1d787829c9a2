"""How far an end on a lattice must move to gather the weight that it wants: the step of both lattice searches.

Only a guide: what a search finds is proved afterwards.
"""

from __future__ import annotations

import math
from typing import Any

from verify.laws import Law
from verify.solution.start import extend, extend_far


def cells(A: Any, law: Law, c: int, side: int, weight: Any, cap: float, part: Any, target: Any) -> int:
    """Return the cells by which an end at c must move to the given side (negative: the other way).

    Parameters
    ----------
    A : arithmetic
        Balls of a search.
    law : Law
        The law that rules at c; its masses go on geometrically there.
    c, side : int
        The end, and the direction (+1 or -1) in which what it belongs to grows.
    weight : arb
        Units of the mass at c that are wanted: between 0 and 1 the end may stay.
    cap : float
        Longest step worth taking.
    part, target : arb
        Probability under this law of what the end belongs to, as it is and as it shall be.
    """
    wanted = as_float(weight)
    grows = bool(weight > 1) or wanted > 1  # a double may not tell it from 1
    if not (grows or weight < 0 or wanted < 0):
        return 0
    beyond, here = law.density(A, law.atom(c + side, side)), law.density(A, c)
    ratio = float(beyond / here) if here > 0 and beyond > 0 else 0.0
    slope = math.log(ratio) if 0.0 < ratio < math.inf else -50.0
    lack = wanted - 1 if grows else wanted
    if abs(lack) < 1e300:
        distance = extend(lack * _per_atom(slope, grows), slope, cap)
    else:
        distance = extend_far(1 if grows else -1, log_float(abs(weight)), slope, cap)
    if abs(distance) >= cap and distance * slope < 0:
        distance = math.copysign(min(cap, _until_left(part, target, slope, grows)), distance)
    return max(1, math.ceil(distance)) if grows else min(-1, math.floor(distance))


def _per_atom(slope: float, grows: bool) -> float:
    """Length of a density exp(slope * y) that holds as much as the next atom does."""
    towards = -slope if grows else slope
    return math.expm1(min(towards, 700.0)) / towards if towards else 1.0


def _until_left(part: Any, target: Any, slope: float, grows: bool) -> float:
    """Cells after which masses that fall at this slope leave what shall be left of the side that gives."""
    there, stays = (1 - part, 1 - target) if grows else (part, target)
    excess = log_float(there) - log_float(stays)
    return excess / abs(slope) if 0 < excess < math.inf else math.inf


def log_float(mass: Any) -> float:
    """Logarithm of a mass as a rough float: tells which law rules at a place."""
    return float(mass.log().mid()) if mass > 0 else -math.inf


def as_float(x: Any) -> float:
    """Return the midpoint of a ball, nan where the ball is too wide to guide a search."""
    if not x.is_finite() or x.rad() > 0.2 + abs(x.mid()) / 4:
        return math.nan
    return float(x.mid())
