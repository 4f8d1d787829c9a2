"""Cutoffs of a continuous measure from its two tails alone: quantiles, then one monotone unknown.

A place v is written as v = end + exp(y) next to a finite end of V and as v = centre + width * sinh(y)
otherwise, so that a cutoff of 1e-26 is found to its own relative accuracy.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from typing import Protocol

import numpy as np
from scipy.optimize import brentq


class Measure(Protocol):
    """One row of the side conditions."""

    def tail(self, c: float, above: bool) -> float:
        """Mass of V > c or of V <= c."""


@dataclass(frozen=True)
class Line:
    """The range of V, with mean and standard deviation under the first limit and the tolerance of roots."""

    lower: float
    upper: float
    mean: float
    spread: float
    tolerance: float = 8.9e-16

    def place(self, y: float) -> float:
        """Place with coordinate y, increasing in y."""
        if np.isfinite(self.lower):
            return float(self.lower + np.exp(y))
        if np.isfinite(self.upper):
            return float(self.upper - np.exp(-y))
        return float(self.mean + self.spread * np.sinh(y))

    def centre(self) -> float:
        """Coordinate of the mean."""
        if np.isfinite(self.lower):
            return float(np.log(self.mean - self.lower))
        if np.isfinite(self.upper):
            return float(-np.log(self.upper - self.mean))
        return 0.0

    def unit(self) -> float:
        """Change of y that moves the mean by about a standard deviation."""
        if np.isfinite(self.lower):
            return min(1.0, self.spread / (self.mean - self.lower))
        return min(1.0, self.spread / (self.upper - self.mean)) if np.isfinite(self.upper) else 0.5


def quantile(row: Measure, line: Line, tail: float, above: bool) -> float:
    """Place beyond which a tail of the given size lies, to its own relative accuracy."""

    @cache
    def excess(y: float) -> float:
        mass = row.tail(line.place(y), above)
        return float(np.log(max(mass, 1e-320)) - np.log(tail)) * (-1 if above else 1)  # rises with y

    a, b = _bracket(excess, line.centre(), line.unit())
    return line.place(float(brentq(excess, a, b, xtol=1e-300, rtol=line.tolerance)))


def _bracket(f: Callable[[float], float], start: float, step: float) -> tuple[float, float]:
    """Two places around the root of a rising function."""
    way = -1 if f(start) > 0 else 1
    inner = start
    for _ in range(60):
        outer = inner + way * step
        if f(outer) * way >= 0:
            return (inner, outer) if way > 0 else (outer, inner)
        inner, step = outer, step * 2
    raise ArithmeticError("no place was found where the tail has the size wanted")


def one_end(row: Measure, line: Line, alpha: float, large: bool) -> float:
    """Cutoff of a one-sided test."""
    return quantile(row, line, alpha, large)


def two_ends(
    row: Measure, other: Measure, line: Line, targets: tuple[float, float], inside: bool
) -> tuple[float, float]:
    """Cutoffs of a two-sided test: the tail s left of c1 under the first row is the unknown.

    The unknown is put on the scale u with s = rest / (1 + exp(-u)): both s and rest - s keep their accuracy.
    """
    rest = 1 - targets[0] if inside else targets[0]

    @cache
    def ends(u: float) -> tuple[float, float]:
        s, t = rest / (1 + np.exp(-u)), rest / (1 + np.exp(u))
        return quantile(row, line, s, False), quantile(row, line, t, True)

    def excess(u: float) -> float:
        return window(other, *ends(u), inside) - targets[1]

    sign = 1.0 if excess(1.0) > excess(-1.0) else -1.0
    a, b = _bracket(lambda u: sign * excess(u), 0.0, 1.0)
    return ends(float(brentq(excess, a, b, xtol=line.tolerance, rtol=line.tolerance)))


def two_far_ends(first: Measure, second: Measure, line: Line, targets: tuple[float, float]) -> tuple[float, float]:
    """Cutoffs of a test that rejects outside its window between two limits that lie far apart.

    Each cutoff is a quantile of the law beside it, so that the tails of the other law beyond it, which may be too
    small for the measure to resolve, are only ever added. ``first`` is the law with the smaller mean.
    """

    @cache
    def ends(u: float) -> tuple[float, float]:
        c1 = quantile(first, line, targets[0] / (1 + np.exp(-u)), False)
        return c1, quantile(second, line, targets[1] - max(second.tail(c1, False), 0.0), True)

    def excess(u: float) -> float:
        return float(max(first.tail(ends(u)[1], True), 0.0) - targets[0] / (1 + np.exp(u)))

    a, b = _bracket(excess, 0.0, 1.0)
    return ends(float(brentq(excess, a, b, xtol=line.tolerance, rtol=line.tolerance)))


def window(row: Measure, c1: float, c2: float, inside: bool) -> float:
    """Mass of a measure where the test rejects."""
    if not inside:
        return row.tail(c1, False) + row.tail(c2, True)
    return row.tail(c2, False) - row.tail(c1, False)
