"""Exact fractions: whole numbers come from formulas as fractions, and are taken as such."""

from fractions import Fraction

import pytest
import sympy as sp

from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.exact import Rationals
from verify.errors import NotRational

x = sp.Symbol("x", positive=True, integer=True)


@pytest.mark.parametrize(
    ("expr", "wanted"),
    [
        (sp.factorial(x), Fraction(24)),
        (sp.Rational(1, 2) ** x / sp.factorial(x - 1), Fraction(1, 96)),
        (sp.binomial(6, x), Fraction(15)),
        (sp.RisingFactorial(sp.Rational(1, 2), x), Fraction(105, 16)),
    ],
)
def test_functions_of_a_formula_take_whole_fractions(expr: sp.Expr, wanted: Fraction) -> None:
    assert evaluate(expr, Rationals(), {"x": Fraction(4)}) == wanted


def test_a_factorial_of_what_is_not_whole_is_not_rational() -> None:
    with pytest.raises(NotRational, match="not whole"):
        Rationals().factorial(Fraction(1, 2))
