"""Supports and parameter spaces."""

from __future__ import annotations

from fractions import Fraction

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.errors import InputError
from verify.problem.numbers import exact
from verify.problem.space import parse_space
from verify.problem.support import parse_support

T = sympy.Symbol("t", positive=True)
NAMES = {"m": sympy.Integer(10), "a": sympy.Rational(5, 2), "t": T}
INF = sympy.oo


@pytest.mark.parametrize(
    ("text", "kind", "lower", "upper", "closed"),
    [
        ("integers", "integers", -INF, INF, (False, False)),
        ("integers >= 0", "integers", 0, INF, (True, False)),
        ("integers > 0", "integers", 1, INF, (True, False)),
        ("integers ≥ a", "integers", 3, INF, (True, False)),
        ("integers <= -1", "integers", -INF, -1, (False, True)),
        ("integers 0..m", "integers", 0, 10, (True, True)),
        ("integers m-1 .. 2*m", "integers", 9, 20, (True, True)),
        ("integers 1..", "integers", 1, INF, (True, False)),
        ("nonnegative integers", "integers", 0, INF, (True, False)),
        ("positive integers", "integers", 1, INF, (True, False)),
        ("reals", "reals", -INF, INF, (False, False)),
        ("reals > 0", "reals", 0, INF, (False, False)),
        ("positive reals", "reals", 0, INF, (False, False)),
        ("reals >= a", "reals", sympy.Rational(5, 2), INF, (True, False)),
        ("reals < 0", "reals", -INF, 0, (False, False)),
        ("reals in (0, 1)", "reals", 0, 1, (False, False)),
        ("reals in [0,1)", "reals", 0, 1, (True, False)),
        ("reals in [-1, oo)", "reals", -1, INF, (True, False)),
        ("reals in (0, t)", "reals", 0, T, (False, False)),
        ("reals in (log(2), sqrt(m))", "reals", sympy.log(2), sympy.sqrt(10), (False, False)),
    ],
)
def test_a_support_is_read(
    text: str, kind: str, lower: object, upper: object, closed: tuple[bool, bool]
) -> None:
    support = parse_support(text, NAMES)
    assert (support.kind, support.lower, support.upper) == (kind, lower, upper)
    assert (support.lower_closed, support.upper_closed) == closed
    assert support.text == text


@pytest.mark.parametrize(
    "text",
    ["", "whole numbers", "integers 5..0", "integers 3..3", "reals in (1, 0)", "reals in [1, 1]",
     "reals in 0, 1", "integers >= b", "reals > λ", "integers >= 0 and", "reals 0..1", "integersx",
    "reals in (0, 1",
     "integers !", "reals >= __import__('os')", "integers in {1, 2}"],
)  # fmt: skip
def test_what_is_no_support_is_refused(text: str) -> None:
    with pytest.raises(InputError, match=r"^density\.support: "):
        parse_support(text, NAMES)


def test_membership_is_decided_exactly() -> None:
    unit = parse_support("reals in [0, sqrt(2))", {})
    assert unit.contains(Fraction(0))
    assert unit.contains(Fraction("1.4142135623730950488"))
    assert not unit.contains(exact("sqrt(2)"))
    whole = parse_support("integers 0..3", {})
    assert [k for k in range(-2, 6) if whole.contains(Fraction(k))] == list(whole.points) == [0, 1, 2, 3]
    assert not whole.contains(Fraction(1, 2))


@settings(max_examples=50, deadline=None)
@given(st.fractions(-9, 9, max_denominator=9), st.sampled_from(["<", "<=", ">", ">="]))
def test_ends_of_integers_are_whole_and_inside(bound: Fraction, sign: str) -> None:
    support = parse_support(f"integers {sign} {bound}", {})
    compare = {"<": Fraction.__lt__, "<=": Fraction.__le__, ">": Fraction.__gt__, ">=": Fraction.__ge__}[sign]
    for k in range(-11, 12):
        assert support.contains(Fraction(k)) == compare(Fraction(k), bound)


@pytest.mark.parametrize(
    ("text", "lower", "upper"),
    [
        ("p > 0", 0, INF),
        ("0 < p", 0, INF),
        ("0 < p < 1", 0, 1),
        ("1 > p > 0", 0, 1),
        ("0 ≤ p ≤ 1", 0, 1),
        ("p < 0", -INF, 0),
        ("reals", -INF, INF),
        ("p in reals", -INF, INF),
        ("p in (0, 1)", 0, 1),
        ("(0, m)", 0, 10),
        ("p in [0, oo)", 0, INF),
        ("p > a", sympy.Rational(5, 2), INF),
    ],
)
def test_a_space_is_read(text: str, lower: object, upper: object) -> None:
    space = parse_space(text, "p", {"m": sympy.Integer(10), "a": sympy.Rational(5, 2)})
    assert (space.lower, space.upper, space.text) == (lower, upper, text)
    assert not any(space.contains(Fraction(int(end))) for end in (space.lower, space.upper) if end.is_Integer)


@pytest.mark.parametrize(
    "text", ["", "p", "q > 0", "p = 1", "0 < p > 1", "1 < p < 0", "p != 0", "p in (1, 1)", "p in", "0 < 2*p"]
)
def test_what_is_no_space_is_refused(text: str) -> None:
    with pytest.raises(InputError, match=r"^density\.space: "):
        parse_space(text, "p", {})
