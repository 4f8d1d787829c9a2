"""Compiled formulas give what the walk over the expression gives."""

import pytest
import sympy as sp

from verify.arithmetic.ball import balls
from verify.arithmetic.compiled import compiled
from verify.arithmetic.complex_ball import ComplexBalls
from verify.arithmetic.evaluate import evaluate
from verify.errors import SidecheckError

x, t = sp.symbols("x t", real=True)


@pytest.mark.parametrize(
    "expr",
    [
        x,
        t,
        sp.Integer(3),
        sp.exp(t * x) / sp.cosh(sp.pi * x / 2),
        x ** (t - 1) * (1 - x) ** sp.Rational(3, 2),
        sp.sqrt(x) + sp.sqrt(t) + 2 * x * t,
        sp.exp(-((x - t) ** 2) / 2) * sp.erf(x) * sp.besseli(0, x),
        sp.log(x) ** 2 / sp.gamma(x + 1) - sp.E**x,
        t**x,
    ],
)
@pytest.mark.parametrize("analytic", [False, True])
def test_same_as_the_walk(expr: sp.Expr, analytic: bool) -> None:
    with balls(100) as B:
        A = ComplexBalls(100, analytic=analytic)
        values = {"t": A.real(B.real(sp.Rational(7, 5)))}
        for place in (A.real(sp.Rational(2, 7)), A.real(B.real(sp.Rational(1, 3)).union(B.real(sp.Rational(1, 2))))):
            first = compiled(expr, A, "x", values)(place)
            second = evaluate(expr, A, {**values, "x": place})
            assert first.overlaps(second)
            assert first.rel_accuracy_bits() >= second.rel_accuracy_bits() - 4


def test_a_symbol_without_a_value_is_an_error() -> None:
    with balls(64), pytest.raises(SidecheckError, match="no value for the symbol t"):
        compiled(x * t, ComplexBalls(64, analytic=False), "x", {})
