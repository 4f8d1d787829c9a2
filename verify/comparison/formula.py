"""The asked formula in doubles: its logarithm, the ends of its support, and in which direction its test rejects."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from verify.comparison.question import Question
from verify.comparison.walker import log_values, values

Array = Any


def log_density(ask: Question, x: Array, t: float) -> Array:
    """Log f(x; t) of the formula, as an array; of a table's kernel h(x) t**x without its h."""
    if ask.density.table is not None:
        return np.asarray(x, dtype=float) * np.log(t)
    names = {ask.density.x.name: np.asarray(x, dtype=float), ask.density.t.name: t}
    return np.asarray(log_values(ask.density.expr, names), dtype=float) + np.zeros_like(names[ask.density.x.name])


def ends_of_support(ask: Question, t: float) -> tuple[float, float]:
    """Ends of the support as doubles."""
    support = ask.density.parsed_support
    names = {ask.density.t.name: t}
    return float(values(support.lower, names)), float(values(support.upper, names))


def rejects_large_v(ask: Question, log_density: Callable[[Array, float], Array], x: Array) -> bool:
    """Whether a one-sided test rejects large V: whether the likelihood ratio rises with T."""
    t, step = ask.limits[0], 1e-4 * max(abs(ask.limits[0]), 1e-8)
    ratio = log_density(x, t + step) - log_density(x, t - step)
    places = values(ask.statistic, {ask.density.x.name: x}) + 0 * x
    good = np.isfinite(ratio)
    if not np.any(good):
        raise ArithmeticError("the likelihood ratio near the limit is nowhere finite")
    slope = np.polyfit(places[good] - np.mean(places[good]), ratio[good] - np.mean(ratio[good]), 1)[0]
    return bool((slope > 0) == ask.null_below)
