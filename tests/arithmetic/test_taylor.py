"""Taylor coefficients against derivatives that SymPy writes out."""

import pytest
import sympy as sp

from verify.arithmetic.ball import balls
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.taylor import taylor
from verify.errors import UndecidedError, UnknownFunction

t = sp.Symbol("t", positive=True)


@pytest.mark.parametrize(
    "expr",
    [
        sp.Integer(3),
        t,
        1 / t**3 + t**2,
        sp.log(sp.exp(t) - 1) - sp.sqrt(t),
        t ** sp.Rational(5, 3) + 2**t,
        sp.log(sp.erf((1 - t) / sp.sqrt(2)) - sp.erf(-t / sp.sqrt(2))),
        sp.log(sp.gamma(t + 1)) - sp.loggamma(t) + sp.factorial(t),
        sp.sinh(t) * sp.cosh(t) / sp.tanh(t) + sp.cos(t) * sp.tan(t),
        sp.log(sp.besseli(0, t)),
        sp.besseli(sp.Rational(1, 2), t**2) + sp.besselk(1, 2 * t),
        sp.E * sp.pi * sp.erfc(t),
    ],
)
def test_same_as_written_out_derivatives(expr: sp.Expr) -> None:
    found = taylor(expr, "t", sp.Rational(5, 7), 5, 128)
    with balls(128) as A:
        for k, coefficient in enumerate(found):
            wanted = evaluate(sp.diff(expr, t, k), A, {"t": A.real(sp.Rational(5, 7))}) / sp.factorial(k).p
            assert coefficient.overlaps(wanted)
            assert coefficient.rad() < abs(coefficient) * 2.0**-80 + 2.0**-90


def test_the_zeta_function() -> None:
    first = taylor(sp.zeta(t), "t", sp.Integer(2), 3, 128)
    with balls(128) as A:
        assert first[0].overlaps(A.pi**2 / 6)


def test_an_unknown_function_is_an_error() -> None:
    with pytest.raises(UnknownFunction, match="no Taylor series of the function polygamma"):
        taylor(sp.digamma(t), "t", sp.Integer(1), 3, 64)


def test_a_pole_is_an_error() -> None:
    with pytest.raises(UndecidedError, match="no Taylor series at 1"):
        taylor(1 / (t - 1), "t", sp.Integer(1), 3, 64)
