"""Exact numbers: what a text means, what is refused, and that text and number are one."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.errors import InputError
from verify.problem.numbers import as_exact, as_expr, exact, exact_text

NUMBERS = st.fractions().map(lambda q: q.limit_denominator(10**12))


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("0.05", Fraction(1, 20)),
        (" 1/3 ", Fraction(1, 3)),
        ("-2.50", Fraction(-5, 2)),
        ("1e-200", Fraction(1, 10**200)),
        ("10**400", Fraction(10**400)),
        ("0.1 + 0.2", Fraction(3, 10)),
        ("sqrt(4)", Fraction(2)),
        ("log(1)", Fraction(0)),
        ("(1 + sqrt(2))*(1 - sqrt(2))", Fraction(-1)),
        ("log(4)/log(2)", Fraction(2)),
        ("sqrt(2)", sympy.sqrt(2)),
        ("2·sqrt(3)/5", 2 * sympy.sqrt(3) / 5),
        ("log(3)", sympy.log(3)),
        ("pi^2/6", sympy.pi**2 / 6),
        ("exp(1)", sympy.E),
    ],
)
def test_a_text_means_the_exact_number(text: str, value: object) -> None:
    assert exact(text) == value
    assert type(exact(text)) is Fraction or isinstance(value, sympy.Expr)


@pytest.mark.parametrize("value", [0.05, 10.0, float("nan"), float("inf")])
def test_a_float_is_refused_with_the_reason(value: float) -> None:
    with pytest.raises(InputError, match="binary number"):
        exact(value)  # type: ignore[arg-type]


@pytest.mark.parametrize(
    "value",
    [True, None, [], Decimal("inf"), Decimal("nan"), "", " ", "x", "1/0", "0/0", "sqrt(-1)",
    "log(0)", "log(-1)",
     "(-8)**(1/3)", "nan", "inf", "oo", "1e99999999", "e",
    sympy.Symbol("t"), sympy.Float("0.05"), sympy.oo, sympy.I],
)  # fmt: skip
def test_what_is_no_exact_number_is_refused(value: object) -> None:
    with pytest.raises(InputError):
        exact(value)  # type: ignore[arg-type]


def test_exact_python_numbers_are_taken_as_they_are() -> None:
    assert exact(12) == exact(Decimal("12.00")) == exact(Fraction(12)) == exact(sympy.Integer(12)) == 12
    assert exact(Decimal("0.05")) == Fraction(1, 20)


@settings(max_examples=50, deadline=None)
@given(NUMBERS)
def test_a_rational_survives_the_round_trip(value: Fraction) -> None:
    assert exact(exact_text(value)) == value
    assert as_exact(as_expr(value)) == value


@settings(max_examples=50, deadline=None)
@given(st.decimals(allow_nan=False, allow_infinity=False, places=20, min_value=-(10**9), max_value=10**9))
def test_a_decimal_text_is_the_decimal(value: Decimal) -> None:
    assert exact(str(value)) == Fraction(value)


@settings(max_examples=50, deadline=None)
@given(NUMBERS, st.sampled_from(["sqrt(2)", "log(3)", "pi", "exp(1)", "sqrt(3)*log(2)", "gamma(1/3)"]))
def test_an_irrational_survives_the_round_trip(factor: Fraction, text: str) -> None:
    value = as_exact(as_expr(factor) * as_expr(exact(text)) + 1)
    assert exact(exact_text(value)) == value
