"""A law over a ball holds the law at every point of the ball: the property that all proofs rest on."""

from fractions import Fraction
from functools import cache

import pytest
from hypothesis import HealthCheck, assume, given, reject, settings
from hypothesis import strategies as st

from verify.arithmetic.ball import balls
from verify.derivation.derive import derive
from verify.errors import UndecidedError
from verify.laws import Gamma, InverseGaussian, Normal
from verify.problem.density import Density

UNIT, HALF_LINE = "reals in (0, 1)", "t > 0"
SQUARED = ("2*t*abs(x)*exp(t*x**2)/(exp(t)+exp(4*t)-2)", "reals in (-1, 2)", HALF_LINE, 1)
GENERAL = {
    "von Mises": ("exp(t*cos(x))/(2*pi*besseli(0,t))", "reals in (-pi, pi)", HALF_LINE, 3),
    "beta": ("gamma(t+2)/gamma(t)*x**(t-1)*(1-x)", UNIT, HALF_LINE, 3),
    "tilted uniform": ("exp(t*x)*t/(exp(t)-1)", UNIT, HALF_LINE, 1),
    "tilted uniform, three": ("exp(t*x)*t/(exp(t)-1)", UNIT, HALF_LINE, 3),
    "a square, folded at 0": SQUARED,
}
"""Densities whose statistic has no law of its own; the last one's density jumps at 1."""

PLAIN = {
    "gamma": (Gamma(Fraction(5, 2), Fraction(3)), Fraction(1, 100), Fraction(3)),
    "gamma, unbounded at 0": (Gamma(Fraction(1, 2), Fraction(1)), Fraction(1, 1000), Fraction(3)),
    "normal": (Normal(Fraction(1), Fraction(4)), Fraction(-5), Fraction(7)),
    "inverse Gaussian": (InverseGaussian(Fraction(2), Fraction(3)), Fraction(1, 20), Fraction(8)),
}
RANGES = {
    "von Mises": (-3, 3), "beta": (-6, 0), "tilted uniform": (0, 1), "tilted uniform, three": (0, 3),
    "a square, folded at 0": (0, 4),
}  # fmt: skip


@cache
def law_of(name):
    """Return a law and a stretch of its support."""
    if name in PLAIN:
        return PLAIN[name]
    formula, support, space, n = GENERAL[name]
    density = Density(formula, variable="x", support=support, parameter="t", space=space)
    return derive(density, n=n).family.at(Fraction(1), n), *map(Fraction, RANGES[name])


@pytest.mark.parametrize("function", ["density", "cdf", "sf", "shortfall"])
@pytest.mark.parametrize("name", [*PLAIN, *GENERAL])
@settings(max_examples=15, suppress_health_check=[HealthCheck.filter_too_much])
@given(data=st.data())
def test_a_ball_holds_its_points(name, function, data):
    law, low, high = law_of(name)
    centre = data.draw(st.fractions(low, high, max_denominator=1000) | st.sampled_from([low, (low + high) / 4, high]))
    reach = Fraction(data.draw(st.integers(1, 9)), 10 ** data.draw(st.integers(1, 12)))
    share = data.draw(st.fractions(-1, 1, max_denominator=50))
    value = getattr(law, function)
    point = centre + share * reach
    assume(low < point < high)
    with balls(100) as A:
        try:
            over = value(A, A.real(centre - reach).union(A.real(centre + reach)))
        except UndecidedError:
            reject()
        assert not over.is_finite() or over.overlaps(value(A, A.real(point)))
