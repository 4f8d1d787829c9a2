"""Brute force for a continuous formula: a coarse table first, then Newton steps with integrals of the formula."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, Protocol

import numpy as np

from verify.comparison.brute_force import ends_of_support, log_density, rejects_large_v, table_of
from verify.comparison.inversion import EULER_DIGITS, SumOfObservations, Transform
from verify.comparison.quadrature import Nodes, OneObservation, change_of_variable, nodes, run_of_interest
from verify.comparison.question import Answer, Question
from verify.comparison.table_search import inside_ends, one_sided_end, outside_ends
from verify.comparison.walker import values

Array = Any
Numbers = dict[str, float]
MOST_STEPS = 40


class Measure(Protocol):
    """A row of the side conditions: its tails and its density."""

    def tail(self, c: float, above: bool) -> float:
        """Mass of V > c or of V <= c."""

    def density(self, c: float) -> float:
        """Density at c."""


def continuous_opinion(ask: Question) -> Answer:
    """Cutoffs and expectations from the formula; see ``brute_force_opinion``."""
    grid, heights, place = _panels(ask)
    rows = _rows(ask, grid, heights, place)
    large = False
    if ask.form == "one-sided":
        x = place.x(np.quantile(grid.w, np.linspace(0.2, 0.8, 25)))  # type: ignore[attr-defined]
        large = rejects_large_v(ask, lambda x, t: log_density(ask, x, t), x)
    start = _start(ask, grid, large)
    numbers = _polish(ask, rows, start, large) | _evaluate(ask, rows, large)
    if any(isinstance(row, SumOfObservations) and row.slow for row in rows):
        lost = int(np.ceil(-np.log10(min(ask.levels))))
        return Answer(numbers, "the characteristic function falls slowly: Euler summation", max(EULER_DIGITS - lost, 0))
    return Answer(numbers)


class _Place:
    """T as a function of w."""

    def __init__(self, ask: Question, change: Any) -> None:
        self.x = change.x
        self._name, self._statistic = ask.density.x.name, ask.statistic

    def __call__(self, w: Array) -> Array:
        return values(self._statistic, {self._name: self.x(w)}) + 0.0 * w


def _panels(ask: Question) -> tuple[Nodes, list[Callable[[Array], Array]], _Place]:
    depth = 55.0 - float(np.log(min(ask.levels)))
    lower, upper = ends_of_support(ask, ask.limits[0])
    change = change_of_variable(lower, upper)
    if not (np.isfinite(lower) or np.isfinite(upper)):
        change = _recentred(ask, change, lower, upper)

    def height(t: float) -> Callable[[Array], Array]:
        return lambda w: log_density(ask, change.x(w), t) + change.log_jacobian(w)

    heights = [height(t) for t in ask.limits]
    place = _Place(ask, change)
    grid = nodes(heights, place, depth)
    for row, t in zip(grid.densities, ask.limits, strict=True):
        total = float(np.sum(grid.weights * row))
        if not abs(total - 1) < 1e-6:
            raise ArithmeticError(f"the formula integrates to {total:.9g} at {ask.density.t.name} = {t:g}")
    return grid, heights, place


def _recentred(ask: Question, change: Any, lower: float, upper: float) -> Any:
    """On the real line: put w = 0 at the mode under the first limit, and one unit of sinh at the peak's width."""
    t = ask.limits[0]
    left, mode, right = run_of_interest(lambda w: log_density(ask, change.x(w), t) + change.log_jacobian(w), 0.5)
    width = float(change.x(right) - change.x(left)) / 2
    return change_of_variable(lower, upper, float(change.x(mode)), width)


def _rows(
    ask: Question, grid: Nodes, heights: list[Callable[[Array], Array]], place: _Place
) -> list[Measure]:
    """The measures of the side conditions: one for each limit, and the centred mean for a point null."""
    rows: list[Measure]
    if ask.n == 1:
        rows = [OneObservation(grid, height, place, k, np.ones_like) for k, height in enumerate(heights)]
        if ask.point:
            mean = float(np.sum(grid.weights * grid.densities[0] * grid.places))
            rows.append(OneObservation(grid, heights[0], place, 0, lambda v: v - mean))
        return rows
    flat = [(grid.weights * row).ravel() for row in grid.densities]
    keep = [row > 0 for row in flat]
    transforms = [Transform(grid.places.ravel()[k], row[k], ask.n, min(ask.levels)) for row, k in zip(flat, keep, strict=True)]
    lower, upper = _ends_of_t(ask, grid)
    sums = [SumOfObservations(transform, False, lower, upper) for transform in transforms]
    rows = list(sums)
    if ask.point:
        rows.append(SumOfObservations(transforms[0], True, lower, upper))
    return rows


def _ends_of_t(ask: Question, grid: Nodes) -> tuple[float, float]:
    """Bounds of T over the support: finite when T at the ends and turns of the panels stays bounded far out."""
    lower, upper = ends_of_support(ask, ask.limits[0])
    name = ask.density.x.name
    at_ends = [float(values(ask.statistic, {name: np.float64(end)})) for end in (lower, upper)]
    seen = np.concatenate([np.array(at_ends), grid.places.ravel()])
    seen = seen[~np.isnan(seen)]
    return float(np.min(seen)), float(np.max(seen))


