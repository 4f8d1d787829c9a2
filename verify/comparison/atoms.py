"""The masses of a lattice formula in doubles: which atoms matter, T's grid, the n-fold convolution."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
from scipy.signal import fftconvolve

from verify.errors import NotAttempted

MOST_ATOMS = 1 << 21
"""More atoms than this are not enumerated."""
DIRECT_WORK = 4 * 10**7
"""Multiplications up to which a convolution is done directly, which keeps the tails' relative accuracy."""
_DENSE = 4096

Array = Any


@dataclass(frozen=True)
class Masses:
    """Masses on the grid ``start + step * (0, 1, 2, ...)``.

    ``exact_tails`` is False once a Fourier transform has blurred everything below 1e-16 of the peak.
    """

    start: float
    step: float
    masses: Array
    exact_tails: bool = True

    @property
    def places(self) -> Array:
        """The grid points."""
        return self.start + self.step * np.arange(len(self.masses))


def atoms_that_matter(log_mass: Callable[[Array], Array], lower: float, upper: float, depth: float) -> Array:
    """The run of integers around the mode where log_mass is within ``depth`` of its peak.

    Assumes that the masses fall monotonically outside the dense look and away from the mode; the caller
    checks that they add up to one.

    Raises
    ------
    NotAttempted
        When there are too many.
    """
    probes = _probes(lower, upper)
    mode = _climb(log_mass, probes)
    peak = float(log_mass(np.array([mode]))[0])
    low = _edge(log_mass, mode, -1, lower, peak - depth)
    high = _edge(log_mass, mode, +1, upper, peak - depth)
    if high - low + 1 > MOST_ATOMS:
        raise NotAttempted(f"{high - low + 1:.3g} atoms, more than {MOST_ATOMS}")
    return np.arange(low, high + 1)


def _probes(lower: float, upper: float) -> Array:
    """A dense look at the near end of the support, then places at doubling distances."""
    far = np.concatenate([np.arange(_DENSE), np.round(2.0 ** np.arange(12, 53, 0.25))])
    if np.isfinite(lower):
        found = lower + far
    elif np.isfinite(upper):
        found = upper - far
    else:
        found = np.concatenate([-far[::-1], far[1:]])
    return np.unique(np.clip(found, lower, upper))


def _climb(log_mass: Callable[[Array], Array], probes: Array) -> float:
    """Integer with the largest mass, by closing in on the best probe."""
    while True:
        heights = np.nan_to_num(log_mass(probes), nan=-np.inf)
        best = int(np.argmax(heights))
        if not np.isfinite(heights[best]):
            raise ArithmeticError("the formula gives no positive mass at any place looked at")
        left, right = probes[max(best - 1, 0)], probes[min(best + 1, len(probes) - 1)]
        if right - left <= 2:
            return float(probes[best])
        probes = np.unique(np.round(np.linspace(left, right, 129)))


def _edge(log_mass: Callable[[Array], Array], mode: float, way: int, end: float, floor: float) -> float:
    """Last integer from the mode outward whose mass is above the floor: doubling, then bisection."""
    span = 1.0
    while (end - (mode + way * span)) * way > 0 and float(log_mass(np.array([mode + way * span]))[0]) > floor:
        span *= 2
        if span > 2.0**53:
            raise NotAttempted("the tail of the masses falls too slowly to be enumerated")
    if (end - (mode + way * span)) * way <= 0 and float(log_mass(np.array([end]))[0]) > floor:
        return float(end)
    inner, outer = mode, mode + way * span
    while abs(outer - inner) > 1:
        middle = float(np.floor((inner + outer) / 2))
        beyond = (end - middle) * way < 0 or not float(log_mass(np.array([middle]))[0]) > floor
        inner, outer = (inner, middle) if beyond else (middle, outer)
    return inner


def on_grid(places: Array, masses: Array) -> Masses | None:
    """Masses at the values of T put on a common grid; None when the values have none."""
    order = np.argsort(places, kind="stable")
    places, masses = places[order], masses[order]
    gaps = np.diff(places)
    gaps = gaps[gaps > 1e-9 * max(np.max(np.abs(places)), 1e-300)] if len(places) > 1 else gaps
    step = float(np.min(gaps)) if len(gaps) else 1.0
    index = (places - places[0]) / step
    whole = np.round(index)
    if np.max(np.abs(index - whole)) > 1e-6 or whole[-1] >= MOST_ATOMS:
        return None
    return Masses(float(places[0]), step, np.bincount(whole.astype(int), weights=masses))


def convolution_power(one: Masses, n: int, floor: float) -> Masses:
    """Masses of the sum of n, by squaring; masses below ``floor`` times the peak are cut at both ends."""
    result: Masses | None = None
    square = one
    while True:
        if n & 1:
            result = square if result is None else _convolve(result, square, floor)
        n >>= 1
        if n == 0:
            return result if result is not None else one
        square = _convolve(square, square, floor)


def _convolve(a: Masses, b: Masses, floor: float) -> Masses:
    direct = len(a.masses) * len(b.masses) <= DIRECT_WORK
    if len(a.masses) + len(b.masses) > MOST_ATOMS:
        raise NotAttempted(f"a convolution of more than {MOST_ATOMS} atoms")
    masses = np.convolve(a.masses, b.masses) if direct else np.maximum(fftconvolve(a.masses, b.masses), 0.0)
    keep = np.flatnonzero(masses > floor * np.max(masses))
    first, last = int(keep[0]), int(keep[-1])
    tails = direct and a.exact_tails and b.exact_tails
    return Masses(a.start + b.start + first * a.step, a.step, masses[first : last + 1], tails)
