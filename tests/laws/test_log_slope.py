"""The derivative of log density: against a difference of the density itself, and over a stretch."""

from fractions import Fraction
from functools import cache

import pytest

from verify.arithmetic.ball import around, balls, midpoint
from verify.derivation.derive import derive
from verify.laws import Gamma, InverseGaussian, Law, Normal
from verify.problem.density import Density

CLOSED: dict[str, Law] = {
    "normal": Normal(Fraction(1), Fraction(3)),
    "gamma": Gamma(Fraction(7, 2), Fraction(2)),
    "inverse Gaussian": InverseGaussian(Fraction(2), Fraction(5)),
}
SUMS = {
    "von Mises": ("exp(t*cos(x))/(2*pi*besseli(0,t))", "reals in (-pi, pi)", "t > 0", Fraction(3, 2)),
    "hyperbolic secant": ("cos(t)*exp(t*x)/(2*cosh(pi*x/2))", "reals", "-pi/2 < t < pi/2", Fraction(1, 4)),
    "beta": ("x**(t-1)*(1-x)**(3/2)/beta(t,5/2)", "reals in (0, 1)", "t > 0", Fraction(2)),
}


@cache
def law_of(name: str) -> Law:
    if name in CLOSED:
        return CLOSED[name]
    formula, support, space, at = SUMS[name]
    found = derive(Density(formula, variable="x", support=support, parameter="t", space=space)).family
    return found.at(at, 4)


@pytest.mark.parametrize("name", [*CLOSED, *SUMS])
@pytest.mark.parametrize("spreads", [Fraction(-1, 2), Fraction(3, 4)])
def test_against_a_difference(name, spreads):
    law = law_of(name)
    with balls(200) as A:
        c = midpoint(law.expectation(A) + A.real(spreads) * law.spread(A))
        step = A.power(A.real(10), -15)
        left, right = (A.log(law.density(A, midpoint(c + side * step))) for side in (-1, 1))
        assert abs((right - left) / (2 * step) - law.log_slope(A, c)) < A.power(A.real(10), -25)


@pytest.mark.parametrize("name", [*CLOSED, *SUMS])
@pytest.mark.parametrize("size", [3, 12, 30])
def test_a_stretch_holds_the_slopes_in_it(name, size):
    law = law_of(name)
    with balls(160) as A:
        c = midpoint(law.expectation(A) + law.spread(A) / 3)
        reach = law.spread(A) / A.power(A.real(10), size)
        over = law.log_slope(A, around(c, reach))
        for share in (Fraction(-99, 100), Fraction(-1, 3), Fraction(0), Fraction(9, 10)):
            assert over.overlaps(law.log_slope(A, midpoint(c + A.real(share) * reach)))
        assert over.is_finite()