# -- solving -------------------------------------------------------------------------------------------------------


def _start(ask: Question, grid: Nodes, large: bool) -> list[float]:
    """Cutoffs on a coarse table: the nodes as atoms, or a normal law's atoms for the sum."""
    places, weights = _coarse(ask, grid)
    if ask.form == "one-sided":
        return [one_sided_end(places, weights[0], ask.levels[0], large)[0]]
    i, j, _, _ = (inside_ends if ask.inside else outside_ends)(table_of(ask, places, weights))
    return [float(places[i]), float(places[j])]


def _coarse(ask: Question, grid: Nodes) -> tuple[Array, list[Array]]:
    places = grid.places.ravel()
    rows = [(grid.weights * row).ravel() for row in grid.densities]
    order = np.argsort(places, kind="stable")
    if ask.n == 1:
        return places[order], [row[order] for row in rows]
    means = [float(np.sum(row * places)) for row in rows]
    spreads = [float(np.sqrt(np.sum(row * (places - mean) ** 2))) for row, mean in zip(rows, means, strict=True)]
    return _moment_matched(ask, means, spreads, float(np.min(places)), float(np.max(places)))


def _moment_matched(
    ask: Question, means: list[float], spreads: list[float], low: float, high: float
) -> tuple[Array, list[Array]]:
    """A table for the sum with the right mean and variance: gamma-shaped from a finite end, normal otherwise."""
    from scipy import stats

    n, root = ask.n, np.sqrt(ask.n)
    ends = [(n * m - 40 * root * s, n * m + 40 * root * s) for m, s in zip(means, spreads, strict=True)]
    left, right = max(min(a for a, _ in ends), n * low), min(max(b for _, b in ends), n * high)
    places = np.linspace(left, right, 20001)
    skewed = min((m - low) / s for m, s in zip(means, spreads, strict=True)) < min(
        (high - m) / s for m, s in zip(means, spreads, strict=True)
    )
    rows = []
    for m, s in zip(means, spreads, strict=True):
        away = n * (m - low) if skewed else n * (high - m)
        shape = away**2 / (n * s * s)
        v = places - n * low if skewed else n * high - places
        row = stats.gamma.pdf(v, shape, scale=away / shape) if shape < 1e6 else stats.norm.pdf(places, n * m, root * s)
        row = np.nan_to_num(row, posinf=0.0) * (places[1] - places[0])
        rows.append(row / np.sum(row))
    return places, rows


def _polish(ask: Question, rows: list[Measure], start: list[float], large: bool) -> Numbers:
    if ask.form == "one-sided":
        return {"c": _newton_one(rows[0], start[0], ask.levels[0], large)}
    targets = np.array([ask.levels[0], 0.0 if ask.point else ask.levels[1]])
    two = (rows[0], rows[-1])
    c, before = np.array(start), np.inf
    for _ in range(MOST_STEPS):
        gap = np.array([_window(row, c, ask.inside) for row in two]) - targets
        sides = np.array([[row.density(x) for x in c] for row in two]) * ([-1, 1] if ask.inside else [1, -1])
        step = np.linalg.solve(sides, gap)
        c, moved = _damped(c, step, rows[0])
        if not (moved > 4e-16 and (moved < before / 2 or moved > 1e-6)):  # converged, or only noise is left
            break
        before = moved
    if not np.all(np.isfinite(c)):
        raise ArithmeticError("Newton's steps on the two side conditions left the doubles")
    return {"c1": float(c[0]), "c2": float(c[1])}


def _damped(c: Array, step: Array, row: Measure) -> tuple[Array, float]:
    """Take the Newton step, halved until both ends carry some density and keep their order."""
    for _ in range(60):
        after = c - step
        if after[0] < after[1] and all(row.density(float(x)) > 0 for x in after):
            break
        step = step / 2
    return after, float(np.max(np.abs(step) / np.maximum(np.abs(after), 1e-300)))


def _window(row: Measure, c: Array, inside: bool) -> float:
    if not inside:
        return row.tail(float(c[0]), False) + row.tail(float(c[1]), True)
    return row.tail(float(c[1]), False) - row.tail(float(c[0]), False)


def _newton_one(row: Measure, c: float, alpha: float, large: bool) -> float:
    before = np.inf
    for _ in range(MOST_STEPS):
        step = (row.tail(c, large) - alpha) / row.density(c) * (-1 if large else 1)
        while not row.density(c - step) > 0 and abs(step) > 1e-300:
            step /= 2
        c -= step
        moved = abs(step) / max(abs(c), 1e-300)
        if not (moved > 4e-16 and (moved < before / 2 or moved > 1e-6)):
            break
        before = moved
    if not np.isfinite(c):
        raise ArithmeticError("Newton's steps on the side condition left the doubles")
    return c


def _evaluate(ask: Question, rows: list[Measure], large: bool) -> Numbers:
    """Expectations of the proven test."""
    test = ask.test
    if "c" in test:
        return {"expectation1": rows[0].tail(test["c"], large)}
    ends = np.array([test["c1"], test["c2"]])
    return {f"expectation{k}": _window(row, ends, ask.inside) for k, row in enumerate(rows, 1)}
