"""Inversion of transforms: against closed forms, against itself along other paths, against mpmath."""

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from math import comb, factorial
from typing import Any

import mpmath
import pytest
from flint import acb

from verify.arithmetic.ball import balls
from verify.arithmetic.inversion import DENSITY, SHORTFALL, SLOPE, TAIL, Inversion
from verify.arithmetic.transforms import Bessel, GammaRatio, InTerms, Secant
from verify.laws.gamma import Gamma


@dataclass(frozen=True)
class Interval(InTerms):
    """N(z) = (exp(b z) - exp(a z)) / z: a constant weight on (a, b), such as the truncated exponential law."""

    a: Any
    b: Any

    def value(self, A: Any, z: Any, analytic: bool) -> Any:
        """(b - a) exp(m z) sinh(w) / w with m the middle and w = z (b - a) / 2, which is entire."""
        a, b = A.real(self.a), A.real(self.b)
        return (b - a) * (z * (a + b) / 2).exp() * (acb(0, 1) * z * (b - a) / 2).sinc()

    def rates(self, A: Any, n: int) -> list[Any]:
        """(n - j) b + j a."""
        return [(n - j) * A.real(self.b) + j * A.real(self.a) for j in range(n + 1)]

    def terms(self, A: Any, z: Any, n: int, which: Sequence[int]) -> Any:
        """C(n, j) (-1)**j exp(rate z) / z**n."""
        rates = self.rates(A, n)
        return sum(((-1) ** j * comb(n, j) * (z * rates[j]).exp() for j in which), acb(0)) / z**n

    def term_size(self, A: Any, z: Any, n: int, which: int) -> Any:
        """C(n, j) / |z|**n."""
        return comb(n, which) / z.abs_lower() ** n

    def bound(self, A: Any, n: int, which: int, x: Any, height: Any) -> Any:
        """C(n, j) / abs(x)**n."""
        return comb(n, which) / abs(x) ** n


def invert(A, transform, n, eta, v, c, kind, mean=0):  # type: ignore[no-untyped-def]
    return Inversion(transform, n, A.real(eta), A.real(v), kind, A.real(mean)).value(A, A.real(c))


def test_truncated_exponential_agrees_with_the_inclusion_exclusion_density() -> None:
    """Density exp(-t v) (t / (1 - exp(-t)))**n sum (-1)**k C(n, k) (v - k)_+**(n-1) / (n-1)!: P. Hall's sum of
    uniforms, tilted.
    """
    n, at, v = 5, Fraction(2), Fraction(5, 2)
    with balls(128) as A:
        spline = sum(Fraction((-1) ** k * comb(n, k)) * (v - k) ** (n - 1) for k in range(3)) / factorial(n - 1)
        front = (A.real(at) / (1 - A.exp(-A.real(at)))) ** n * A.exp(-A.real(at * v))
        found = invert(A, Interval(Fraction(0), Fraction(1)), n, -at, v, Fraction(0), DENSITY)
        assert found.overlaps(front * A.real(spline))
        assert found.rel_accuracy_bits() > 100


@pytest.mark.parametrize("v", [Fraction(-7), Fraction(-2), Fraction(-1, 2)])
def test_power_law_observations_give_a_gamma_law(v: Fraction) -> None:
    """With b = a + 1 each -log X is exponential, so the sum is gamma: Gamma(z + 1) = z Gamma(z)."""
    n, at = 4, Fraction(3, 2)
    closed = Gamma(Fraction(n), at)
    with balls(128) as A:
        left, right = Fraction(1, 2), Fraction(3)
        density = invert(A, GammaRatio(Fraction(0), Fraction(1)), n, at, v, Fraction(1), DENSITY)
        lower = invert(A, GammaRatio(Fraction(0), Fraction(1)), n, at, v, left, TAIL)
        upper = invert(A, GammaRatio(Fraction(0), Fraction(1)), n, at, v, right, TAIL)
        short = invert(A, GammaRatio(Fraction(0), Fraction(1)), n, at, v, left, SHORTFALL, -Fraction(n) / at)
        y = A.real(-v)
        assert density.overlaps(closed.density(A, y))
        assert lower.overlaps(closed.sf(A, y))
        assert upper.overlaps(closed.cdf(A, y))
        assert short.overlaps(closed.shortfall(A, y))
        assert min(ball.rel_accuracy_bits() for ball in (density, lower, upper)) > 70


