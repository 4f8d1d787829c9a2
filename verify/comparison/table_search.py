"""Cutoffs and fractions from a table of masses: sums, interpolation and a 2 x 2 system.

The second row of a table is either the masses under the second limit or, for a point null, the masses under
the only limit
times (place - mean), whose target is 0. In both cases the second side condition is monotone in the place
where the window
starts, and piecewise linear between the atoms: the root is found among the break points and by one linear
step.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

Array = Any

ROUNDING = 1e-12
"""A relative miss of the second equation below this is rounding of the sums."""


@dataclass(frozen=True)
class Table:
    """Ascending places, the masses of the first row, the weights of the second, and the two targets."""

    places: Array
    first: Array
    second: Array
    targets: tuple[float, float]


def one_sided_end(places: Array, masses: Array, alpha: float, large: bool) -> tuple[float, float]:
    """Cutoff and fraction of the one-sided test that rejects large (or small) places."""
    order = slice(None, None, -1) if large else slice(None)
    tail = np.cumsum(masses[order])
    i = min(int(np.searchsorted(tail, alpha)), len(tail) - 1)
    before = tail[i - 1] if i else 0.0
    return float(places[order][i]), float((alpha - before) / masses[order][i])


def outside_ends(table: Table) -> tuple[int, int, float, float]:
    """Indices and fractions of the test that rejects outside a window."""
    alpha, target = table.targets
    left = [np.concatenate([[0.0], np.cumsum(row)]) for row in (table.first, table.second)]
    right = [np.concatenate([[0.0], np.cumsum(row[::-1])]) for row in (table.first, table.second)]

    def excess(s: Array) -> Array:
        return _along(s, left) + _along(alpha - s, right) - target

    s = _root(excess, np.concatenate([left[0], alpha - right[0]]), alpha)
    last = len(table.places) - 1
    i = min(max(int(np.searchsorted(left[0], s)) - 1, 0), last)
    j = last - min(max(int(np.searchsorted(right[0], alpha - s)) - 1, 0), last)
    return _best_pair(table, i, j, left, right)


def inside_ends(table: Table) -> tuple[int, int, float, float]:
    """Indices and fractions of the test that rejects inside a window."""
    alpha, target = table.targets
    left = [np.concatenate([[0.0], np.cumsum(row)]) for row in (table.first, table.second)]

    def excess(s: Array) -> Array:
        return _along(s + alpha, left) - _along(s, left) - target

    s = _root(excess, np.concatenate([left[0], left[0] - alpha]), 1 - alpha)
    last = len(table.places) - 1
    i = min(max(int(np.searchsorted(left[0], s, side="right")) - 1, 0), last)
    j = min(max(int(np.searchsorted(left[0], s + alpha)) - 1, i), last)
    return _best_pair(table, i, j)


def _along(s: Array, row: list[Array]) -> Array:
    """The second row's cumulative sum where the first row's is s."""
    return np.interp(s, row[0], row[1])


def _root(excess: Any, breaks: Array, end: float) -> float:
    """Root in [0, end] of a function that is linear between the breaks and monotone."""
    points = np.unique(np.concatenate([[0.0, end], breaks[(breaks > 0) & (breaks < end)]]))
    heights = excess(points)
    if not np.all(np.isfinite(heights)) or heights[0] * heights[-1] > 0:
        raise ArithmeticError("the second side condition does not change its sign over the table")
    k = int(np.argmax(np.sign(heights) != np.sign(heights[0])))  # the first point past the root
    if k == 0:
        return float(points[0])
    a, b = heights[k - 1], heights[k]
    return float(points[k - 1] + (points[k] - points[k - 1]) * (a / (a - b)))


def _best_pair(
    table: Table, i: int, j: int, left: list[Array] | None = None, right: list[Array] | None = None
) -> tuple[int, int, float, float]:
    """Of the pairs around (i, j), that whose fractions lie in [0, 1] most nearly; single atoms come first."""
    best = (i, j, float("nan"), float("nan"))
    worst = float("inf")
    last = len(table.places) - 1
    around = [(a, b) for a in (-1, 0, 1) for b in (-1, 0, 1)]
    steps = sorted(around, key=lambda step: (i + step[0] != j + step[1], abs(step[0]) + abs(step[1])))
    for a, b in steps:
        low, high = i + a, j + b
        if not 0 <= low <= high <= last:
            continue
        if left is not None and right is not None:
            known = [left[row][low] + right[row][last - high] for row in (0, 1)]
        else:
            known = [float(np.sum(row[low + 1 : high])) for row in (table.first, table.second)]
        g1, g2 = _fractions(table, low, high, known)
        miss = max(-g1, g1 - 1, -g2, g2 - 1, _left_over(table, low, known[1], g1) if low == high else 0.0, 0.0)
        if miss < worst:
            worst, best = miss, (low, high, g1, g2)
        if miss == 0:
            break
    return best


def _left_over(table: Table, i: int, known: float, g: float) -> float:
    """How far one atom alone, its fraction from the first equation, misses the second; 0 within rounding."""
    miss = abs(table.targets[1] - known - g * table.second[i]) / (table.targets[0] * np.sum(np.abs(table.second)))
    return float(miss) if miss > ROUNDING else 0.0


def _fractions(table: Table, i: int, j: int, known: list[float]) -> tuple[float, float]:
    """Cramer's rule for the two fractions; one fraction where both ends are one atom."""
    p, q = table.first, table.second
    a, b = table.targets[0] - known[0], table.targets[1] - known[1]
    if i == j:
        return float(a / p[i]), float(a / p[i])
    row = q[i] / p[i], q[j] / p[j]  # scaled by the masses first: their product may underflow
    spread = row[1] - row[0]
    x, y = (a * row[1] - b) / spread, (b - a * row[0]) / spread
    return float(x / p[i]), float(y / p[j])
