"""Brute force for a continuous formula: the measures of the side conditions, by integrating the formula."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np

from verify.comparison.formula import ends_of_support, log_density, rejects_large_v
from verify.comparison.inversion import EULER_DIGITS, SumOfObservations, Transform
from verify.comparison.quadrature import Nodes, OneObservation, change_of_variable, nodes, run_of_interest
from verify.comparison.question import Answer, Question
from verify.comparison.tail_search import Line, Measure, one_end, two_ends, two_far_ends, window
from verify.comparison.walker import values
from verify.errors import NotAttempted

Array = Any
Numbers = dict[str, float]
EULER_NOTE = "the characteristic function falls slowly: Euler summation"
UNRESOLVED = f"{EULER_NOTE}, which cannot resolve the tails at these cutoffs"
SINGULAR = "the formula is infinite where a double cannot tell x from an end of the support"
LEAST_CLAIM = 3
"""A method that cannot claim so many digits is not worth running."""


def continuous_opinion(ask: Question) -> Answer:
    """Cutoffs and expectations from the formula; see ``brute_force_opinion``."""
    grid, heights, place = _panels(ask, int(ask.n > 1))
    rows = _rows(ask, grid, heights, place)
    slow = any(isinstance(row, SumOfObservations) and row.slow for row in rows)
    if slow and _euler_claim(ask) < LEAST_CLAIM:
        raise NotAttempted(f"{EULER_NOTE} cannot resolve tails of {min(ask.levels):g}")
    large = False
    if ask.form == "one-sided":
        x = place.x(np.quantile(grid.w, np.linspace(0.2, 0.8, 25)))
        large = rejects_large_v(ask, lambda x, t: log_density(ask, x, t), x)
    lower, upper = _ends_of_t(ask, grid)
    mean, spread = _centre(ask, grid)
    line = Line(ask.n * lower, ask.n * upper, mean, spread, 1e-10 if slow else 8.9e-16)
    if ask.form == "one-sided":
        numbers = {"c": one_end(rows[0], line, ask.levels[0], large)}
    else:
        c1, c2 = _two_ends(ask, rows, line, slow)
        numbers = {"c1": c1, "c2": c2}
    claimed = _claim(ask, rows, numbers, slow) if ask.n > 1 else None
    return Answer(numbers | _evaluate(ask, rows, large), EULER_NOTE if slow else "", claimed)


def _two_ends(ask: Question, rows: Sequence[Measure], line: Line, slow: bool) -> tuple[float, float]:
    """Both cutoffs; each from the law beside it where the Euler summation cannot see the other's tail there.

    Raises
    ------
    NotAttempted
        When the Euler summation cannot tell either way.
    """
    targets = (ask.levels[0], 0.0 if ask.point else ask.levels[1])
    try:
        return two_ends(rows[0], rows[-1], line, targets, ask.inside)
    except ArithmeticError:
        if not slow:
            raise
    if ask.inside or ask.point:
        raise NotAttempted(UNRESOLVED)
    rising = rows[1].tail(line.mean, True) > rows[0].tail(line.mean, True)
    first, second = (rows[0], rows[1]) if rising else (rows[1], rows[0])
    try:
        return two_far_ends(first, second, line, targets if rising else targets[::-1])
    except ArithmeticError:  # not the doubles but the summation is at its end
        raise NotAttempted(UNRESOLVED) from None


def _euler_claim(ask: Question) -> int:
    """Digits of the smallest level that the Euler summation's decimals amount to."""
    return EULER_DIGITS - int(np.ceil(-np.log10(min(ask.levels))))


def _claim(ask: Question, rows: Sequence[Measure], numbers: Numbers, slow: bool) -> int:
    """Digits of the tails that stay when the panels are doubled, and that the inversion claims.

    Raises
    ------
    NotAttempted
        When hardly any digit stays.
    """
    finer = _rows(ask, *_panels(ask, 2))
    moved = max(
        abs(row.tail(c, above) - other.tail(c, above)) / level
        for row, other, level in zip(list[Measure](rows), list[Measure](finer), ask.levels, strict=False)
        for c in numbers.values()
        for above in (False, True)
    )
    stay = 16 if moved == 0 else int(np.floor(-np.log10(moved)))
    claim = min(stay - 1, _euler_claim(ask) if slow else 14)
    if claim < LEAST_CLAIM:
        raise NotAttempted(f"the quadrature resolves the transform to {max(stay, 0)} digits of the level only")
    return claim