@pytest.mark.parametrize(
    "transform",
    [
        GammaRatio(Fraction(0), Fraction(5, 2)),
        Secant(1, Fraction(1), Fraction(0), Fraction(0), Fraction(-3, 2), Fraction(3, 2)),
    ],
)
def test_the_answer_does_not_depend_on_the_path(transform) -> None:  # type: ignore[no-untyped-def]
    """A wrong bound shows itself here: paths far from the saddle point must give the same number."""
    v, eta = (Fraction(-3), Fraction(3)) if isinstance(transform, GammaRatio) else (Fraction(1), Fraction(1, 2))
    crossings = (
        (Fraction(1, 2), Fraction(9, 4), Fraction(4)) if eta == 3 else (Fraction(-1), Fraction(1, 8), Fraction(1))
    )
    with balls(100) as A:
        densities = [invert(A, transform, 3, eta, v, c, DENSITY) for c in crossings]
        tails = [invert(A, transform, 3, eta, v, c, TAIL) for c in crossings]
        assert all(first.overlaps(second) for first in densities for second in densities)
        assert tails[0].overlaps(tails[1])
        assert (tails[0] + tails[2] - 1).contains(0)


def test_secant_of_two_observations_has_its_known_density() -> None:
    """At t = 0 and r = 2 the density is v / (2 sinh(pi v / 2)): Morris 1982, section 4."""
    with balls(120) as A:
        found = invert(
            A,
            Secant(1, Fraction(1), Fraction(0), Fraction(0), Fraction(-3, 2), Fraction(3, 2)),
            2,
            Fraction(0),
            Fraction(3),
            Fraction(1),
            DENSITY,
        )
        wanted = A.real(3) / (2 * (A.pi * A.real(Fraction(3, 2))).sinh())
        assert found.overlaps(wanted)
        assert found.rel_accuracy_bits() > 90


def test_von_mises_sum_agrees_with_a_real_integral_in_mpmath() -> None:
    """The second route is the plain inversion integral up to 400, whose tail is below 1e-9."""
    mpmath.mp.dps = 15

    def part(u: float) -> float:
        return (
            mpmath.re((mpmath.besseli(0, 2 + 1j * u) / mpmath.besseli(0, 2)) ** 8 * mpmath.exp(-4.5j * u)) / mpmath.pi
        )

    wanted = mpmath.quad(part, mpmath.linspace(0, 60, 31))
    with balls(70) as A:
        found = invert(A, Bessel(), 8, Fraction(2), Fraction(9, 2), Fraction(5, 4), DENSITY)
    assert abs(float(found.mid()) - wanted) < 1e-6
    assert found.rel_accuracy_bits() > 40


def test_a_known_path_gives_what_a_new_one_gives() -> None:
    """One path serves every kernel, other parameter values and other points; far from it, it is refused."""
    transform = Bessel()
    with balls(120) as A:
        first = Inversion(transform, 5, A.real(2), A.real(Fraction(13, 4)), DENSITY)
        first.value(A, A.real(Fraction(11, 4)))
        questions = ((2, "7/2", TAIL), (1, "27/8", TAIL), (1, "10/3", SLOPE), (2, "13/4", SHORTFALL))
        for eta, place, kind in questions:
            v = Fraction(place)
            question = Inversion(transform, 5, A.real(eta), A.real(v), kind, A.real(Fraction(7, 2)), first.paths)
            reused = question.known(A, upper=True)
            assert reused is not None
            fresh = Inversion(transform, 5, A.real(eta), A.real(v), kind, A.real(Fraction(7, 2)))
            assert reused.overlaps(fresh.value(A, A.real(Fraction(5, 2))))
        assert len(first.paths) == 1
        beyond = Inversion(transform, 5, A.real(2), A.real(Fraction(1, 2)), TAIL, paths=first.paths)
        assert beyond.known(A, upper=False) is None


def test_slope_is_the_derivative_of_the_density() -> None:
    v, h = Fraction(-3), Fraction(1, 2**30)
    transform = GammaRatio(Fraction(0), Fraction(5, 2))
    with balls(160) as A:
        low, high = (invert(A, transform, 3, 3, v + s * h, Fraction(2), DENSITY) for s in (-1, 1))
        slope = invert(A, transform, 3, 3, v, Fraction(2), SLOPE)
        assert abs((high - low) / (2 * A.real(h)) - slope) < A.real(Fraction(1, 2**55))
        assert slope.rel_accuracy_bits() > 120
