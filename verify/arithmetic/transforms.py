"""Transforms of one observation whose size is known in a half-plane, so that their inversion can be cut with
proof.

With N(z) = integral of h exp(z T) (the exponential of the log normaliser at the natural parameter z), each
class here writes N(z)**n in the upper half-plane as a sum of terms, the term with rate r growing like exp(r
Re z). On a ray Im z = H to the left (or right) a term with r > v (or r < v) makes N(z)**n exp(-z v) fall
exponentially. ``bound`` proves how small it is beyond a point:
|term at z| <= bound(...) * exp(r Re z) for all z further out on the ray.

Constant factors of N are left out everywhere: they cancel, because laws only need N(z) / N(eta).
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from fractions import Fraction
from math import comb
from typing import Any

from flint import acb, arb

from verify.arithmetic.ball import Balls
from verify.arithmetic.bessel import k0_both

ComplexBall = Any
Cache = dict[Any, Any]

REMEMBERED = 50_000
"""Function values kept: integrals along one path at many points v meet the same nodes."""


NEAR = Fraction(1, 1024)
"""Values are carried from a node's midpoint to the node over at most this distance."""


def _remembered(cache: Cache, z: ComplexBall, kind: Any, compute: Callable[[ComplexBall], Any]) -> Any:
    """Return ``compute`` at the midpoint of a ball, which is exact."""
    middle = z.mid()
    (m, e), (k, f) = middle.real.man_exp(), middle.imag.man_exp()
    key = kind, int(m), int(e), int(k), int(f)
    if key not in cache:
        if len(cache) >= REMEMBERED:
            cache.clear()
        cache[key] = compute(middle)
    return cache[key]


def _moved(A: Balls, z: ComplexBall, value: ComplexBall, slope: Any) -> ComplexBall:
    """Carry a value from the midpoint of a ball to the ball; ``slope`` bounds the derivative within NEAR of
    it.
    """
    distance = abs(z - z.mid())
    if not distance <= A.real(NEAR):
        return acb(arb("nan"), arb("nan"))
    reach = arb(0, (distance * slope).abs_upper())
    return value + acb(reach, reach)


class Transform:
    """A transform N(z), and how N(z)**n splits into terms in the upper half-plane."""

    def domain(self) -> tuple[Any, Any]:
        """Real interval on which N is finite, None for an infinite end."""
        return None, None

    def value(self, A: Balls, z: ComplexBall, analytic: bool) -> ComplexBall:
        """N(z) off the cuts of the formula."""
        raise NotImplementedError

    def size(self, A: Balls, z: ComplexBall) -> Any:
        """Bound of |N| over a ball whose real parts lie in the domain: |N(z)| <= N(Re z), which is convex."""
        low, high = z.real.lower(), z.real.upper()
        least, most = self.domain()
        if (least is not None and not low > A.real(least)) or (most is not None and not high < A.real(most)):
            return arb("nan")
        ends = [self.value(A, acb(x), False).real for x in (low, high)]
        if not all(end > 0 for end in ends):
            return arb("nan")
        return ends[0].max(ends[1]).upper()

    def rates(self, A: Balls, n: int) -> list[Any]:
        """Rate of each term of N(z)**n; empty where N falls exponentially on vertical lines."""
        raise NotImplementedError

    def term_size(self, A: Balls, z: ComplexBall, n: int, which: int) -> Any:
        """Bound of |term| exp(-rate Re z) over a ball in the upper half-plane (not finite: none is known)."""
        raise NotImplementedError

    def terms(self, A: Balls, z: ComplexBall, n: int, which: Iterable[int]) -> ComplexBall:
        """Sum of some of the terms at z."""
        raise NotImplementedError

    def bound(self, A: Balls, n: int, which: int, x: Any, height: Any) -> Any:
        """Bound of |term| exp(-rate Re z) for all Im z = height and Re z beyond x (on the side of x's sign)."""
        raise NotImplementedError

    def vertical_bound(self, A: Balls, n: int, height: Any) -> tuple[Any, Any]:
        """Return (B, k) with |N(z)|**n <= B exp(-k (Im z - height)) for Im z >= height, where rates() is
        empty.
        """
        raise NotImplementedError


