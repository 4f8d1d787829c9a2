"""Where to begin the search: the normal approximation, in floating point.

Nothing here needs to be right; a poor start costs time, never truth.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from statistics import NormalDist

STANDARD = NormalDist()


@dataclass(frozen=True)
class Rough:
    """Rough mean and standard deviation of a law."""

    mean: float
    spread: float


def normal_quantile(p: float) -> float:
    """Quantile of the standard normal law; ends of the range give a large finite number.

    Examples
    --------
    >>> round(normal_quantile(0.975), 2)
    1.96
    """
    if p <= 0.0:
        return -40.0
    return 40.0 if p >= 1.0 else STANDARD.inv_cdf(p)


def upper_point(alpha: float) -> float:
    """Return z with P(Z > z) = alpha, also for an alpha far below the rounding unit."""
    if alpha >= 1e-300:
        return -normal_quantile(alpha)
    return math.sqrt(700.0 * 2)


def window_start(laws: tuple[Rough, ...], level: float, outside: bool) -> tuple[float, float]:
    """Return rough ends of the window around the middle of the laws.

    Parameters
    ----------
    laws : tuple of Rough
        One or two laws.
    level : float
        The (first) level, the probability of rejecting.
    outside : bool
        Whether the test rejects outside.
    """
    low, high = min(law.mean for law in laws), max(law.mean for law in laws)
    spread = sum(law.spread for law in laws) / len(laws)
    middle, delta = (low + high) / 2, (high - low) / 2 / spread
    if outside:
        half = delta + upper_point(level / 2 if delta == 0 else level)
    else:
        half = _half_width(delta, level)
    return middle - half * spread, middle + half * spread


def _half_width(delta: float, level: float) -> float:
    """Half width h with P(abs(Z + delta) < h) = level, by bisection."""
    below, above = 0.0, delta + 45.0
    for _ in range(60):
        h = (below + above) / 2
        inside = STANDARD.cdf(h - delta) - STANDARD.cdf(-h - delta)
        below, above = (h, above) if inside < level else (below, h)
    return above


def extend(amount: float, slope: float, cap: float) -> float:
    """Return the distance y over which a density exp(slope * y) gathers ``amount`` (in units of its value at 0).

    Cut to [-cap, cap]; when there is not so much to gather, the cap.

    Examples
    --------
    >>> round(extend(1.0, 0.0, 10.0), 6), round(extend(1.7182818284, 1.0, 10.0), 6), extend(9.0, -1.0, 3.0)
    (1.0, 1.0, 3.0)
    """
    inner = amount * slope
    if abs(inner) < 1e-9:
        distance = amount
    elif inner <= -1.0:
        distance = math.copysign(math.inf, amount)
    else:
        distance = math.log1p(inner) / slope
    return max(-cap, min(cap, distance))
