"""Rigorous quadrature: the analytic flag is honoured, values agree with closed forms and mpmath."""

import mpmath
import pytest
import sympy as sp

from verify.arithmetic.ball import balls
from verify.arithmetic.complex_ball import ComplexBalls
from verify.arithmetic.quadrature import integral, integrand
from verify.errors import UndecidedError

x = sp.Symbol("x", real=True)


@pytest.mark.parametrize(
    ("formula", "low", "high", "wanted"),
    [
        (sp.sqrt(x), 1, 4, "14/3"),
        (sp.log(x), 1, 4, "4*log(4) - 3"),
        (x ** sp.Rational(5, 3), 1, 8, "3/8*(256 - 1)"),
        (sp.Abs(x - 2), 0, 4, "4"),
        (sp.asin(x / 2), 0, 1, "pi/6 + sqrt(3) - 2"),
        (sp.besseli(0, x) * x, 0, 2, "2*besseli(1, 2)"),
    ],
)
def test_functions_with_cuts_are_integrated_truly(formula: sp.Expr, low: int, high: int, wanted: str) -> None:
    """A function that ignores the analytic flag returns a tight ball around a wrong number, e.g. 4.6694 for the
    first.
    """
    with balls(100) as A:
        found = integral(integrand(formula, "x", {}, 100), A.real(low), A.real(high))
        assert found.overlaps(A.real(sp.sympify(wanted)))
        assert found.rel_accuracy_bits() > 60


def test_a_cut_inside_the_neighbourhood_gives_no_bound() -> None:
    with balls(64) as A:
        around_zero = ComplexBalls(64, analytic=True).real(A.real(0).union(A.real(1)))
        for name in ("log", "sqrt"):
            assert not getattr(ComplexBalls(64, analytic=True), name)(around_zero - 1).is_finite()
        assert ComplexBalls(64, analytic=False).sqrt(around_zero).is_finite()


def test_gamma_densities_agree_with_mpmath() -> None:
    mpmath.mp.dps = 30
    wanted = mpmath.quad(lambda u: u ** mpmath.mpf("1.5") * mpmath.exp(-u), [1, 3])
    with balls(110) as A:
        found = integral(integrand(x ** sp.Rational(3, 2) * sp.exp(-x), "x", {}, 110), A.real(1), A.real(3))
    assert abs(mpmath.mpf(found.str(28, radius=False)) - wanted) < mpmath.mpf(10) ** -25


def test_an_unknown_function_is_undecided() -> None:
    with pytest.raises(UndecidedError, match="no complex enclosure"):
        ComplexBalls(64, analytic=True).function("LambertW")
