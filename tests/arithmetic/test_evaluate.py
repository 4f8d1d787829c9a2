"""What an arithmetic does not know leaves a question open; it is no crash."""

from __future__ import annotations

import pytest
import sympy as sp

from verify.arithmetic.ball import balls
from verify.arithmetic.complex_ball import ComplexBalls
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.high import high
from verify.arithmetic.taylor import TaylorBalls
from verify.errors import UndecidedError, UnknownFunction


@pytest.mark.parametrize("function", [sp.DiracDelta, sp.Heaviside, sp.airyai])
def test_a_function_without_an_enclosure_is_left_undecided_by_every_arithmetic(function: type[sp.Function]) -> None:
    x = sp.Symbol("x")
    assert issubclass(UnknownFunction, UndecidedError)
    with balls(64) as A:
        for arithmetic in (A, ComplexBalls(64, analytic=True), TaylorBalls(64, 3)):
            with pytest.raises(UnknownFunction, match=f"the function {function.__name__}"):
                evaluate(function(x), arithmetic, {"x": arithmetic.real(1)})


def test_nor_is_there_a_value_that_mpmath_does_not_have() -> None:
    x = sp.Symbol("x")
    with pytest.raises(UnknownFunction, match="the function DiracDelta"):
        evaluate(sp.DiracDelta(x), high(20), {"x": high(20).real(1)})
