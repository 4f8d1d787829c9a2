"""The count of agreeing digits."""

import math
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from verify.arithmetic.agreement import DOUBLE_DIGITS, digits_on_scale, significant_digits, worst_error
from verify.arithmetic.enclosure import Enclosure

doubles = st.floats(min_value=1e-200, max_value=1e200)
rationals = st.fractions(min_value=Fraction(1, 10**6), max_value=10**6)


@given(doubles)
def test_a_double_agrees_with_itself(x):
    assert significant_digits(x, Enclosure.of(Fraction(x))) == DOUBLE_DIGITS


@given(rationals)
def test_the_nearest_double_agrees_to_at_least_fifteen_digits(truth):
    assert significant_digits(float(truth), Enclosure.of(truth)) >= 15


@given(rationals, st.integers(1, 14), st.sampled_from([-1, 1]))
def test_an_error_in_digit_k_leaves_k_digits(truth, k, sign):
    value = float(truth * (1 + sign * Fraction(3, 10 ** (k + 1))))
    assert significant_digits(value, Enclosure.of(truth)) == k


@given(rationals, rationals)
def test_the_count_is_the_largest_that_the_definition_allows(value, truth):
    k = significant_digits(float(value), Enclosure.of(truth))
    error = worst_error(float(value), Enclosure.of(truth))
    assert k == 0 or error <= truth / 10**k
    assert k == DOUBLE_DIGITS or error > truth / 10 ** (k + 1)


@given(doubles, rationals, rationals, rationals)
def test_a_wider_enclosure_never_agrees_to_more(value, a, b, wider):
    low, high = min(a, b), max(a, b)
    narrow, wide = Enclosure(low, high), Enclosure(min(low, wider), max(high, wider))
    assert significant_digits(value, wide) <= significant_digits(value, narrow)


@given(rationals, rationals)
def test_the_sign_of_both_does_not_matter(value, truth):
    other = significant_digits(-float(value), Enclosure.of(-truth))
    assert significant_digits(float(value), Enclosure.of(truth)) == other


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_what_is_no_number_agrees_to_no_digit(value):
    assert significant_digits(value, Enclosure.of(1)) == 0
    assert digits_on_scale(value, Enclosure.of(1), Fraction(10**20)) == 0


def test_zero_has_no_significant_digits():
    assert significant_digits(0.0, Enclosure.of(0)) == DOUBLE_DIGITS
    assert significant_digits(1e-300, Enclosure.of(0)) == 0
    assert significant_digits(0.0, Enclosure(Fraction(-1), Fraction(1))) == 0


def test_a_scale_shifts_the_count():
    truth = Enclosure.of(Fraction(1, 2))
    assert digits_on_scale(0.5004, truth, Fraction(1)) == 3
    assert digits_on_scale(0.5004, truth, Fraction(1000)) == 6
