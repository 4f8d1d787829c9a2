"""How far an end on a lattice must move to gather the weight that it wants: the step of both lattice searches.

Only a guide: what a search finds is proved afterwards.
"""

from __future__ import annotations

import math
from typing import Any

from verify.laws import Law
from verify.solution.start import extend, extend_far


def cells(A: Any, law: Law, c: int, side: int, weight: Any, cap: float) -> int:
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
    """
    wanted = as_float(weight)
    if 0 <= wanted <= 1:
        return 0
    beyond, here = law.density(A, law.atom(c + side, side)), law.density(A, c)
    ratio = float(beyond / here) if here > 0 and beyond > 0 else 0.0
    slope = math.log(ratio) if 0.0 < ratio < math.inf else -50.0
    lack = wanted - 1 if wanted > 1 else wanted
    if abs(lack) < 1e300:
        distance = extend(lack, slope, cap)
    else:
        distance = extend_far(1 if lack > 0 else -1, log_float(abs(weight)), slope, cap)
    return max(1, math.ceil(distance)) if wanted > 1 else min(-1, math.floor(distance))


def log_float(mass: Any) -> float:
    """Logarithm of a mass as a rough float: tells which law rules at a place."""
    return float(mass.log().mid()) if mass > 0 else -math.inf


def as_float(x: Any) -> float:
    """Return the midpoint of a ball, nan where the ball is too wide to guide a search."""
    if not x.is_finite() or x.rad() > 0.2 + abs(x.mid()) / 4:
        return math.nan
    return float(x.mid())
