"""Inversion of a transform in balls, with the cut tail bounded: densities, tails and shortfalls of a sum of
n.

V has density exp(eta v) g(v) / N(eta)**n, and g(v) is the integral of N(z)**n exp(-z v) / (2 pi i) up a
vertical line. Integrated against exp(s w), s = eta - z, over w < v (Re s > 0) or w > v (Re s < 0), this gives
kernels in s:

    density 1;  P(V <= v) and -P(V > v): 1/s;  E[(m - V); V <= v] and E[(V - m); V > v]: (m - v)/s + 1/s**2.

The path starts at a real point c (the saddle point, so that nothing cancels), goes up to c + iH, and from
there each term of N(z)**n is taken along the horizontal ray on which it falls exponentially. Cauchy's theorem
allows it: the terms are analytic above the real axis and vanish at infinity between the vertical line and the
ray. By symmetry the lower half is the complex conjugate.

Source: J. Gil-Pelaez, *Biometrika* 38 (1951) 481-482 (the inversion); H. E. Daniels, *Ann. Math. Statist.* 25
(1954) 631-650 (the saddle point); the bounds are proved in :mod:`verify.arithmetic.transforms`.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from typing import Any

from flint import acb, arb

from verify.arithmetic.ball import Balls
from verify.arithmetic.quadrature import path_integral
from verify.arithmetic.transforms import NEAR, Transform
from verify.errors import UndecidedError

Ball = Any
HEIGHT = 2
FARTHEST = 1 << 24

DENSITY, TAIL, SHORTFALL = "density", "tail", "shortfall"


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
        The point, best exact.
    c : ball
        Where the path crosses the real axis: left of eta for the lower side, right of it for the upper side.
    kind : str
        ``DENSITY``, ``TAIL`` or ``SHORTFALL``.
    mean : ball
        E[V], for a shortfall.
    """

    transform: Transform
    n: int
    eta: Ball
    v: Ball
    c: Ball
    kind: str
    mean: Ball = 0
    kept: dict[int, list[Ball]] = field(default_factory=dict, compare=False, repr=False)

    def value(self, A: Balls) -> Ball:
        """Return the number, for a tail the probability of the side on which c lies.

        Raises
        ------
        UndecidedError
            At a point where a term neither falls to the left nor to the right.
        """
        height = A.real(HEIGHT)
        size = self._values(A, acb(self.c), None).abs_upper()
        tolerance = A.prec - _exponent(size)
        rates = self._rates(A)
        total = self._rays(A, rates, height, tolerance) if rates else self._line(A, height, tolerance)
        value = total.imag / (A.pi * self._whole(A, acb(self.eta), False).real)
        return -value if self.kind == TAIL and self.c > self.eta else value

    def _rates(self, A: Balls) -> list[Ball]:
        """Rates of the terms, computed once for each precision."""
        if A.prec not in self.kept:
            self.kept[A.prec] = self.transform.rates(A, self.n)
        return self.kept[A.prec]

    def _whole(self, A: Balls, z: Any, analytic: bool) -> Any:
        return self.transform.value(A, z, analytic) ** self.n

    def _kernel(self, s: Any) -> Any:
        if self.kind == DENSITY:
            return acb(1)
        return 1 / s if self.kind == TAIL else (self.mean - self.v) / s + 1 / s**2

    def _kernel_bound(self, height: Ball) -> Ball:
        if self.kind == DENSITY:
            return arb(1)
        return 1 / height if self.kind == TAIL else abs(self.mean - self.v) / height + 1 / height**2

    def _values(self, A: Balls, z: Any, which: list[int] | None) -> Any:
        """The integrand at a point: N(z)**n, or some of its terms, times exp(s v) and the kernel."""
        s = self.eta - z
        value = self._whole(A, z, False) if which is None else self.transform.terms(A, z, self.n, which)
        return value * (s * self.v).exp() * self._kernel(s)

    def _sizes(self, A: Balls, z: Any, which: list[int] | None) -> Any:
        """A ball around 0 that contains the integrand on a neighbourhood, where it is analytic; else not
        finite.
        """
        kernel = abs(self._kernel(self.eta - z)).upper() * (self.eta * self.v).exp()
        if which is None:
            size = self.transform.size(A, z) ** self.n * (-self.v * z.real).exp()
        else:
            rates = self._rates(A)
            size = sum(
                (
                    self.transform.term_size(A, z, self.n, j) * ((rates[j] - self.v) * z.real).exp()
                    for j in which
                ),
                arb(0),
            )
        reach = arb(0, (size * kernel).abs_upper())
        return acb(reach, reach)

    def _along(self, A: Balls, start: Any, end: Any, which: list[int] | None, tolerance: int) -> Any:
        def function(z: Any, analytic: bool) -> Any:
            wide = not abs(z - z.mid()) <= A.real(NEAR)
            return self._sizes(A, z, which) if analytic or wide else self._values(A, z, which)

        return path_integral(function, start, end, tolerance=tolerance)

    def _rays(self, A: Balls, rates: list[Ball], height: Ball, tolerance: int) -> Any:
        corner = acb(self.c, height)
        total = self._along(A, acb(self.c), corner, None, tolerance)
        left = [j for j, rate in enumerate(rates) if rate > self.v]
        right = [j for j, rate in enumerate(rates) if rate < self.v]
        if len(left) + len(right) < len(rates):
            raise UndecidedError("the point lies on (or too near) a corner of the density of the sum")
        for which, side in ((left, -1), (right, 1)):
            if which:
                total += self._ray(A, corner, which, side, rates, tolerance)
        return total

    def _ray(
        self, A: Balls, corner: Any, which: list[int], side: int, rates: list[Ball], tolerance: int
    ) -> Any:
        height, distance = corner.imag, 8
        goal = A.power(A.real(2), -tolerance)
        while True:
            x = A.real(side * distance) + self.c
            cut = sum((self._beyond(A, j, x, rates[j], height) for j in which), arb(0))
            if cut < goal:
                break
            distance *= 2
            if distance > FARTHEST:
                raise UndecidedError("the point lies too near a corner of the density of the sum")

        value = self._along(A, corner, acb(x.mid(), height), which, tolerance)
        slack = arb(0, (cut + self._corner_slack(x)).abs_upper())
        return value + acb(slack, slack)

    def _corner_slack(self, x: Ball) -> Ball:
        return arb(0) if x.is_exact() else arb("inf")

    def _beyond(self, A: Balls, j: int, x: Ball, rate: Ball, height: Ball) -> Ball:
        """Bound of the integral of a term beyond x: bound * exp((rate - v) x + eta v) / abs(rate - v) *
        kernel.
        """
        if not abs(x) >= 1:
            return arb("inf")
        gap = rate - self.v
        bound = self.transform.bound(A, self.n, j, x, height) * (gap * x + self.eta * self.v).exp()
        return bound / abs(gap) * self._kernel_bound(height)

    def _line(self, A: Balls, height: Ball, tolerance: int) -> Any:
        goal, top = A.power(A.real(2), -tolerance), 2
        shift = getattr(self.transform, "shift", 0)
        front = ((A.real(shift) * self.n - self.v) * self.c + self.eta * self.v).exp()
        while True:
            bound, rate = self.transform.vertical_bound(A, self.n, A.real(top))
            cut = bound / rate * front * self._kernel_bound(A.real(top))
            if cut < goal:
                break
            top += max(1, top // 4)
            if top > FARTHEST:
                raise UndecidedError("the transform falls too slowly to be cut")
        value = self._along(A, acb(self.c), acb(self.c, A.real(top)), None, tolerance)
        slack = arb(0, cut.abs_upper())
        return value + acb(slack, slack)


def _exponent(size: Ball) -> int:
    mantissa, exponent = size.mid().man_exp()
    return int(exponent) + int(mantissa).bit_length()


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
