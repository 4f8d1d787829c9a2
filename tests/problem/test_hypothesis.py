"""Nulls, alternatives and levels, read from text."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import pytest
import sympy
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from verify.errors import InputError
from verify.problem.density import Density
from verify.problem.hypothesis import Form, Hypothesis, parse_null
from verify.problem.problem import Problem
from verify.problem.space import parse_space

SPACE = parse_space("lam > 0", "lam", {})
DENSITY = Density(
    "exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0", parameter="lam", space="lam > 0"
)


def problem(**changes: Any) -> Problem:
    return Problem(**{"density": DENSITY, "null": "lam <= 8 or lam >= 12", "alpha": "0.05", "n": 10, **changes})


@pytest.mark.parametrize(
    ("text", "form", "limits", "below"),
    [
        ("lam <= 8 or lam >= 12", Form.OUTSIDE, (8, 12), False),
        ("lam >= 12 or lam <= 8", Form.OUTSIDE, (8, 12), False),
        ("8 >= lam or 12 ≤ lam", Form.OUTSIDE, (8, 12), False),
        ("8 <= lam <= 12", Form.INTERVAL, (8, 12), False),
        ("12 >= lam >= 8", Form.INTERVAL, (8, 12), False),
        ("lam = 8", Form.POINT, (8,), False),
        ("8 == lam", Form.POINT, (8,), False),
        ("lam <= 8", Form.ONE_SIDED, (8,), True),
        ("8 >= lam", Form.ONE_SIDED, (8,), True),
        ("lam >= 0.5", Form.ONE_SIDED, (Fraction(1, 2),), False),
        ("lam >= sqrt(2)", Form.ONE_SIDED, (sympy.sqrt(2),), False),
        ("b <= lam <= 2*b", Form.INTERVAL, (5, 10), False),
    ],
)
def test_a_null_is_read(text: str, form: Form, limits: tuple[object, ...], below: bool) -> None:
    null = parse_null(text, "lam", SPACE, {"b": sympy.Integer(5)})
    assert (null.form, null.limits, null.null_below) == (form, limits, below)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("lam <= 12 or lam >= 8", "wrong order"),
        ("12 <= lam <= 8", "wrong order"),
        ("8 <= lam <= 8", "limits are equal"),
        ("lam <= 8 or lam >= 8", "limits are equal"),
        ("lam <= sqrt(2)*sqrt(3) or lam >= sqrt(6)", "limits are equal"),
        ("lam <= 0", "outside the parameter space"),
        ("-1 <= lam <= 8", "outside the parameter space"),
        ("lam < 8", 'write "lam <= 8"'),
        ("8 < lam < 12", 'write "8 <= lam <= 12"'),
        ("lam != 8", "not one interval"),
        ("8 <= lam >= 12", "not one interval"),
        ("lam", "does not bound lam"),
        ("2*lam <= 8", "does not bound lam"),
        ("mu <= 8", "does not bound lam"),
        ("lam <= 8 or lam >= 12 or lam = 10", "more than two parts"),
        ("lam <= 8 or lam <= 12", "one below and one above"),
        ("lam = 8 or lam = 12", "one below and one above"),
        ("lam <= x", "unknown name"),
        ("lam <= oo", "not a real, finite number"),
        ("", "empty"),
    ],
)
def test_each_mistake_in_a_null_has_its_message(text: str, message: str) -> None:
    with pytest.raises(InputError, match=message) as caught:
        parse_null(text, "lam", SPACE, {})
    assert caught.value.key == "problem.null"


@pytest.mark.parametrize(
    ("null", "alternative"),
    [
        ("lam <= 8 or lam >= 12", "8 < lam < 12"),
        ("lam <= 8 or lam >= 12", "12 > lam > 8"),
        ("8 <= lam <= 12", "lam > 12 or lam < 8"),
        ("lam = 8", "lam ≠ 8"),
        ("lam = 8", "lam < 8 or lam > 8"),
        ("lam <= 8", "lam > 16/2"),
        ("lam >= 8", "8 > lam"),
    ],
)
def test_the_complement_is_accepted(null: str, alternative: str) -> None:
    assert problem(null=null, alternative=alternative).hypothesis == problem(null=null).hypothesis


@pytest.mark.parametrize(
    "alternative",
    [
        "8 <= lam <= 12",
        "8 < lam < 13",
        "lam < 8 or lam > 12",
        "lam > 8",
        "8 < lam <= 12",
        "lam != 8",
        "lam = 10",
    ],
)
def test_what_is_not_the_complement_is_refused(alternative: str) -> None:
    with pytest.raises(InputError, match='write "8 < lam < 12" or leave it out'):
        problem(alternative=alternative)


@settings(max_examples=60, deadline=None)
@given(
    st.fractions(1, 50, max_denominator=20),
    st.fractions(51, 99, max_denominator=20),
    st.sampled_from(Form),
    st.booleans(),
)
def test_a_null_printed_and_read_again_is_the_same(low: Fraction, high: Fraction, form: Form, below: bool) -> None:
    text = {
        Form.ONE_SIDED: f"lam {'<=' if below else '>='} {low}",
        Form.OUTSIDE: f"lam <= {low} or lam >= {high}",
        Form.INTERVAL: f"{low} <= lam <= {high}",
        Form.POINT: f"lam = {low}",
    }[form]
    null = parse_null(text, "lam", SPACE, {})
    assert null.text("lam") == text
    assert parse_null(null.text("lam"), "lam", SPACE, {}) == null
    assert problem(null=text, alternative=null.alternative_text("lam")).hypothesis == null


def test_levels_are_exact_and_one_for_each_limit() -> None:
    assert problem().levels == (Fraction(1, 20), Fraction(1, 20))
    assert problem(alpha=["0.02", "0.05"]).levels == (Fraction(1, 50), Fraction(1, 20))
    assert problem(null="lam = 8", alpha=Fraction(1, 3)).levels == (Fraction(1, 3),)
    assert problem(alpha="exp(-3)").levels == (sympy.exp(-3),) * 2


@pytest.mark.parametrize(
    "alpha",
    ["0", "1", "5", "-0.1", "5%", 0.05, True, None, ["0.05"], ["0.1", "0.1", "0.1"], ["0.1", "2"], {}],
)
def test_a_level_that_is_none_is_refused(alpha: object) -> None:
    with pytest.raises(InputError) as caught:
        problem(alpha=alpha)
    assert caught.value.key == "problem.alpha"


def test_two_levels_need_two_limits() -> None:
    with pytest.raises(InputError, match="1 limit"):
        problem(null="lam <= 8", alpha=("0.02", "0.05"))


def test_the_number_of_observations_is_whole() -> None:
    assert problem(n="10").n == problem(n=10).n == 10
    for n in (0, -1, "0", 10.0, "10.0", "ten", True, None, "1e3", "", 10**18, "9" * 30, "٣"):
        with pytest.raises(InputError) as caught:
            problem(n=n)
        assert caught.value.key == "problem.n"


def test_a_problem_can_be_hashed_and_compared() -> None:
    assert problem() == problem()
    assert hash(problem()) == hash(problem())


@given(st.sampled_from(list(Form)), st.fractions(-9, 9), st.fractions(-9, 9), st.fractions(-9, 9), st.booleans())
def test_a_value_is_in_the_null_or_in_the_alternative(form, a, b, value, null_below) -> None:
    assume(a < b)
    limits = (a, b) if form in (Form.OUTSIDE, Form.INTERVAL) else (a,)
    null = Hypothesis(form, limits, null_below)
    beyond = {
        Form.ONE_SIDED: value > a if null_below else value < a,
        Form.OUTSIDE: a < value < b,
        Form.INTERVAL: not a <= value <= b,
        Form.POINT: value != a,
    }
    assert null.holds_at(value) is not beyond[form]
    assert all(null.holds_at(limit) for limit in limits)
