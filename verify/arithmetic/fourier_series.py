"""A law on [0, P] from its transform at equally spaced points: density, distribution function and its integral.

Let U >= 0 have transform phi(z) = E exp(z U), and let z_k = -s + 2 pi i k / P. By Poisson's summation formula

    sum over m of exp(-s (u + m P)) F(u + m P) = (1 / P) sum over k of phi(z_k) (-z_k)**-j exp(-2 pi i k u / P),

for F the density (j = 0), G(u) = P(U <= u) (j = 1) or K(u) = E (u - U)+ (j = 2). Beyond the support G is the mass M and
K is M u - (mean), so the other terms on the left are geometric series, known in closed form:

    G: M / (exp(s P) - 1);  K: (M u - mean) / (exp(s P) - 1) + M P exp(s P) / (exp(s P) - 1)**2.

The density may be singular at multiples of P / cells. Then phi(z_k) is a sum of slowly falling terms that turn with
k modulo cells; the series is split into the classes modulo a multiple of that, in each of which the terms turn at one
rate, and each class is accelerated.

Source: J. Abate and W. Whitt, *Queueing Systems* 10 (1992) 5-88 (the Fourier-series method, from memory); the classes
are a short derivation.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

from flint import acb, arb

from verify.arithmetic.acceleration import Method, plain

Ball = Any
DENSITY, CUMULATIVE, TWICE = range(3)

MOST_CLASSES = 64
"""Most multiples of the number of cells that are tried, for the terms of a class to turn fast."""

FAST = 0.25
"""Least distance of the turn of a class from a whole one; a half is best."""

TERMS_A_BIT = 0.45
"""Terms of a class for each bit aimed at."""


@dataclass(frozen=True, eq=False)
class FourierSeries:
    """The series of one law.

    Attributes
    ----------
    transform : callable
        k to phi(z_k), k = 0, 1, ...
    period : ball
        P.
    tilt : ball
        s, not 0.
    cells : int
        The density is singular at multiples of P / cells only.
    bits : int
        Error aimed at, 2**-bits: not a bound.
    accelerate : callable
        How a class is summed.
    mass, mean : ball
        Total mass, and E U (on an unnormalised law, the integral of u).
    turns : int
        Most multiples of the cells that are tried for the number of classes.
    """

    transform: Callable[[int], Any]
    period: Ball
    tilt: Ball
    cells: int
    bits: int
    accelerate: Method
    mass: Ball
    mean: Ball
    turns: int = MOST_CLASSES
    kept: list[Any] = field(default_factory=list, repr=False)

    def value(self, u: Ball, order: int) -> Ball:
        """Return the density, distribution function or its integral at a point of (0, P)."""
        total = (self.tilt * u).exp() * self._sum(u / self.period, order) / self.period
        if order == DENSITY:
            return total
        rest = 1 / ((self.tilt * self.period).exp() - 1)
        if order == CUMULATIVE:
            return total - self.mass * rest
        return total - (self.mass * u - self.mean) * rest - self.mass * self.period * rest * (1 + rest)

    def _sum(self, x: Ball, order: int) -> Ball:
        classes = self.cells * turning(float(x) * self.cells, self.turns)
        tolerance = arb(2) ** -(self.bits + 16)
        total = self._term(0, x, order).real
        count = terms_for(self.bits)
        for first in range(1, classes + 1):
            terms = []
            for k in range(first, first + classes * count, classes):
                terms.append(self._term(k, x, order))
                if abs(terms[-1]) < tolerance * self.period:
                    break
            whole = self.accelerate(terms) if len(terms) == count else plain(terms)
            total += 2 * whole.real
        return total

    def _term(self, k: int, x: Ball, order: int) -> Any:
        while len(self.kept) <= k:
            self.kept.append(self.transform(len(self.kept)))
        turn = acb(-2 * k * x).exp_pi_i()
        return self.kept[k] * turn / acb(self.tilt, -2 * arb.pi() * k / self.period) ** order


def terms_for(bits: int) -> int:
    """Return how many terms of a class are summed."""
    return max(12, math.ceil(bits * TERMS_A_BIT))


def turning(cells: float, most: int) -> int:
    """Return how many classes a cell there should be, for the terms of each to turn by nearly half a circle.

    Examples
    --------
    >>> turning(0.4, 8), turning(0.1, 8), turning(2.01, 8)
    (1, 3, 8)
    """

    def lack(r: int) -> float:
        return abs((r * cells) % 1 - 0.5)

    return next((r for r in range(1, most + 1) if lack(r) <= FAST), min(range(1, most + 1), key=lack))