@dataclass(frozen=True)
class Bessel(Transform):
    """N(z) = I0(z): the cosine of a direction.

    I0(z) = (K0(-z) - K0(z)) / (pi i) in the upper half-plane (DLMF 10.34.2). For abs(ph z) <= pi, DLMF
    10.40.10-12 with one term gives |K_nu(z)| <= sqrt(pi / (2 |z|)) exp(-Re z) (1 + q exp(q)) with q = |4
    nu**2 - 1| pi / (8 |z|): the factor 2 |a_1(nu)| chi(1) is |4 nu**2 - 1| pi / 8, and so is |nu**2 - 1/4|
    chi(1). The same holds for K_nu(-z).
    """

    cache: Cache = field(default_factory=dict, compare=False, repr=False)

    def value(self, A: Balls, z: ComplexBall, analytic: bool) -> ComplexBall:
        """I0, an entire function."""
        return z.bessel_i(acb(0))

    def rates(self, A: Balls, n: int) -> list[Any]:
        """The rate n - 2j of the term with j factors K0(z)."""
        return [A.real(n - 2 * j) for j in range(n + 1)]

    def terms(self, A: Balls, z: ComplexBall, n: int, which: Iterable[int]) -> ComplexBall:
        """Sum over j of C(n, j) K0(-z)**(n-j) (-K0(z))**j / (pi i)**n."""
        if not z.imag > 0:
            return acb(arb("nan"), arb("nan"))
        chosen = tuple(which)
        value, slope = _remembered(
            self.cache, z, (A.prec, n, chosen), lambda middle: self._chosen_terms(A, middle, n, chosen)
        )
        return _moved(A, z, value, slope)

    def _chosen_terms(self, A: Balls, middle: ComplexBall, n: int, chosen: tuple[int, ...]) -> tuple[Any, Any]:
        """The sum at a point, with a bound of its derivative near it: K0' = -K1, and both are bounded there."""
        up, down = _remembered(self.cache, middle, A.prec, lambda z: k0_both(z, A.prec))
        first, last = min(chosen), max(chosen)
        least, near = middle.abs_lower() - A.real(NEAR), A.real(NEAR)
        shrink = (-2 * middle.real).exp()
        value, change = acb(0), arb(0)
        for j in range(last, first - 1, -1):
            factor = comb(n, j) if j in chosen else 0
            value = value * -down + factor * up ** (last - j)
            change = change * shrink + factor
        value = value * up ** (n - last) * (-down) ** first / acb(0, arb.pi()) ** n
        slope = n * self._scale(A, least, 3) / self._scale(A, least, 1) * self._size(A, n, 0, least)
        return value, slope * change * ((n - 2 * first) * middle.real + n * near).exp()

    def term_size(self, A: Balls, z: ComplexBall, n: int, which: int) -> Any:
        """A bound of C(n, j) |K0(-z)|**(n-j) |K0(z)|**j / pi**n without its exponential, where |z| >= 1."""
        least = z.abs_lower()
        return self._size(A, n, which, least) if z.imag > 0 and least >= 1 else arb("nan")

    def bound(self, A: Balls, n: int, which: int, x: Any, height: Any) -> Any:
        """The same with |z| >= |x|."""
        return self._size(A, n, which, abs(x))

    def _size(self, A: Balls, n: int, which: int, least: Any) -> Any:
        return comb(n, which) * (self._scale(A, least, 1) / (A.pi * least.sqrt())) ** n

    @staticmethod
    def _scale(A: Balls, least: Any, k: int) -> Any:
        """sqrt(pi/2) (1 + q exp(q)), q = k pi / (8 |z|): k = 1 for K0, k = 3 for K1."""
        q = k * A.pi / (8 * least)
        return (A.pi / 2).sqrt() * (1 + q * q.exp())


