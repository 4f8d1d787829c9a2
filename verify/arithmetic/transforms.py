"""Transforms of one observation whose size is known in a half-plane, so that their inversion can be cut with
proof.

With N(z) = integral of h exp(z T) (the exponential of the log normaliser at the natural parameter z), a class here
either falls exponentially on vertical lines or writes N(z)**n in the upper half-plane as a sum of terms, the term with
rate r growing like exp(r Re z). On a ray up and to the left (or right) a term with r > v (or r < v) makes
N(z)**n exp(-z v) fall exponentially. ``bound`` proves how small it is beyond a point: |term at z| <=
bound(...) * exp(r Re z) for all z further out on the ray.

Constant factors of N are left out everywhere: they cancel, because laws only need N(z) / N(eta).
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Sequence
from dataclasses import dataclass
from math import comb
from typing import Any

from flint import acb, arb

from verify.arithmetic.ball import Balls
from verify.arithmetic.bessel import k0_both

ComplexBall = Any


class Transform(ABC):
    """A transform N(z): either :class:`InTerms` or :class:`FallingOnLines`."""

    def domain(self) -> tuple[Any, Any]:
        """Real interval on which N is finite, None for an infinite end."""
        return None, None

    @abstractmethod
    def value(self, A: Balls, z: ComplexBall, analytic: bool) -> ComplexBall:
        """N(z) off the cuts of the formula."""

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


class InTerms(Transform):
    """A transform whose power N(z)**n splits into terms in the upper half-plane."""

    @abstractmethod
    def rates(self, A: Balls, n: int) -> list[Any]:
        """Rate of each term of N(z)**n."""

    @abstractmethod
    def term_size(self, A: Balls, z: ComplexBall, n: int, which: int) -> Any:
        """Bound of |term| exp(-rate Re z) over a ball in the upper half-plane (not finite: none is known)."""

    @abstractmethod
    def terms(self, A: Balls, z: ComplexBall, n: int, which: Sequence[int]) -> ComplexBall:
        """Sum of some of the terms at z."""

    def terms_size(self, A: Balls, z: ComplexBall, n: int, which: Sequence[int], v: Any) -> Any:
        """Bound of some of the terms times exp(-v Re z) over a box in the upper half-plane."""
        rates = self.rates(A, n)
        return sum((self.term_size(A, z, n, j) * ((rates[j] - v) * z.real).exp() for j in which), arb(0))

    @abstractmethod
    def bound(self, A: Balls, n: int, which: int, x: Any, height: Any) -> Any:
        """Bound of |term| exp(-rate Re z) for all Im z >= height and Re z beyond x (on the side of x's sign)."""


class FallingOnLines(Transform):
    """A transform that falls exponentially on vertical lines, but for a factor exp(shift z).

    Attributes
    ----------
    shift : Exact
        The factor exp(shift z) has this constant.
    """

    shift: Any

    @abstractmethod
    def vertical_bound(self, A: Balls, n: int, height: Any) -> tuple[Any, Any]:
        """Return (B, k) with |N(z)|**n <= B exp(-k (Im z - height)) |exp(n shift z)| for Im z >= height."""


@dataclass(frozen=True)
class Bessel(InTerms):
    """N(z) = I0(z): the cosine of a direction.

    I0(z) = (K0(-z) - K0(z)) / (pi i) in the upper half-plane (DLMF 10.34.2). For abs(ph z) <= pi, DLMF
    10.40.10-12 with one term gives |K_nu(z)| <= sqrt(pi / (2 |z|)) exp(-Re z) (1 + q exp(q)) with q = |4
    nu**2 - 1| pi / (8 |z|): the factor 2 |a_1(nu)| chi(1) is |4 nu**2 - 1| pi / 8, and so is |nu**2 - 1/4|
    chi(1). The same holds for K_nu(-z).
    """

    def value(self, A: Balls, z: ComplexBall, analytic: bool) -> ComplexBall:
        """I0, an entire function."""
        return z.bessel_i(acb(0))

    def rates(self, A: Balls, n: int) -> list[Any]:
        """The rate n - 2j of the term with j factors K0(z)."""
        return [A.real(n - 2 * j) for j in range(n + 1)]

    def terms(self, A: Balls, z: ComplexBall, n: int, which: Sequence[int]) -> ComplexBall:
        """Sum over j of C(n, j) K0(-z)**(n-j) (-K0(z))**j / (pi i)**n."""
        if not z.imag > 0:
            return acb(arb("nan"), arb("nan"))
        up, down = k0_both(z, A.prec)
        first, last = min(which), max(which)
        value = acb(0)
        for j in range(last, first - 1, -1):
            factor = comb(n, j) if j in which else 0
            value = value * -down + factor * up ** (last - j)
        return value * up ** (n - last) * (-down) ** first / acb(0, arb.pi()) ** n

    def terms_size(self, A: Balls, z: ComplexBall, n: int, which: Sequence[int], v: Any) -> Any:
        """The bounds of the terms have one factor in common; the exponentials are largest at one end of the box."""
        least = z.abs_lower()
        if not (z.imag > 0 and least >= 1):
            return arb("nan")
        x = z.real.upper() if all(n - 2 * j > v for j in which) else z.real.lower()
        if not (all(n - 2 * j > v for j in which) or all(n - 2 * j < v for j in which)):
            return arb("nan")
        total = sum((comb(n, j) * ((n - 2 * j - v) * x).exp() for j in which), arb(0))
        return total * self._size(A, n, 0, least)

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
class GammaRatio(InTerms):
    """N(z) = Gamma(z + a) / Gamma(z + b), b > a: the logarithm of a beta variable.

    On the left: N(z) = Gamma(w) sin pi(z + b) / (Gamma(w + d) sin pi(z + a)), w = 1 - z - b, d = b - a (DLMF
    5.5.3). The quotient of sines is at most coth(pi H), and |Gamma(w) / Gamma(w + d)| = |B(w, d)| / Gamma(d)
    <= Gamma(u) / Gamma(u + d)
    for u = Re w > 0 (DLMF 5.12.1), which falls as u grows.
    """

    a: Any
    b: Any

    def domain(self) -> tuple[Any, Any]:
        """Re z > -a."""
        return -self.a, None

    def value(self, A: Balls, z: ComplexBall, analytic: bool) -> ComplexBall:
        """Quotient of gamma functions."""
        return (z + A.real(self.a)).gamma() * (z + A.real(self.b)).rgamma()

    def rates(self, A: Balls, n: int) -> list[Any]:
        """One term, of rate 0."""
        return [A.real(0)]

    def terms(self, A: Balls, z: ComplexBall, n: int, which: Sequence[int]) -> ComplexBall:
        """N(z)**n, through the reflected form, which is stable on the left."""
        return len(which) * self._reflected(A, z) ** n

    def _reflected(self, A: Balls, z: ComplexBall) -> ComplexBall:
        a, b = A.real(self.a), A.real(self.b)
        return (1 - z - b).gamma() * (1 - z - a).rgamma() * (z + b).sin_pi() / (z + a).sin_pi()

    def term_size(self, A: Balls, z: ComplexBall, n: int, which: int) -> Any:
        """A bound of N(z)**n above the real axis.

        With w(s) = z + a + s and Stirling's R, log N(z) is minus the integral of log w(s) - 1 / (2 w(s)) over
        0 < s < d, plus R(z + a) - R(z + b), and |R(w)| <= sec(ph(w) / 2)**2 / (12 |w|) = 1 / (6 (|w| + Re w))
        (DLMF 5.11.1 and 5.11 (ii)).
        """
        if not z.imag > 0:
            return arb("nan")
        a, b = A.real(self.a), A.real(self.b)
        least = acb((z.real + a).union(z.real + b), z.imag).abs_lower()
        clear = [(z + shift).abs_lower() + (z.real + shift).lower() for shift in (a, b)]
        if not (least > 0 and all(gap > 0 for gap in clear)):
            return self.bound(A, n, which, z.real.upper(), z.imag.lower())
        exponent = (b - a) * (1 / (2 * least) - least.log()) + sum((1 / (6 * gap) for gap in clear), arb(0))
        return (n * exponent).exp()

    def bound(self, A: Balls, n: int, which: int, x: Any, height: Any) -> Any:
        """(coth(pi H) Gamma(u) / Gamma(u + d))**n; no bound on the right or before u > 0."""
        a, b = A.real(self.a), A.real(self.b)
        u = 1 - x - b
        if not (x < 0 and u > 0):
            return arb("inf")
        return ((A.pi * height).coth() * u.gamma() / (u + b - a).gamma()) ** n


@dataclass(frozen=True)
class Secant(FallingOnLines):
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
        return front * (-A.real(self.r) * _log_cosine(A, z * A.real(self.omega) + A.real(self.phase), analytic)).exp()

    def size(self, A: Balls, z: ComplexBall) -> Any:
        """Bound of |N| over a box above the real axis or in the strip: |cos(x + i y)|**2 = cos(x)**2 + sinh(y)**2."""
        inside = z.real > A.real(self.low) and z.real < A.real(self.high)
        if not (inside or z.imag > 0):
            return arb("nan")
        x, y = z.real * A.real(self.omega) + A.real(self.phase), z.imag * A.real(self.omega)
        square = x.cos().abs_lower() ** 2 + y.sinh().abs_lower() ** 2
        front = (z.real * A.real(self.shift)).exp().upper()
        return front * square ** (-A.real(self.r) / 2) if square > 0 else arb("nan")

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
