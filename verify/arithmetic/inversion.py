"""Inversion of a transform in balls, with the cut tail bounded: densities, tails and shortfalls of a sum of
n.

V has density exp(eta v) g(v) / N(eta)**n, and g(v) is the integral of N(z)**n exp(-z v) / (2 pi i) up a
vertical line. Integrated against exp(s w), s = eta - z, over w < v (Re s > 0) or w > v (Re s < 0), this gives
kernels in s:

    density 1, its derivative s;  P(V <= v) and -P(V > v): 1/s;
    E[(m - V); V <= v] and E[(V - m); V > v]: (m - v)/s + 1/s**2.

The path starts at a real point c (the saddle point, so that nothing cancels), goes up to c + iH, and from
there each term of N(z)**n is taken along the diagonal ray on which it falls exponentially. Cauchy's theorem
allows it: the terms are analytic above the real axis and vanish at infinity between the vertical line and the
ray. By symmetry the lower half is the complex conjugate. The values of N(z)**n along a path
(:mod:`verify.arithmetic.path`) serve every kernel, every parameter value and every v nearby.

Source: J. Gil-Pelaez, *Biometrika* 38 (1951) 481-482 (the inversion); H. E. Daniels, *Ann. Math. Statist.* 25
(1954) 631-650 (the saddle point); the bounds are proved in :mod:`verify.arithmetic.transforms`.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import Any

from flint import acb, arb

from verify.arithmetic.ball import Balls, balls, midpoint
from verify.arithmetic.gauss import BOUND_BITS
from verify.arithmetic.path import Path, path_through
from verify.arithmetic.transforms import Transform

Ball = Any

DENSITY, SLOPE, TAIL, SHORTFALL = "density", "slope", "tail", "shortfall"

GRID = 64
"""Bits of a path are rounded up to this, so that a search and its proof share one."""

SPARE = 16
"""A path has at least so many bits more than are asked for, and serves when no more than that are lost on it."""


MOST_PATHS, TRIED = 32, 4
"""Paths that are kept, and how many of the nearest are tried at a point."""


@dataclass(frozen=True)
class Inversion:
    """One inversion: which transform, how many observations, and where.

    Attributes
    ----------
    transform : Transform
        N(z) of one observation.
    n : int
        Number of observations.
    eta : ball
        The natural parameter.
    v : ball
        The point.
    kind : str
        ``DENSITY``, ``SLOPE``, ``TAIL`` or ``SHORTFALL``.
    mean : ball
        E[V], for a shortfall.
    paths : list of Path
        Paths known so far; new ones are added.
    """

    transform: Transform
    n: int
    eta: Ball
    v: Ball
    kind: str
    mean: Ball = 0
    paths: list[Path] = field(default_factory=list, compare=False, repr=False)

    def known(self, A: Balls, *, upper: bool) -> Ball | None:
        """Return the number from a path that is known, when one is good enough; a tail of the side asked for."""
        nearest = sorted(self.paths, key=lambda path: float(abs(path.v - self.v).mid()))
        for path in nearest[:TRIED]:
            if path.n == self.n and path.prec >= A.prec and path.near(self.v):
                value = self._side(self._along(path, midpoint(self.v)), path, upper=upper)
                if value.rel_accuracy_bits() >= A.prec - SPARE:
                    return value if self.v.is_exact() else self._side(self._along(path, self.v), path, upper=upper)
        return None

    def value(self, A: Balls, c: Ball) -> Ball:
        """Return the number along a path that crosses the real axis at c.

        For a tail it is the probability of the side on which c lies: lower for c left of eta.

        Raises
        ------
        UndecidedError
            At a point where a term neither falls to the left nor to the right.
        """
        bits = -(-(A.prec + SPARE) // GRID) * GRID
        path = path_through(self.transform, self.n, midpoint(self.v), c, self.eta, bits)
        if len(self.paths) >= MOST_PATHS:
            self.paths.pop(0)
        self.paths.append(path)
        return self._side(self._along(path, self.v), path, upper=path.c > self.eta)

    def _side(self, value: Ball, path: Path, *, upper: bool) -> Ball:
        if self.kind != TAIL:
            return value
        right = path.c > self.eta
        value = -value if right else value
        return value if right == upper else 1 - value

    def _along(self, path: Path, v: Ball) -> Ball:
        """The integral along a path, in all of its bits."""
        with balls(path.prec) as A:
            values = path.values(v)
            if self.kind != DENSITY:
                kernels = (self._kernel(self.eta - z) for z in path.places)
                values = [value * kernel for value, kernel in zip(values, kernels, strict=True)]
            total = sum(values, acb(0)).imag + arb(0, self._slack(path, v))
            return total * ((self.eta - path.c) * v).exp() / (A.pi * self._whole(A).real)

    def _slack(self, path: Path, v: Ball) -> Ball:
        with balls(BOUND_BITS):
            return path.slack(v, self._kernel_bound, self._kernel_beyond)

    def _whole(self, A: Balls) -> Any:
        return self.transform.value(A, acb(self.eta), False) ** self.n

    def _kernel(self, s: Any) -> Any:
        if self.kind == SLOPE:
            return s
        return 1 / s if self.kind == TAIL else (self.mean - self.v + 1 / s) / s

    def _kernel_bound(self, z: Any) -> Ball:
        """Bound of the kernel over a box of z."""
        s = self.eta - z
        if self.kind in (DENSITY, SLOPE):
            return arb(1) if self.kind == DENSITY else s.abs_upper()
        least = s.abs_lower()
        if not least > 0:
            return arb("inf")
        return 1 / least if self.kind == TAIL else (abs(self.mean - self.v) + 1 / least) / least

    def _kernel_beyond(self, end: Any, falls: Ball) -> Ball:
        """A factor for the kernel beyond the end of a leg, all of which lies at least as high.

        The kernel s grows by at most exp(distance / abs(s at the end)), so it at most doubles an integral that falls
        twice as fast as that.
        """
        if self.kind != SLOPE:
            return self._kernel_bound(self.eta + acb(0, end.imag))
        least = abs(self.eta - end).lower()
        return 2 * abs(self.eta - end).upper() if least * falls >= 2 else arb("inf")


def saddle_point(transform: Transform, n: int, v: Ball, start: Fraction, A: Balls) -> Fraction:
    """Return roughly the real z that minimises n log N(z) - z v (any z of the domain would give true
    numbers).
    """
    low, high = (None if end is None else float(A.real(end)) for end in transform.domain())
    centre, at = float(start), float(v)

    def height(z: float) -> float:
        value = transform.value(A, acb(z), False).real
        return n * float(value.log()) - z * at if value > 0 else float("inf")

    def inside(step: float) -> float:
        """Map the line into the domain, so that equal steps stay sensible near an end."""
        if low is not None and high is not None:
            share = (centre - low) / (high - low)
            odds = share / (1 - share) * 2.0**step
            return float(low + (high - low) * odds / (1 + odds))
        if low is not None:
            return float(low + (centre - low) * 2.0**step)
        return float(high - (high - centre) * 2.0**-step if high is not None else centre + step)

    left, right = -8.0, 8.0
    while height(inside(2 * left)) < height(inside(left)) and left > -4096:
        left *= 2
    while height(inside(2 * right)) < height(inside(right)) and right < 4096:
        right *= 2
    left, right = 2 * left, 2 * right
    for _ in range(40):
        third = (right - left) / 3
        if height(inside(left + third)) < height(inside(right - third)):
            right -= third
        else:
            left += third
    return Fraction(inside((left + right) / 2)).limit_denominator(1 << 20)
