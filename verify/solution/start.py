"""Where to begin the search: the normal approximation, in floating point.

Nothing here needs to be right; a poor start costs time, never truth.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from statistics import NormalDist

STANDARD = NormalDist()
ROOT_HALF = math.sqrt(0.5)
INVERSE_ROOT_TWO_PI = 1 / math.sqrt(2 * math.pi)
FAR = 8.0
"""Distance of the means, in spreads, from which each end of the window is a matter of one law alone."""

STEPS = 15
"""Newton steps on normal scores before they are given up."""

GOOD_START = 1e-4
"""Newton steps on normal scores end below this share of a standard deviation: the scores are no better."""

HALVINGS = 14

SATURATED = -0.9
"""Share of all that a falling density still holds from which what is left over cannot be told from nothing."""


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
    lower, upper = min(laws, key=lambda law: law.mean), max(laws, key=lambda law: law.mean)
    low, high = lower.mean, upper.mean
    apart = upper_point(level) * (1 if outside else -1)
    if high - low > FAR * (lower.spread + upper.spread):
        ends = low - apart * lower.spread, high + apart * upper.spread
        if ends[0] < ends[1]:
            return ends
    spread = sum(law.spread for law in laws) / len(laws)
    middle, delta = (low + high) / 2, (high - low) / 2 / spread
    half = delta + upper_point(level / 2 if delta == 0 else level) if outside else _half_width(delta, level)
    return middle - half * spread, middle + half * spread


def _half_width(delta: float, level: float) -> float:
    """Half width h with P(abs(Z + delta) < h) = level, by bisection."""
    below, above = 0.0, delta + 45.0
    for _ in range(HALVINGS):
        h = (below + above) / 2
        inside = upper_tail(-h - delta) - upper_tail(h - delta)
        below, above = (h, above) if inside < level else (below, h)
    return above


def scored_window(
    score: Callable[[int, float], tuple[float, float]],
    levels: tuple[float, float],
    ends: tuple[float, float],
    outside: bool,
) -> tuple[float, float]:
    """Improve rough ends by Newton's method on the normal scores of the two laws.

    Parameters
    ----------
    score : callable
        (which law, place) to (normal score, its derivative).
    levels : tuple of float
        Probability of rejecting under each law.
    ends : tuple of float
        Where to begin.
    outside : bool
        Whether the test rejects outside.

    Returns
    -------
    tuple of float
        Better ends, or the ends given where the method does not settle.
    """
    a, b = ends
    for _ in range(STEPS):
        left, right = [score(i, a) for i in (0, 1)], [score(i, b) for i in (0, 1)]
        lack = [_lack(left[i][0], right[i][0], levels[i], outside) for i in (0, 1)]
        d = [normal_density(z) * slope for z, slope in (*left, *right)]
        determinant = d[0] * d[3] - d[1] * d[2]
        if not abs(determinant) > 1e-280:
            return ends
        out_a, out_b = (lack[0] * d[3] - lack[1] * d[2]) / determinant, (lack[1] * d[0] - lack[0] * d[1]) / determinant
        reach = 1.0 / min(abs(slope) for _, slope in (*left, *right))
        out_a, out_b = (max(-reach, min(reach, step)) for step in (out_a, out_b))
        a, b = a - out_a, b + out_b
        if not a < b or math.isnan(a + b):
            return ends
        if abs(out_a) + abs(out_b) < GOOD_START * reach:
            return a, b
    return ends


def _lack(z_left: float, z_right: float, level: float, outside: bool) -> float:
    """Probability that the window lacks: positive when it must grow."""
    if outside:
        return upper_tail(-z_left) + upper_tail(z_right) - level
    return level - (upper_tail(z_left) - upper_tail(z_right))


def upper_tail(z: float) -> float:
    """P(Z > z) of the standard normal law."""
    return 0.5 * math.erfc(z * ROOT_HALF)


def normal_density(z: float) -> float:
    """Density of the standard normal law."""
    return math.exp(-0.5 * z * z) * INVERSE_ROOT_TWO_PI


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
    elif inner <= SATURATED:
        distance = math.copysign(math.inf, amount)
    else:
        distance = math.log1p(inner) / slope
    return max(-cap, min(cap, distance))


def extend_far(sign: int, log_amount: float, slope: float, cap: float) -> float:
    """Return the same for an amount of this sign whose logarithm is large: no double need hold the amount itself.

    Examples
    --------
    >>> round(extend_far(-1, 5000.0, -2.0, 1e6), 3), extend_far(1, 5000.0, -2.0, 30.0)
    (-2500.347, 30.0)
    """
    if slope * sign <= 0:
        return sign * cap
    return max(-cap, min(cap, (log_amount + math.log(abs(slope))) / slope))