class _Place:
    """T as a function of w."""

    def __init__(self, ask: Question, change: Any) -> None:
        self.x = change.x
        self._name, self._statistic = ask.density.x.name, ask.statistic

    def __call__(self, w: Array) -> Array:
        return values(self._statistic, {self._name: self.x(w)}) + 0.0 * w


def _panels(ask: Question, fine: int) -> tuple[Nodes, list[Callable[[Array], Array]], _Place]:
    depth = 55.0 - float(np.log(min(ask.levels)))
    lower, upper = ends_of_support(ask, ask.limits[0])
    change = change_of_variable(lower, upper)
    if not (np.isfinite(lower) or np.isfinite(upper)):
        change = _recentred(ask, change, lower, upper)

    def height(t: float) -> Callable[[Array], Array]:
        return lambda w: log_density(ask, change.x(w), t) + change.log_jacobian(w)

    heights = [height(t) for t in ask.limits]
    place = _Place(ask, change)
    grid = nodes(heights, place, depth, fine)
    for row, t in zip(grid.densities, ask.limits, strict=True):
        if np.any(np.isposinf(row)):
            raise NotAttempted(f"{SINGULAR} at {ask.density.t.name} = {t:g}")
        total = float(np.sum(grid.weights * row))
        if not abs(total - 1) < 1e-6:
            raise ArithmeticError(f"the formula integrates to {total:.9g} at {ask.density.t.name} = {t:g}")
    return grid, heights, place


def _recentred(ask: Question, change: Any, lower: float, upper: float) -> Any:
    """On the real line: put w = 0 at the mode under the first limit, one unit of sinh at its width."""
    t = ask.limits[0]
    left, mode, right = run_of_interest(lambda w: log_density(ask, change.x(w), t), 1.0)
    width = float(change.x(right) - change.x(left)) / 2
    return change_of_variable(lower, upper, float(change.x(mode)), width)


def _rows(
    ask: Question, grid: Nodes, heights: list[Callable[[Array], Array]], place: _Place
) -> list[OneObservation] | list[SumOfObservations]:
    """The measures of the side conditions: one for each limit, and the centred mean for a point null."""
    if ask.n == 1:
        ones = [OneObservation(grid, height, place, k, np.ones_like) for k, height in enumerate(heights)]
        if ask.point:
            mean = float(np.sum(grid.weights * grid.densities[0] * grid.places))
            ones.append(OneObservation(grid, heights[0], place, 0, lambda v: v - mean))
        return ones
    lower, upper = _ends_of_t(ask, grid)
    sums = []
    for row in grid.densities:
        masses = (grid.weights * row).ravel()
        keep = masses > 0
        transform = Transform(grid.places.ravel()[keep], masses[keep], ask.n, min(ask.levels))
        sums.append(SumOfObservations(transform, False, lower, upper))
    if ask.point:
        sums.append(SumOfObservations(sums[0].transform, True, lower, upper))
    return sums


def _ends_of_t(ask: Question, grid: Nodes) -> tuple[float, float]:
    """Bounds of T over the support: at its ends, at the turning points of T, and at the nodes."""
    name = ask.density.x.name
    at_ends = [float(values(ask.statistic, {name: np.float64(x)})) for x in ends_of_support(ask, ask.limits[0])]
    seen = np.concatenate([np.array(at_ends), grid.places.ravel(), grid.turning_places])
    seen = seen[~np.isnan(seen)]
    return float(np.min(seen)), float(np.max(seen))


def _centre(ask: Question, grid: Nodes) -> tuple[float, float]:
    """Mean and standard deviation of V under the first limit."""
    row = grid.weights * grid.densities[0]
    mean = float(np.sum(row * grid.places))
    return ask.n * mean, float(np.sqrt(ask.n * np.sum(row * (grid.places - mean) ** 2)))


def _evaluate(ask: Question, rows: list[OneObservation] | list[SumOfObservations], large: bool) -> Numbers:
    """Expectations of the proven test."""
    test = ask.test
    if "c" in test:
        return {"expectation1": rows[0].tail(test["c"], large)}
    ends = test["c1"], test["c2"]
    return {f"expectation{k}": window(row, *ends, ask.inside) for k, row in enumerate([*rows], 1)}
