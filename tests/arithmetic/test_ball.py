"""The door to the balls."""

import re
from fractions import Fraction
from pathlib import Path

import pytest
import sympy
from flint import arb, ctx
from hypothesis import given
from hypothesis import strategies as st

from verify.arithmetic.ball import around, balls, to_enclosure
from verify.arithmetic.beta_series import incomplete_beta
from verify.arithmetic.enclosure import Enclosure, decimal_text
from verify.arithmetic.evaluate import evaluate
from verify.errors import SidecheckError

share = st.fractions(Fraction(1, 50), Fraction(49, 50), max_denominator=50)
size = st.fractions(Fraction(1, 3), 60, max_denominator=6)
rational = st.fractions(min_value=-(10**6), max_value=10**6, max_denominator=10**6)


def test_the_precision_is_set_in_one_place_and_restored():
    before = ctx.prec
    with balls(333):
        assert ctx.prec == 333
        with balls(99):
            assert ctx.prec == 99
        assert ctx.prec == 333
    assert ctx.prec == before


def test_the_precision_is_restored_after_an_error():
    before = ctx.prec
    with pytest.raises(ZeroDivisionError), balls(500):
        raise ZeroDivisionError
    assert ctx.prec == before


@given(rational)
def test_a_rational_is_contained_in_its_ball(x):
    with balls(64) as A:
        assert to_enclosure(A.real(x)).contains(x)


@given(rational, st.integers(1, 40))
def test_decimals_are_rounded_outward(x, digits):
    low, high = decimal_text(x, digits, up=False), decimal_text(x, digits, up=True)
    assert Fraction(low) <= x <= Fraction(high)


@given(rational, st.fractions(0, 1, max_denominator=10**9), st.integers(1, 30))
def test_an_enclosure_prints_no_digit_it_does_not_guarantee(x, width, digits):
    enclosure = Enclosure(x, x + width)
    text = enclosure.text(digits)
    if " +- " in text:
        centre, bound = map(Fraction, text.split(" +- "))
        assert centre - bound <= enclosure.lower
        assert enclosure.upper <= centre + bound
    elif not text.startswith("["):
        cut = Fraction(text)
        exponent = len(re.sub(r"e.*", "", text).partition(".")[2]) - int((re.findall(r"e(-?\d+)", text) or [0])[0])
        unit = Fraction(10) ** -exponent
        assert (
            enclosure.exact
            or abs(cut) <= abs(enclosure.lower) < abs(cut) + unit
            or abs(cut) <= abs(enclosure.upper) < abs(cut) + unit
        )


def test_tiny_balls_become_rationals_of_sensible_size():
    with balls(64):
        tiny = to_enclosure(arb(2) ** (-(10**9)))
    assert tiny.lower == 0
    assert 0 < tiny.upper < Fraction(1, 10**1000)


@given(share, size, size)
def test_incomplete_beta_agrees_with_arb_and_reflects(x, a, b):
    with balls(128) as A:
        value = incomplete_beta(A.real(x), a, b, 128)
        assert value.overlaps(A.real(x).beta_lower(A.real(a), A.real(b), regularized=1))
        assert (value + incomplete_beta(1 - A.real(x), b, a, 128)).overlaps(arb(1))


@pytest.mark.parametrize(
    ("a", "b", "x", "prec"), [(3001, 7000, Fraction(3, 10), 2048), (10**5, 10**5, Fraction(4999, 10000), 1 << 14)]
)
def test_incomplete_beta_where_a_library_hangs(a, b, x, prec):
    with balls(prec) as A:
        value = incomplete_beta(A.real(x), a, b, prec)
        assert value.rel_accuracy_bits() > prec - 64


def test_walk_over_an_expression():
    x = sympy.Symbol("x")
    expr = sympy.sqrt(2) * sympy.exp(-(x**2)) / sympy.gamma(x + sympy.Rational(1, 2)) + sympy.pi
    with balls(120) as A:
        value = evaluate(expr, A, {"x": A.real(Fraction(3, 2))})
        assert abs(float(value.mid()) - float(expr.subs(x, sympy.Rational(3, 2)))) < 1e-12


def test_a_symbol_without_a_value_is_an_error():
    with balls(64) as A, pytest.raises(SidecheckError, match="no value for the symbol y"):
        evaluate(sympy.Symbol("y"), A, {})


def test_a_ball_around_a_midpoint_contains_both_ends():
    with balls(64) as A:
        ball = around(A.real(1), A.real(Fraction(1, 8)))
        assert ball.contains(A.real(Fraction(7, 8)))
        assert ball.contains(A.real(Fraction(9, 8)))


def test_no_float_enters_the_exact_path():
    """No float literal in the laws or the ball arithmetic, but in the rough scores that only start a search."""
    root = Path(__file__).resolve().parents[2] / "verify"
    for file in sorted((root / "arithmetic").glob("ball*.py")):
        code = re.sub(r'""".*?"""', "", file.read_text(), flags=re.DOTALL)
        assert not re.search(r"\b\d+\.\d|\b\d+e-?\d|\bfloat\(", code), file.name
