"""Sums of continuous observations by convolution of polynomials: against closed forms, inversion and mpmath."""

from fractions import Fraction
from math import comb, factorial

import mpmath
import pytest
import sympy as sp
from flint import arb, arb_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.arithmetic.ball import balls
from verify.arithmetic.chebyshev import approximate, bounds_on_ellipses, degree_for
from verify.arithmetic.polynomial_sum import CUMULATIVE, DENSITY, PolynomialSum, reflected
from verify.derivation.continuous_route import continuous_family
from verify.derivation.derive import derive
from verify.derivation.factorisation import Factorisation
from verify.errors import UndecidedError
from verify.laws.base import Law
from verify.laws.continuous_sum import split
from verify.laws.convolution import SumByConvolution
from verify.laws.replaced import _require_falling
from verify.problem.density import Density

METHODS = ("density", "cdf", "sf", "shortfall")
TRUNCATED_NORMAL = "sqrt(2/pi)*exp(-(x-t)**2/2)/(erf((1-t)/sqrt(2))-erf(-t/sqrt(2)))"


def laws_of(formula: str, support: str, space: str, at: Fraction, n: int) -> tuple[Law, Law]:
    """The law that the derivation names, and the convolution of the density itself."""
    density = Density(formula, variable="x", support=support, parameter="t", space=space)
    found = derive(density)
    parts = Factorisation(found.statistic, found.natural_parameter, sp.log(found.base), found.log_normaliser)
    general = continuous_family(density, parts)
    assert not isinstance(general, str)
    one = general[0].law.one  # type: ignore[attr-defined]
    assert found.family is not None
    return found.family.at(at, n), SumByConvolution(one, at, n)


@pytest.mark.parametrize(
    ("density", "at", "n", "places"),
    [
        (("exp(-(x-t)**2/8)/sqrt(8*pi)", "reals", "reals"), Fraction(1), 4, (-9, 4, 12)),
        (("t*exp(-t*x)", "reals > 0", "t > 0"), Fraction(2), 5, (Fraction(1, 2), 2, 7)),
        (("t**3*x**2*exp(-t*x)/2", "reals > 0", "t > 0"), Fraction(1), 3, (2, 9, 20)),
    ],
    ids=["normal", "exponential", "gamma"],
)
def test_agrees_with_another_route(
    density: tuple[str, str, str], at: Fraction, n: int, places: tuple[Fraction, ...]
) -> None:
    wanted, found = laws_of(*density, at, n)
    assert type(wanted) is not type(found)
    sign = -1 if wanted.name == "gamma" and float(wanted.support[0] or 0) < 0 else 1
    with balls(120) as A:
        for v in places:
            for method in METHODS:
                left, right = getattr(found, method)(A, A.real(v)), getattr(wanted, method)(A, A.real(sign * v))
                assert left.overlaps(right), (v, method)
                assert left.rel_accuracy_bits() > 90, (v, method)


def test_truncated_exponential_has_its_spline_density_also_at_the_corners() -> None:
    """Feller (1971), section I.9, tilted: exp(-t v) (t / (1 - exp(-t)))**n times the density of uniform sums."""
    n, at = 5, Fraction(2)
    law = derive_sum(n, at, "t*exp(-t*x)/(1-exp(-t))", "t > 0")
    with balls(128) as A:
        front = (A.real(at) / (1 - A.exp(-A.real(at)))) ** n
        for v in (Fraction(1, 2), Fraction(2), Fraction(7, 2), Fraction(4)):
            spline = sum(Fraction((-1) ** k * comb(n, k)) * (v - k) ** (n - 1) for k in range(int(v) + 1))
            found = law.density(A, A.real(v))
            assert found.overlaps(front * A.exp(-A.real(at * v)) * A.real(spline / factorial(n - 1)))
            assert found.rel_accuracy_bits() > 100


def test_two_truncated_normals_agree_with_a_double_integral_in_mpmath() -> None:
    law = derive_sum(2, Fraction(1, 2))
    mpmath.mp.dps = 25
    total = mpmath.quad(lambda x: mpmath.exp(-((x - 0.5) ** 2) / 2), [0, 1]) ** 2
    v = mpmath.mpf(4) / 5
    inner = mpmath.quad(
        lambda x: (
            mpmath.exp(-((x - 0.5) ** 2) / 2) * mpmath.quad(lambda y: mpmath.exp(-((y - 0.5) ** 2) / 2), [0, v - x])
        ),
        [0, v],
    )
    with balls(120) as A:
        found = law.cdf(A, A.real(Fraction(4, 5)))
        assert (law.cdf(A, A.real(Fraction(4, 5))) + law.sf(A, A.real(Fraction(4, 5))) - 1).contains(0)
    assert abs(mpmath.mpf(found.str(24, radius=False)) - inner / total) < mpmath.mpf(10) ** -20


def derive_sum(n: int, at: Fraction, formula: str = TRUNCATED_NORMAL, space: str = "reals") -> Law:
    family = derive(Density(formula, variable="x", support="reals in (0, 1)", parameter="t", space=space)).family
    assert family is not None
    law = family.at(at, n)
    assert isinstance(law, SumByConvolution)
    return law


