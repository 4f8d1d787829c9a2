"""Series of a law from its transform, accelerated: against sums and distribution functions in closed form."""

import math
from fractions import Fraction

import pytest
from flint import acb, arb
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.arithmetic.acceleration import epsilon, levin
from verify.arithmetic.ball import balls
from verify.arithmetic.double_exponential import nodes, reach_for
from verify.arithmetic.exponential_sums import ExponentialSums
from verify.arithmetic.fourier_series import FourierSeries, turning
from verify.errors import UndecidedError

N = 3


def irwin_hall(x: Fraction, order: int) -> Fraction:
    """Density, distribution function and its integral of the sum of three uniform variables (Feller II, I.9)."""
    power = N - 1 + order
    terms = ((-1) ** k * math.comb(N, k) * max(x - k, 0) ** power for k in range(N + 1))
    return Fraction(sum(terms), math.factorial(power))


@pytest.mark.parametrize("method", [epsilon, levin])
@pytest.mark.parametrize("tilt", [Fraction(1, 3), Fraction(-1, 2)])
def test_three_uniform_variables(method, tilt: Fraction) -> None:
    """The terms fall like k**-3 only, and turn at four rates at once."""
    with balls(320) as A:

        def transform(k: int):
            z = acb(-A.real(tilt), 2 * arb.pi() * k / N)
            return ((z.exp() - 1) / z) ** N

        series = FourierSeries(transform, arb(N), A.real(tilt), N, 96, method, arb(1), arb(N) / 2)
        for x in (Fraction(2, 5), Fraction(7, 5), Fraction(43, 16)):
            for order in range(3):
                found = series.value(A.real(x), order)
                assert abs(found - A.real(irwin_hall(x, order))) < A.power(A.real(10), -28), (x, order)


@settings(max_examples=20, deadline=None)
@given(angle=st.fractions(Fraction(1, 4), Fraction(3, 4), max_denominator=40), power=st.sampled_from([1, 2, 5]))
def test_both_methods_sum_a_turning_series(angle: Fraction, power: int) -> None:
    """The sum of z**k / k**(power / 2) is a polylogarithm."""
    with balls(300) as A:
        z = acb(2 * A.real(angle)).exp_pi_i()
        exponent = A.real(Fraction(power, 2))
        wanted = z.polylog(acb(exponent))
        terms = [z**k / arb(k) ** exponent for k in range(1, 60)]
        for method in (epsilon, levin):
            found = method(terms)
            assert abs(found - wanted) < A.power(A.real(10), -18)


def test_nodes_integrate_a_beta_density_and_reach_as_far_as_it_needs() -> None:
    with balls(900) as A:

        def density(cell: int, theta, rest):
            return 1 / (A.pi * (theta * rest).sqrt())

        reach = reach_for(density, 1, 120)
        total = sum((n.weight * density(0, n.theta, n.rest) for n in nodes(120, reach)), arb(0))
        assert abs(total - 1) < A.power(A.real(2), -110)
        with pytest.raises(UndecidedError, match="too fast"):
            reach_for(lambda cell, theta, rest: theta ** (arb(1) / 20 - 1), 1, 120)


def test_sums_agree_with_one_by_one() -> None:
    with balls(128):
        places, weights = [arb(k * k) / 97 for k in range(9)], [arb(1) / (k + 1) for k in range(9)]
        sums = ExponentialSums(places, weights)
        for k in (0, 1, 31, 32, 100):
            direct = sum((w * acb(2 * k * x).exp_pi_i() for x, w in zip(places, weights, strict=True)), acb(0))
            assert sums.at(k).overlaps(direct)


@given(st.floats(0.01, 8, allow_nan=False))
def test_classes_turn_by_nearly_half_a_circle_where_that_can_be_had(cells: float) -> None:
    classes = turning(cells, 64)
    apart = abs((classes * cells) % 1 - 0.5)
    assert apart <= 0.25 or min(cells % 1, 1 - cells % 1) < 1 / 64
