"""Comparing exact numbers."""

from __future__ import annotations

from fractions import Fraction

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.errors import UndecidedError
from verify.problem import order
from verify.problem.numbers import exact
from verify.problem.order import compare


@pytest.mark.parametrize(
    ("a", "b", "expected"),
    [
        ("sqrt(2)", "1.4142135623730950488", 1),
        ("sqrt(2)", "1.4142135623730950489", -1),
        ("1/3", "0.3333333333333333333333333333333333333333", 1),
        ("log(8)", "3*log(2)", 0),
        ("sqrt(3 + 2*sqrt(2))", "1 + sqrt(2)", 0),
        ("sqrt(2)*sqrt(3)", "sqrt(6)", 0),
        ("exp(1)", "2.71828182845904523536028747135266249775724709369995", 1),
        ("exp(-exp(10))", "0", 1),
        ("exp(pi)", "pi**exp(1)", 1),
        ("exp(pi*sqrt(163))", "262537412640768744", -1),  # Ramanujan's constant, from memory
    ],
)
def test_the_order_of_two_numbers_is_decided(a: str, b: str, expected: int) -> None:
    assert compare(exact(a), exact(b)) == expected
    assert compare(exact(b), exact(a)) == -expected


def test_infinite_ends_compare() -> None:
    assert compare(sympy.oo, Fraction(10**9)) == 1
    assert compare(-sympy.oo, sympy.sqrt(2)) == -1
    assert compare(sympy.oo, sympy.oo) == 0


def test_what_is_not_decided_is_said(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(order, "PRECISIONS", (30,))
    with pytest.raises(UndecidedError, match="30 digits"):
        compare(sympy.pi, exact(str(sympy.pi.evalf(100))))


@settings(max_examples=50, deadline=None)
@given(st.integers(1, 10**6), st.integers(1, 40))
def test_a_root_lies_between_its_truncations(n: int, digits: int) -> None:
    low = Fraction(int(sympy.integer_nthroot(n * 100**digits, 2)[0]), 10**digits)
    assert compare(low, exact(f"sqrt({n})")) <= 0
    assert compare(low + Fraction(1, 10**digits), exact(f"sqrt({n})")) == 1
