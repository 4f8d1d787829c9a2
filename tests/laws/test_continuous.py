"""One continuous observation by quadrature, against closed distribution functions and mpmath."""

from fractions import Fraction

import mpmath
import pytest

from verify.arithmetic.ball import balls
from verify.derivation.derive import derive
from verify.laws.base import Law
from verify.problem.density import Density


def law_of(formula: str, support: str, space: str, at: Fraction) -> Law:
    family = derive(Density(formula, variable="x", support=support, parameter="t", space=space)).family
    assert family is not None
    return family.at(at, 1)


def test_truncated_exponential_has_its_closed_distribution_function() -> None:
    law = law_of("t*exp(-t*x)/(1-exp(-t))", "reals in (0, 1)", "t > 0", Fraction(2))
    with balls(130) as A:
        for v in (Fraction(1, 100), Fraction(1, 2), Fraction(99, 100)):
            below = (1 - A.exp(A.real(-2 * v))) / (1 - A.exp(A.real(-2)))
            assert law.cdf(A, A.real(v)).overlaps(below)
            assert law.sf(A, A.real(v)).overlaps(1 - below)
            assert law.cdf(A, A.real(v)).rel_accuracy_bits() > 110


def test_secant_tails_agree_with_the_closed_form() -> None:
    """P(V > v) = 1 - (2/pi) atan(exp(pi v / 2)) at t = 0 (DLMF 4.26.8)."""
    law = law_of("cos(t)*exp(t*x)/(2*cosh(pi*x/2))", "reals", "-pi/2 < t < pi/2", Fraction(0))
    with balls(120) as A:
        for v in (Fraction(-2), Fraction(1, 3), Fraction(6)):
            wanted = 2 / A.pi * (A.exp(-A.pi * A.real(v) / 2)).atan()
            assert law.sf(A, A.real(v)).overlaps(wanted)
            assert law.sf(A, A.real(v)).rel_accuracy_bits() > 80


def test_two_pieces_of_a_cosine_agree_with_mpmath() -> None:
    mpmath.mp.dps = 30
    law = law_of("exp(t*cos(x))/(2*pi*besseli(0,t))", "reals in (-pi, pi)", "t > 0", Fraction(2))
    total = mpmath.pi * mpmath.besseli(0, 2)
    wanted = mpmath.quad(lambda u: mpmath.exp(2 * mpmath.cos(u)), [0, mpmath.acos(mpmath.mpf(1) / 2)]) / total
    with balls(120) as A:
        found = law.sf(A, A.real(Fraction(1, 2)))
        assert (law.cdf(A, A.real(Fraction(1, 2))) + found - 1).contains(0)
        assert law.support == (Fraction(-1), Fraction(1))
    assert abs(mpmath.mpf(found.str(28, radius=False)) - wanted) < mpmath.mpf(10) ** -25


@pytest.mark.parametrize("shape", [Fraction(1, 2), Fraction(3)])
def test_beta_with_an_unbounded_end_agrees_with_the_incomplete_beta_function(shape: Fraction) -> None:
    law = law_of("x**(t-1)/sqrt(1-x)/beta(t,1/2)", "reals in (0, 1)", "t > 0", shape)
    with balls(120) as A:
        for place in (Fraction(1, 10), Fraction(9, 10)):
            v = A.log(A.real(place))
            wanted = A.beta_p(place, shape, Fraction(1, 2))
            assert law.cdf(A, v).overlaps(wanted)
            assert (law.cdf(A, v) - wanted).rad() < 1e-25


def test_a_wide_point_gives_a_ball_around_both_ends() -> None:
    law = law_of("t*exp(-t*x)/(1-exp(-t))", "reals in (0, 1)", "t > 0", Fraction(2))
    with balls(100) as A:
        low, high = A.real(Fraction(2, 5)), A.real(Fraction(41, 100))
        wide = law.cdf(A, low.union(high))
        assert wide.contains(law.cdf(A, low).mid())
        assert wide.contains(law.cdf(A, high).mid())


@pytest.mark.parametrize("prec", [100, 700])
def test_shortfall_of_a_logarithm_near_its_far_end(prec: int) -> None:
    """6 x (1 - x) on (0, 1): integral of (m - log x) 6 x (1 - x) over (0, c) by parts, m = -1/2 - 1/3."""
    law = law_of("gamma(t+2)/gamma(t)*x**(t-1)*(1-x)", "reals in (0, 1)", "t > 0", Fraction(2))
    c = Fraction(1, 8)
    with balls(prec) as A:
        log, plain = A.log(A.real(c)), 3 * c**2 - 2 * c**3
        wanted = A.real(plain) * (A.real(Fraction(-5, 6)) - log) + A.real(Fraction(3, 2) * c**2 - Fraction(2, 3) * c**3)
        found = law.shortfall(A, log)
        assert found.overlaps(wanted)
        assert found.rel_accuracy_bits() > prec - 20


@pytest.mark.parametrize("prec", [100, 250])
def test_both_ends_far_at_finite_places(prec: int) -> None:
    """The arcsine law: P(X <= sin(u)**2) = 2 u / pi (Feller 1971, section II.4)."""
    law = law_of("sin(pi*t)/pi*x**(t-1)*(1-x)**(-t)", "reals in (0, 1)", "0 < t < 1", Fraction(1, 2))
    with balls(prec) as A:
        for u in (Fraction(1, 2), Fraction(5, 4)):
            v = 2 * A.log(A.real(u).tan())
            assert law.cdf(A, v).overlaps(2 * A.real(u) / A.pi)
            assert (law.cdf(A, v) + law.sf(A, v) - 1).contains(0)
            assert min(law.cdf(A, v).rel_accuracy_bits(), law.sf(A, v).rel_accuracy_bits()) > prec - 20
