"""The sum of n continuous observations, by inverting the transform of T that quadrature gives.

M(s) = E exp(s T) is a sum over the Gauss nodes. Two inversions:

- *tilted*: on the vertical line through a real point theta near the saddlepoint of the cutoff, P(V > c) is
the integral of
  exp(n log M(theta + iu) - (theta + iu) c) / (theta + iu) over u, by the trapezoidal rule, which converges
  exponentially (J. Abate and W. Whitt, "The Fourier-series method for inverting transforms of probability
  distributions", Queueing Systems 10 (1992) 5-88, section 5). The tail in question keeps its relative
  accuracy.
- *Euler*: when |M|**n falls too slowly for that and T is bounded on one side, their Euler summation of the
alternating series;
  about ``EULER_DIGITS`` decimals, absolute.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from math import comb
from typing import Any

import numpy as np
from scipy.optimize import brentq

from verify.errors import NotAttempted

Array = Any
_BLOCK = 64
MOST_FREQUENCIES = 64 * _BLOCK
EULER_DIGITS = 9
"""Decimals that the Euler summation claims: its discretisation error is exp(-A) = 1e-10."""
_A, _SIDE, _MIXED = 24.0, 8, 24
_PLAIN = _SIDE**2 - 1 - _MIXED
_NEGLIGIBLE = 1e-18


@dataclass(frozen=True)
class Line:
    """Points of a vertical line, with E exp(s T') and E[T' exp(s T')] there, T' = T - centre."""

    s: Array
    one: Array
    first: Array
    step: float
    centre: float
    dies_out: bool


@dataclass(frozen=True, eq=False)
class Transform:
    """Places of T and their masses (quadrature weights times density) under one limit.

    ``alpha`` sets how small a tail is to be resolved. The lines are kept: a Newton step moves the cutoff,
    not the line.
    """

    places: Array
    masses: Array
    n: int
    alpha: float
    kept: dict[Any, Any] = field(default_factory=dict, repr=False)

    @property
    def mean(self) -> float:
        """E T."""
        return float(np.sum(self.masses * self.places) / np.sum(self.masses))

    @property
    def spread(self) -> float:
        """Standard deviation of T."""
        return float(np.sqrt(np.sum(self.masses * (self.places - self.mean) ** 2)))

    def line(self, above: bool) -> Line:
        """The line for one tail."""
        if above not in self.kept:
            self.kept[above] = self._lay(above)
        found: Line = self.kept[above]
        return found

    def _lay(self, above: bool) -> Line:
        n, root = self.n, float(np.sqrt(self.n))
        theta = self._tilt(above)
        width = max((45.0 - np.log(self.alpha)) / abs(theta), 50 * root * self._tilted_spread(theta))
        step = float(2 * np.pi / width)
        centre = float(np.sum(self._tilted(theta) * self.places))
        t = self.places - centre
        jumps = theta + 1j * step * _BLOCK * np.arange(MOST_FREQUENCIES // _BLOCK)
        weighted = np.exp(np.multiply.outer(t, jumps) + np.log(self.masses)[:, None])
        sizes = np.abs(np.sum(weighted, axis=0))
        small = np.flatnonzero((sizes / sizes[0]) ** n < _NEGLIGIBLE)
        if not len(small):
            return Line(jumps[:1], jumps[:1], jumps[:1], step, centre, False)
        weighted = weighted[:, : int(small[0])]
        waves = np.exp(np.multiply.outer(1j * step * np.arange(_BLOCK), t))
        one = (waves @ weighted).T.ravel()
        first = (waves @ (t[:, None] * weighted)).T.ravel()
        return Line(theta + 1j * step * np.arange(len(one)), one, first, step, centre, True)

    def _tilt(self, above: bool) -> float:
        """Where Chernoff's bound exp(n (K(s) - s K'(s))) of the tail is alpha, K = log E exp(s T)."""
        side = 1.0 if above else -1.0

        def excess(size: float) -> float:
            s = side * size
            exponents = s * (self.places - self.mean) + np.log(self.masses)
            top = float(np.max(exponents))
            cumulant = top + float(np.log(np.sum(np.exp(exponents - top))))
            slope = float(np.sum(self._tilted(s) * (self.places - self.mean)))
            return self.n * (cumulant - s * slope) - float(np.log(self.alpha))

        far = 1 / (self.spread * float(np.sqrt(self.n)))
        for _ in range(200):
            if excess(far) < 0:
                return side * float(brentq(excess, 0.0, far, rtol=1e-4))
            far *= 2
        raise ArithmeticError(f"no tilt reaches a tail of {self.alpha:g}")

    def _tilted(self, s: float) -> Array:
        exponents = s * self.places + np.log(self.masses)
        weights = np.exp(exponents - np.max(exponents))
        return weights / np.sum(weights)

    def _tilted_spread(self, s: float) -> float:
        tilted = self._tilted(s)
        return float(np.sqrt(np.sum(tilted * (self.places - np.sum(tilted * self.places)) ** 2)))

    def euler(self, d: float, end: float, sign: float) -> tuple[Array, Array, Array]:
        """Points A/2d + i pi k/d, and the two expectations there of exp(sign s (T - end/n))."""
        key = (d, end, sign)
        if key not in self.kept:
            s = (_A + 2j * np.pi * np.arange(_SIDE**2)) / (2 * d)
            t = self.places - end / self.n
            waves = np.exp(np.multiply.outer(sign * (s[:_SIDE] - s[0]), t))
            weighted = np.exp(np.multiply.outer(t, sign * s[::_SIDE])) * self.masses[:, None]
            self.kept[key] = (s, (waves @ weighted).T.ravel(), (waves @ (t[:, None] * weighted)).T.ravel())
        found: tuple[Array, Array, Array] = self.kept[key]
        return found


@dataclass(frozen=True)
class SumOfObservations:
    """Tails of V, or of its centred mean where ``centred``, under one limit.

    ``lower`` and ``upper`` are the ends of T, infinite where there is none.
    """

    transform: Transform
    centred: bool
    lower: float
    upper: float

    def tail(self, c: float, above: bool) -> float:
        """P(V > c) or P(V <= c); E[V - E V; ...] where centred."""
        line = self.transform.line(above)
        if self.slow:
            value = self._euler(c)
            return value if not above else (0.0 if self.centred else 1.0) - value
        terms = self._powers(line, c) / line.s
        total = line.step / np.pi * float(np.sum(terms.real) - 0.5 * terms[0].real)
        return total if above else -total

    @property
    def slow(self) -> bool:
        """Whether the tilted inversion is out of reach."""
        return not (self.transform.line(True).dies_out and self.transform.line(False).dies_out)

    def _powers(self, line: Line, c: float) -> Array:
        """E[... exp(s (V - c))] along a line."""
        n = self.transform.n
        shift = np.exp(line.s * (n * line.centre - c))
        return self._power(line.one, line.first, n * line.centre) * shift

    def _power(self, one: Array, first: Array, about: float) -> Array:
        """E exp(s V') or E[(V - E V) exp(s V')] from those of one T', V' = V - about."""
        n = self.transform.n
        if not self.centred:
            return one**n
        return one ** (n - 1) * (n * first + (about - n * self.transform.mean) * one)

    def _euler(self, c: float) -> float:
        """Abate and Whitt's Euler summation of the lower tail, counted from the finite end of V."""
        n = self.transform.n
        flip = not np.isfinite(self.lower)
        end = n * (self.upper if flip else self.lower)
        if not np.isfinite(end):
            raise NotAttempted("the characteristic function falls too slowly and T is unbounded on both sides")
        d = end - c if flip else c - end
        if d <= 0:
            return 0.0
        s, one, first = self.transform.euler(d, end, 1.0 if flip else -1.0)
        powers = self._power(one, first, end)
        terms = (-1.0) ** np.arange(len(s)) * (powers / s).real
        terms[0] /= 2
        partial = np.cumsum(terms)[_PLAIN:]
        mixed = sum(comb(_MIXED, j) * partial[j] for j in range(_MIXED + 1)) / 2.0**_MIXED
        value = float(np.exp(_A / 2) / d * mixed)
        if not flip:
            return value
        return (0.0 if self.centred else 1.0) - value