def test_shortfall_is_the_integral_of_the_distribution_function_below_the_mean() -> None:
    """E[(m - V); V <= m] = integral of P(V <= w) for w below m, here by Simpson's rule."""
    law = derive_sum(3, Fraction(1))
    with balls(90) as A:
        m, steps = law.expectation(A), 200
        heights = [law.cdf(A, m * k / steps) for k in range(1, steps + 1)]
        weights = [4 if k % 2 else 2 for k in range(1, steps)] + [1]
        simpson = sum((w * h for w, h in zip(weights, heights, strict=True)), A.real(0)) * m / steps / 3
        assert abs(simpson - law.shortfall(A, m)) < 1e-8


def test_a_ball_as_a_point_encloses_the_values_at_its_ends() -> None:
    law = derive_sum(3, Fraction(0))
    with balls(100) as A:
        low, high = A.real(Fraction(11, 10)), A.real(Fraction(12, 10))
        for method in METHODS:
            wide = getattr(law, method)(A, low.union(high))
            assert wide.overlaps(getattr(law, method)(A, low))
            assert wide.overlaps(getattr(law, method)(A, high))


@given(st.lists(st.integers(-9, 9), min_size=1, max_size=5), st.integers(2, 4), st.integers(1, 15))
@settings(max_examples=60, deadline=None)
def test_both_ends_give_the_same_convolution(coefficients: list[int], n: int, eighths: int) -> None:
    with balls(200):
        p, x = arb_poly(coefficients), arb(eighths) * n / 16
        left = PolynomialSum(p, n).value(x, DENSITY)
        right = PolynomialSum(reflected(p), n).value(n - x, DENSITY)
        whole = sum((c / (k + 1) for k, c in enumerate(p.coeffs())), arb(0)) ** n
        parts = PolynomialSum(p, n).value(x, CUMULATIVE) + PolynomialSum(reflected(p), n).value(n - x, CUMULATIVE)
        assert left.overlaps(right)
        assert parts.overlaps(whole)


@pytest.mark.parametrize("n", [2, 5])
def test_uniform_variables_have_the_density_of_irwin_and_hall(n: int) -> None:
    """Feller (1971), section I.9, equation (9.6)."""
    for x in (Fraction(1, 3), Fraction(3, 2), Fraction(7, 4)):
        wanted = sum(Fraction((-1) ** k * comb(n, k)) * (x - k) ** (n - 1) for k in range(int(x) + 1)) / factorial(
            n - 1
        )
        with balls(100) as A:
            assert PolynomialSum(arb_poly([1]), n).value(A.real(x), DENSITY).overlaps(A.real(wanted))


@pytest.mark.parametrize("pole", [Fraction(-1, 20), Fraction(-1), Fraction(3)])
def test_a_polynomial_stays_within_its_bound(pole: Fraction) -> None:
    with balls(200) as A:
        function = lambda z, analytic: 1 / (z - A.real(pole))  # noqa: E731
        near = approximate(function, *degree_for(bounds_on_ellipses(function), 80))
        assert near.error < A.real(Fraction(1, 2**79))
        for k in range(23):
            y = A.real(Fraction(k, 22))
            gap = abs(near.polynomial(y) - 1 / (y - A.real(pole)))
            assert gap <= near.error or gap.overlaps(near.error)


def test_a_function_with_a_singular_end_is_refused() -> None:
    with pytest.raises(UndecidedError, match="analytic"):
        bounds_on_ellipses(lambda z, analytic: z.sqrt(analytic=analytic))


@pytest.mark.parametrize("reach", [Fraction(1, 100), Fraction(1), Fraction(5), Fraction(60)])
def test_a_wide_place_is_cut_beyond_all_that_it_covers(reach: Fraction) -> None:
    """Over a ball the half-line is cut beyond its far end; the density there is that of the points inside."""
    density = ("t*exp(-t*x)", "reals > 0", "t > 0")
    wanted, found = laws_of(*density, Fraction(1), 2)
    with balls(80) as A:
        for centre in (Fraction(1, 2), Fraction(7)):
            wide = A.real(centre - min(reach, centre / 2)).union(A.real(centre + reach))
            middle, rest = split(A, wide)
            cut = found._replaced(middle, 80, rest).interval  # type: ignore[attr-defined]
            assert A.real(cut.high) > wide.upper()
            for share in (Fraction(1, 4), Fraction(1, 2), Fraction(1)):
                place = centre + share * reach
                assert found.density(A, wide).overlaps(wanted.density(A, A.real(place)))


def test_a_cut_that_does_not_enclose_the_middle_proves_nothing_of_the_tails() -> None:
    """A log-concave density falls beyond the cuts when it is larger at a point between them, and only then."""
    _, law = laws_of("exp(-(x-t)**2/8)/sqrt(8*pi)", "reals", "reals", Fraction(1), 2)
    one = law.one  # type: ignore[attr-defined]
    with balls(80) as A:
        _require_falling(one, Fraction(1), A, Fraction(-20), Fraction(20))
        for low, high in ((Fraction(5), Fraction(20)), (Fraction(-20), Fraction(-5)), (Fraction(20), Fraction(-20))):
            with pytest.raises(UndecidedError, match="fall beyond a cut"):
                _require_falling(one, Fraction(1), A, low, high)