@dataclass(frozen=True)
class GammaRatio(Transform):
    """N(z) = Gamma(z + a) / Gamma(z + b), b > a: the logarithm of a beta variable.

    On the left: N(z) = Gamma(w) sin pi(z + b) / (Gamma(w + d) sin pi(z + a)), w = 1 - z - b, d = b - a (DLMF
    5.5.3). The quotient of sines is at most coth(pi H), and |Gamma(w) / Gamma(w + d)| = |B(w, d)| / Gamma(d)
    <= Gamma(u) / Gamma(u + d)
    for u = Re w > 0 (DLMF 5.12.1), which falls as u grows.
    """

    a: Any
    b: Any
    cache: Cache = field(default_factory=dict, compare=False, repr=False)

    def domain(self) -> tuple[Any, Any]:
        """Re z > -a."""
        return -self.a, None

    def value(self, A: Balls, z: ComplexBall, analytic: bool) -> ComplexBall:
        """Quotient of gamma functions."""
        return (z + A.real(self.a)).gamma() * (z + A.real(self.b)).rgamma()

    def rates(self, A: Balls, n: int) -> list[Any]:
        """One term, of rate 0."""
        return [A.real(0)]

    def terms(self, A: Balls, z: ComplexBall, n: int, which: Iterable[int]) -> ComplexBall:
        """N(z)**n, through the reflected form, which is stable on the left."""
        value, slope = _remembered(
            self.cache, z, A.prec, lambda middle: (self._reflected(A, middle), self._slope(A, middle))
        )
        value = _moved(A, z, value, slope)
        return sum((value**n for _ in which), acb(0))

    def _slope(self, A: Balls, middle: ComplexBall) -> Any:
        """Bound of |N'| near a point: N' = N (psi(z + a) - psi(z + b)), and N itself changes by at most its
        exponential.

        psi changes by at most NEAR * sup |psi'|, and |psi'(w)| <= sum over all k of 1 / |w + k|**2 <= (pi/y)
        coth(pi y), y = Im w.
        """
        y = middle.imag - A.real(NEAR)
        change = 2 * A.real(NEAR) * A.pi / y * (A.pi * y).coth()
        rate = abs((middle + A.real(self.a)).digamma() - (middle + A.real(self.b)).digamma()).upper() + change
        return abs(self._reflected(A, middle)).upper() * rate * (rate * A.real(NEAR)).exp()

    def _reflected(self, A: Balls, z: ComplexBall) -> ComplexBall:
        a, b = A.real(self.a), A.real(self.b)
        return (1 - z - b).gamma() * (1 - z - a).rgamma() * (z + b).sin_pi() / (z + a).sin_pi()

    def term_size(self, A: Balls, z: ComplexBall, n: int, which: int) -> Any:
        """A bound of N(z)**n: shifted to the right by the recurrence, or reflected when far on the left."""
        if not z.imag > 0:
            return arb("nan")
        a, b = A.real(self.a), A.real(self.b)
        k = max(0, 1 - int(float((z.real + a).lower()) // 1))
        if k > 8 + float(b):
            return self.bound(A, n, which, z.real.upper(), z.imag.lower())
        u = (z.real + a).lower() + k
        shifted = u.gamma() / (u + b - a).gamma()
        for i in range(k):
            shifted = shifted * abs((z + b + i) / (z + a + i)).upper()
        return shifted**n

    def bound(self, A: Balls, n: int, which: int, x: Any, height: Any) -> Any:
        """(coth(pi H) Gamma(u) / Gamma(u + d))**n; no bound on the right or before u > 0."""
        a, b = A.real(self.a), A.real(self.b)
        u = 1 - x - b
        if not (x < 0 and u > 0):
            return arb("inf")
        return ((A.pi * height).coth() * u.gamma() / (u + b - a).gamma()) ** n


@dataclass(frozen=True)
class Secant(Transform):
    """N(z) = exp(shift z) / cos(omega z + phase)**r: the generalised hyperbolic secant law.

    |cos(x + iy)| >= sinh(abs(y)) >= exp(abs(y)) * (1 - exp(-2 abs(y))) / 2.

    Source: Morris 1982, section 4.
    """

    r: Any
    omega: Any
    phase: Any
    shift: Any
    low: Any
    high: Any

    def domain(self) -> tuple[Any, Any]:
        """Where the cosine is positive: the ends are given."""
        return self.low, self.high

    def value(self, A: Balls, z: ComplexBall, analytic: bool) -> ComplexBall:
        """A power of the secant; the real part of the cosine is positive in the strip."""
        cosine = (z * A.real(self.omega) + A.real(self.phase)).cos()
        front = (z * A.real(self.shift)).exp()
        if isinstance(self.r, int):
            return front / cosine**self.r
        return (
            front
            * (-A.real(self.r) * _log_cosine(A, z * A.real(self.omega) + A.real(self.phase), analytic)).exp()
        )

    def rates(self, A: Balls, n: int) -> list[Any]:
        """None: N falls exponentially on vertical lines."""
        return []

    def vertical_bound(self, A: Balls, n: int, height: Any) -> tuple[Any, Any]:
        """(exp(-k H) (2 / (1 - exp(-2 omega H)))**(n r), k) with k = n r omega; the factor exp(shift z)
        apart.
        """
        omega, power = abs(A.real(self.omega)), n * A.real(self.r)
        front = (2 / (1 - (-2 * omega * height).exp())) ** power
        return front * (-power * omega * height).exp(), power * omega


def _log_cosine(A: Balls, w: ComplexBall, analytic: bool) -> ComplexBall:
    """A logarithm of cos w that is analytic in the strip abs(Re w) < pi/2, Im w >= 0 and real on the real
    axis.

    cos w = exp(-i w) (1 + exp(2 i w)) / 2, and 1 + exp(2 i w) has no negative value for Im w > 0, nor in the
    strip.
    """
    return acb(0, -1) * w + (1 + (acb(0, 2) * w).exp()).log(analytic=analytic) - A.real(2).log()
