"""Densities: symbols, constants, kernels and tables of weights."""

from __future__ import annotations

import pickle
from fractions import Fraction
from typing import Any

import pytest
import sympy

from verify.errors import InputError
from verify.problem.density import Density

GOOD: dict[str, Any] = {
    "formula": "binomial(m, x)*p**x*(1 - p)**(m - x)", "variable": "x", "support": "integers 0..m",
    "parameter": "p", "space": "0 < p < 1", "constants": {"m": "10"},
}  # fmt: skip


def density(**changes: Any) -> Density:
    merged = {**GOOD, **changes}
    return Density(**{name: value for name, value in merged.items() if value is not None})


def test_constants_are_put_in_exactly() -> None:
    d = density()
    assert d.expr == sympy.binomial(10, d.x) * d.t**d.x * (1 - d.t) ** (10 - d.x)
    assert list(d.parsed_support.points) == list(range(11))
    normal = Density(
        "exp(-(x - t)**2/(2*s**2))/(s*sqrt(2*pi))", "x", "reals", "t", "reals", {"s": "sqrt(2)/3"}
    )
    assert normal.constant_values == {"s": sympy.sqrt(2) / 3}
    assert normal.expr.free_symbols == {normal.x, normal.t}
    assert Density("s*exp(-s*x*t)*t", "x", "reals > 0", "t", "t > 0", {"s": Fraction(2, 3)}).expr.has(
        sympy.Rational(2, 3)
    )


@pytest.mark.parametrize(
    ("support", "space", "x_is", "t_is"),
    [
        ("integers >= 0", "t > 0", "nonnegative integer", "positive real"),
        ("integers >= 1", "0 < t < 1", "positive integer", "positive real"),
        ("integers", "reals", "integer", "real"),
        ("integers < 0", "t < 0", "negative integer", "negative real"),
        ("reals > 0", "t > 1", "positive real", "positive real"),
        ("reals >= 0", "-1 < t < 1", "nonnegative real", "real"),
        ("reals in (0, 1)", "t <= 0", "positive real", "negative real"),
        ("reals <= 0", "t > 0", "nonpositive real", "positive real"),
        ("reals > t", "t > 0", "positive real", "positive real"),
        ("reals", "t > 0", "real", "positive real"),
    ],
)
def test_symbols_carry_what_support_and_space_justify(support: str, space: str, x_is: str, t_is: str) -> None:
    d = Density("exp(t*x)", "x", support, "t", space)
    for symbol, words in ((d.x, x_is), (d.t, t_is)):
        assert all(getattr(symbol, f"is_{word}") for word in words.split())
        for word in ("positive", "negative", "nonnegative", "nonpositive"):
            if not any(word.removeprefix("non") in each for each in words.split()) and words.startswith(
                "real"
            ):
                assert getattr(symbol, f"is_{word}") is None


@pytest.mark.parametrize(
    ("changes", "key"),
    [
        ({"formula": None}, "density"),
        ({"kernel": "p**x"}, "density"),
        ({"variable": ""}, "density.variable"),
        ({"variable": "2x"}, "density.variable"),
        ({"variable": "p"}, "density"),
        ({"parameter": "m"}, "density"),
        ({"parameter": "lambda"}, "density.parameter"),
        ({"parameter": "λ"}, "density.parameter"),
        ({"parameter": "pi"}, "density.parameter"),
        ({"support": "whole"}, "density.support"),
        ({"space": "0 < q < 1"}, "density.space"),
        ({"constants": {"m": 0.5}}, "density.constants.m"),
        ({"constants": {"m": "x"}}, "density.constants.m"),
        ({"constants": []}, "density.constants"),
        ({"constants": {}}, "density.support"),
        ({"constants": {"m": "10**9"}, "formula": "factorial(m)*p**x"}, "density.formula"),
        ({"formula": "q**x"}, "density.formula"),
        ({"formula": "binomial(10, x)"}, "density.formula"),
        ({"formula": 5}, "density.formula"),
        ({"formula": None, "kernel": "p**x", "support": "integers >= 0"}, "density.kernel"),
        ({"formula": None, "kernel": "p**x", "support": "reals in (0, 1)"}, "density.kernel"),
        ({"formula": None, "kernel": "p**x", "support": "integers 0..10**9"}, "density.kernel"),
        ({"formula": None, "weights": ["1"] * 10}, "density.weights"),
        ({"formula": None, "weights": ["1"] * 10 + ["-1"]}, "density.weights"),
        ({"formula": None, "weights": ["1"] * 10 + ["pi"]}, "density.weights"),
        ({"formula": None, "weights": ["1"] + ["0"] * 10}, "density.weights"),
        ({"formula": None, "weights": "111"}, "density.weights"),
        ({"formula": None, "weights": ["1"] * 11, "space": "reals"}, "density.weights"),
    ],
)
def test_each_mistake_names_its_key(changes: dict[str, Any], key: str) -> None:
    with pytest.raises(InputError) as caught:
        density(**changes)
    assert caught.value.key == key


def test_a_kernel_is_a_density_without_its_factor() -> None:
    d = density(formula=None, kernel="binomial(m, x)*p**x")
    assert d.is_kernel
    assert d.expr == sympy.binomial(10, d.x) * d.t**d.x
    assert d.table is None


def test_a_table_of_weights_is_a_power_series_family() -> None:
    d = Density(
        weights=["1", 3, "3/2", "0.25"], variable="x", support="integers 2..5", parameter="t", space="t > 0"
    )
    assert d.table == (1, 3, Fraction(3, 2), Fraction(1, 4))
    assert d.is_kernel
    assert d.expr.has(d.t**d.x)


def test_a_density_can_be_compared_hashed_and_sent_to_another_process() -> None:
    assert density() == density() != density(constants={"m": "11"})
    assert hash(density()) == hash(density())
    assert pickle.loads(pickle.dumps(density())).expr == density().expr
