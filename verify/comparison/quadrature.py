"""One observation of a continuous formula as Gauss nodes, and the law of T(x) by integrals over x.

The variable is x = x(w) with w on the whole line (exp, sinh or logistic, by the support), so that an end of
the support or a far tail is a place where the integrand merely dies out. The panels break at the mode under
each limit (a kink usually sits there) and where T turns.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import numpy as np
from scipy.optimize import brentq, minimize_scalar
from scipy.special import expit

Array = Any
PANELS, FINE_PANELS, GRADED_PANELS, ORDER = 24, 18, 5, 16
NOISE = 1e-12
"""T rounds to about this much of its usual size: a statistic such as log(1 + x**3) ripples where it is nearly flat."""
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(ORDER)


@dataclass(frozen=True)
class Change:
    """x as a function of w on the whole line, with log|dx/dw|."""

    x: Callable[[Array], Array]
    log_jacobian: Callable[[Array], Array]


def change_of_variable(lower: float, upper: float, centre: float = 0.0, width: float = 1.0) -> Change:
    """The map from the whole line onto the support; ``centre`` and ``width`` serve the real line."""
    if np.isfinite(lower) and np.isfinite(upper):
        span = upper - lower
        return Change(lambda w: lower + span * expit(w), lambda w: np.log(span * expit(w)) + np.log(expit(-w)))
    if np.isfinite(lower):
        return Change(lambda w: lower + np.exp(w), lambda w: w + 0.0)
    if np.isfinite(upper):
        return Change(lambda w: upper - np.exp(-w), lambda w: -w)
    return Change(lambda w: centre + width * np.sinh(w), lambda w: np.log(width) + np.logaddexp(w, -w) - np.log(2.0))


def run_of_interest(height: Callable[[Array], Array], depth: float) -> tuple[float, float, float]:
    """Where a log-integrand on the line is within ``depth`` of its peak: left end, mode, right end."""
    grid = np.linspace(-690.0, 690.0, 2761)
    mode, peak = _climb(height, grid)
    left = _edge(height, grid[grid < mode][::-1], mode, peak - depth)
    right = _edge(height, grid[grid > mode], mode, peak - depth)
    return left, mode, right


def _climb(height: Callable[[Array], Array], grid: Array) -> tuple[float, float]:
    while True:
        heights = np.nan_to_num(height(grid), nan=-np.inf, posinf=-np.inf)
        best = int(np.argmax(heights))
        if not np.isfinite(heights[best]):
            raise ArithmeticError("the formula gives no positive density at any place looked at")
        left, right = grid[max(best - 1, 0)], grid[min(best + 1, len(grid) - 1)]
        if right - left <= 1e-9 * max(1.0, abs(grid[best])):
            return float(grid[best]), float(heights[best])
        grid = np.linspace(left, right, 65)


def _edge(height: Callable[[Array], Array], outward: Array, mode: float, floor: float) -> float:
    """First place outward where the integrand is below the floor, bisected."""
    heights = np.nan_to_num(height(outward), nan=-np.inf, posinf=-np.inf)
    low = np.flatnonzero(heights < floor)
    if not len(low):
        return float(outward[-1])
    outer = float(outward[low[0]])
    inner = float(outward[low[0] - 1]) if low[0] else mode
    for _ in range(40):
        middle = (inner + outer) / 2
        inner, outer = (inner, middle) if not height(np.array([middle]))[0] > floor else (middle, outer)
        if not height(np.array([inner]))[0] > floor:
            inner, outer = outer, inner
    return outer


@dataclass(frozen=True)
class Nodes:
    """Gauss panels over w for one observation.

    Attributes
    ----------
    edges : array
        Ends of the panels, ascending.
    w, weights, places : array of shape (panels, ORDER)
        Nodes, quadrature weights, and T at the nodes.
    densities : list of array of that shape
        f(x(w); t) dx/dw under each limit.
    turns, turning_places : array
        Ends of the stretches of w on which T is monotone, and T there.
    """

    edges: Array
    w: Array
    weights: Array
    places: Array
    densities: list[Array]
    turns: Array
    turning_places: Array


def gauss_panels(edges: Array) -> tuple[Array, Array]:
    """Nodes and weights of the panels between the edges, one row a panel."""
    half = np.diff(edges)[:, None] / 2
    return edges[:-1, None] + half * (1 + _NODES), half * _WEIGHTS


def nodes(heights: list[Callable[[Array], Array]], place: Callable[[Array], Array], depth: float, fine: int) -> Nodes:
    """Lay panels where some limit's density matters and T's turning points are known.

    Parameters
    ----------
    heights : list of callables
        log of f dx/dw under each limit.
    place : callable
        T(x(w)).
    depth : float
        How far below the peak a density still matters, in natural logarithms.
    fine : int
        0 for plain integrals; 1, 2, ... lays so many times more panels around the modes and towards the
        turns, for a transform whose waves the nodes have to resolve.
    """
    levels = (1.0, 3.0, 8.0, 20.0, depth) if fine else (depth,)
    marks = np.unique(np.array([run_of_interest(height, level) for height in heights for level in levels]))
    turns = _turning_points(place, marks[0], marks[-1])
    kink = [0.0] if marks[0] < 0 < marks[-1] else []  # the mode itself on the real line; harmless elsewhere
    graded = turns[:, None] + np.array([-1, 1]) * 2.0 ** -np.arange(14)[:, None, None] if fine else turns
    graded = graded[(graded > marks[0]) & (graded < marks[-1])]
    breaks = np.unique(np.concatenate([marks, turns, kink, graded.ravel()]))
    breaks = breaks[np.concatenate([[True], np.diff(breaks) > 1e-9 * (breaks[-1] - breaks[0])])]
    panels = PANELS
    if fine:  # panels graded towards a turn, where T has an end, resolve what decays fast from there
        panels = fine * (FINE_PANELS // len(heights) if not len(turns) else GRADED_PANELS)
    pieces = [np.linspace(a, b, panels + 1) for a, b in pairwise(breaks)]
    edges = np.unique(np.concatenate(pieces))
    w, weights = gauss_panels(edges)
    densities = [np.exp(height(w)) for height in heights]
    ends = np.concatenate([[edges[0]], turns, [edges[-1]]])
    return Nodes(edges, w, weights, place(w), densities, ends, place(ends))


def _turning_points(place: Callable[[Array], Array], left: float, right: float) -> Array:
    """Interior extrema of T between two places, those that are rounding left out."""
    grid = np.linspace(left, right, 801)
    slopes = np.sign(np.diff(place(grid)))
    found = []
    for k in np.flatnonzero(slopes[:-1] * slopes[1:] < 0):
        sign = slopes[k]
        best = minimize_scalar(lambda w, s=sign: float(-s * place(w)),
                               bounds=(grid[k], grid[k + 2]), method="bounded",
                               options={"xatol": 1e-12})  # fmt: skip
        found.append(float(best.x))
    scale = float(np.median(np.abs(place(grid))))
    return _without_ripples(np.unique([left, *found, right]), place, NOISE * scale)[1:-1]


def _without_ripples(points: Array, place: Callable[[Array], Array], noise: float) -> Array:
    """Take out turns, the flattest stretch first, until T changes by more than the noise between any two."""
    heights = place(points)
    while len(points) > 2:
        changes = np.nan_to_num(np.abs(np.diff(heights)), nan=np.inf)
        k = int(np.argmin(changes))
        if not changes[k] <= noise:
            break
        last = len(points) - 1
        drop = [1] if k == 0 else [last - 1] if k == last - 1 else [k, k + 1]
        points, heights = np.delete(points, drop), np.delete(heights, drop)
    return points


@dataclass(frozen=True)
class OneObservation:
    """The law of T(x) for one observation, by integrating over the x with T(x) on one side of a cutoff.

    ``weight`` is what is integrated besides the density: 1, or T - mean for the second condition of a point
    null.
    """

    nodes: Nodes
    height: Callable[[Array], Array]
    place: Callable[[Array], Array]
    row: int
    weight: Callable[[Array], Array]

    def tail(self, c: float, above: bool) -> float:
        """Integral over T > c (or T <= c), summed without taking differences."""
        total = 0.0
        for a, b in zip(self.nodes.turns, self.nodes.turns[1:], strict=False):
            w = self._crossing(c, a, b)
            rising = self.place(b) > self.place(a)
            start, stop = (w, b) if rising == above else (a, w)
            total += self._integral(start, stop)
        return total

    def _crossing(self, c: float, a: float, b: float) -> float:
        """Place in a monotone stretch where T passes c; the end nearer to it where it does not."""
        at_a, at_b = float(self.place(a)), float(self.place(b))
        if (at_a - c) * (at_b - c) > 0:
            return a if abs(at_a - c) < abs(at_b - c) else b
        root, _ = brentq(
            lambda w: float(self.place(w)) - c,
            a,
            b,
            xtol=1e-40,
            rtol=8.9e-16,
            maxiter=80,
            full_output=True,
            disp=False,
        )
        return float(root)

    def _integral(self, start: float, stop: float) -> float:
        if stop <= start:
            return 0.0
        edges = self.nodes.edges
        first, last = int(np.searchsorted(edges, start)), int(np.searchsorted(edges, stop, side="right")) - 1
        if first > last:
            return self._partial(start, stop)
        n = self.nodes
        whole = n.weights[first:last] * n.densities[self.row][first:last] * self.weight(n.places[first:last])
        return self._partial(start, edges[first]) + float(np.sum(whole)) + self._partial(edges[last], stop)

    def _partial(self, start: float, stop: float) -> float:
        if stop <= start:
            return 0.0
        w, weights = gauss_panels(np.array([start, stop]))
        return float(np.sum(weights * np.exp(self.height(w)) * self.weight(self.place(w))))
