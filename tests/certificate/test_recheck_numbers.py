"""The rechecker's intervals contain exact results, and its functions what mpmath computes with more digits."""

from __future__ import annotations

import operator
from collections.abc import Callable, Iterator
from decimal import Decimal
from fractions import Fraction
from typing import Any

import mpmath
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.certificate import recheck

DIGITS = 40
mp = mpmath.MPContext()
mp.dps = 4 * DIGITS

fractions = st.fractions(min_value=-(10**6), max_value=10**6, max_denominator=10**6)
positive = st.fractions(min_value=Fraction(1, 1000), max_value=400, max_denominator=1000)
pairs = st.tuples(fractions, fractions).map(sorted)


@pytest.fixture(autouse=True)
def _digits() -> Iterator[None]:
    before = recheck.down.prec
    recheck.down.prec = recheck.up.prec = DIGITS
    recheck.work["left"] = 10**12
    yield
    recheck.down.prec = recheck.up.prec = before
    recheck.work["left"] = recheck.LIMIT


def contains(found: Any, value: Any, width: float = 1e-30) -> bool:
    """Whether a narrow enclosure holds a number of mpmath."""
    low, high = (mp.mpf(end.numerator) / end.denominator for end in recheck.ends(found))
    slack = abs(value) * mp.mpf(10) ** (-3 * DIGITS)
    return bool(low - slack <= value <= high + slack and high - low <= width * max(1, abs(value)))


def real(x: Fraction) -> Any:
    return mp.mpf(x.numerator) / x.denominator


@pytest.mark.parametrize("operation", [operator.add, operator.sub, operator.mul, operator.truediv])
@settings(max_examples=60, deadline=None)
@given(x=pairs, y=pairs, u=st.fractions(0, 1), v=st.fractions(0, 1))
def test_operations_contain_the_results_of_all_points(
    operation: Callable[[Any, Any], Any], x: list[Fraction], y: list[Fraction], u: Fraction, v: Fraction
) -> None:
    one, two = recheck.hull(x[0], x[1]), recheck.hull(y[0], y[1])
    a, b = x[0] + u * (x[1] - x[0]), y[0] + v * (y[1] - y[0])
    if operation is operator.truediv and y[0] <= 0 <= y[1]:
        with pytest.raises(recheck.ImpreciseError):
            operation(one, two)
        return
    low, high = recheck.ends(operation(one, two))
    assert low <= operation(a, b) <= high
    assert recheck.ends(-one) == (-recheck.ends(one)[1], -recheck.ends(one)[0])


@settings(max_examples=60, deadline=None)
@given(x=fractions, y=fractions)
def test_comparisons_are_right_or_left_open(x: Fraction, y: Fraction) -> None:
    one = recheck.interval(x)
    try:
        assert recheck.less(one, y) == (x < y)
    except recheck.ImpreciseError:
        assert abs(x - y) <= Fraction(1, 10**20)


FUNCTIONS: dict[str, tuple[Callable[..., Any], Callable[..., Any]]] = {
    "exp": (lambda x: recheck.exp(x - 200), lambda x: mp.exp(x - 200)),
    "log": (recheck.log, mp.log),
    "sqrt": (recheck.sqrt, mp.sqrt),
    "gamma": (lambda x: recheck.log(recheck.gamma(x)), mp.loggamma),
    "Phi": (lambda x: recheck.normal_cdf((x - 200) / 10), lambda x: mp.erfc((200 - x) / 10 / mp.sqrt(2)) / 2),
}


@pytest.mark.parametrize("name", FUNCTIONS)
@settings(max_examples=40, deadline=None)
@given(x=positive)
def test_functions_contain_what_mpmath_computes(name: str, x: Fraction) -> None:
    mine, other = FUNCTIONS[name]
    assert contains(mine(x), other(real(x)))


@settings(max_examples=40, deadline=None)
@given(a=positive, x=positive)
def test_the_incomplete_gamma_function_contains_what_mpmath_computes(a: Fraction, x: Fraction) -> None:
    found = recheck.gamma_law(a, Fraction(1)).below(x)
    assert contains(found[0], mp.gammainc(real(a), 0, real(x), regularized=True))
    assert contains(found[1], real(a) * mp.gammainc(real(a) + 1, 0, real(x), regularized=True))


class Rough:
    """A context whose logarithm is a poor guess."""

    def __init__(self, context: Any) -> None:
        object.__setattr__(self, "context", context)

    def __getattr__(self, name: str) -> Any:
        return getattr(self.context, name)

    def __setattr__(self, name: str, value: Any) -> None:
        setattr(self.context, name, value)

    def ln(self, x: Decimal) -> Decimal:
        return round(self.context.ln(x), 2)


@settings(max_examples=40, deadline=None)
@given(x=positive)
def test_a_logarithm_is_right_whatever_the_guess(x: Fraction) -> None:
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(recheck, "down", Rough(recheck.down))
        assert contains(recheck.log(x), mp.log(real(x)), 1e-4)


@settings(max_examples=20, deadline=None)
@given(a=positive, places=st.integers(30, 60))
def test_remainders_are_counted(a: Fraction, places: int) -> None:
    """Where the first term left out is as large as the last digit, and where the tail of the gamma function is seen."""
    x = Fraction(1, 10**places)
    low, high = recheck.ends(recheck.series(a, x) * a)
    assert low <= 1 + x / (a + 1) <= high
    X, scale = recheck.gamma_scale.__wrapped__(a, 1)
    assert contains(scale, mp.exp(mp.loggamma(real(a)) - real(a) * mp.log(real(X)) + real(X)), 1e-3)


def test_long_numbers_and_roots_of_fractions() -> None:
    assert contains(recheck.pi(DIGITS), mp.pi)
    assert recheck.sqrt(Fraction(9, 16)) == Fraction(3, 4)
    assert recheck.power(Fraction(9, 4), Fraction(-3, 2)) == Fraction(8, 27)
    assert contains(recheck.gamma(Fraction(5001)) / recheck.gamma(Fraction(5000)), mp.mpf(5000))
    assert contains(recheck.log(recheck.exp(recheck.interval(Fraction(10**6 + 1, 3)))), real(Fraction(10**6 + 1, 3)))
