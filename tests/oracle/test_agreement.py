"""Which numbers agree with a proven solution, and what the message says when they do not."""

from __future__ import annotations

import re
from decimal import Decimal
from fractions import Fraction
from functools import cache
from pathlib import Path

import mpmath
import numpy
import pytest

import verify
from verify.errors import InputError, UndecidedError
from verify.oracle import answers, assert_cutoffs
from verify.oracle.agreement import number
from verify.oracle.answers import Answers

DENSITIES = {
    "beads": ("exp(-lam)*lam**x/factorial(x)", "integers >= 0", "lam", "lam > 0"),
    "gaps": ("exp(-x/theta)/theta", "reals > 0", "theta", "theta > 0"),
    "coin": ("p**x*(1 - p)**(1 - x)", "integers 0..1", "p", "0 < p < 1"),
}


def density(name: str) -> verify.Density:
    formula, support, parameter, space = DENSITIES[name]
    return verify.Density(formula, variable="x", support=support, parameter=parameter, space=space)


@cache
def solution(name: str, null: str, alpha: str, n: int):
    return verify.solve(verify.Problem(density(name), null=null, alpha=alpha, n=n), digits=30)


def window():
    return solution("beads", "lam <= 8 or lam >= 12", "0.05", 10)


def gaps():
    return solution("gaps", "theta <= 2 or theta >= 3", "0.05", 12)


RIGHT = {"c1": 94, "c2": 103, "gamma1": 0.0867146646010, "gamma2": 0.514744492090}


@pytest.mark.parametrize(
    "mine",
    [
        RIGHT,
        (94, 103, 0.0867146646010, 0.514744492090),
        {**RIGHT, "c1": 94.0, "gamma1": Decimal("0.0867146646010")},
        {**RIGHT, "c1": "94", "gamma2": Fraction(514744492090, 10**12)},
        {**RIGHT, "c1": 94 + 1e-9},
    ],
)
def test_numbers_that_agree(mine: object) -> None:
    assert_cutoffs(mine, window())


def test_numbers_of_numpy() -> None:
    assert_cutoffs(numpy.array([94, 103, 0.0867146646010, 0.514744492090]), window())
    assert_cutoffs({**RIGHT, "c1": numpy.int64(94)}, window())


def test_another_writing_of_the_same_test_agrees() -> None:
    """At level 11/1024 ten fair tosses reject from 9 on: fraction 0 at 8, or fraction 1 at 9."""
    exact = solution("coin", "p <= 1/2", "11/1024", 10)
    assert_cutoffs({"c": 8, "gamma": 0}, exact)
    assert_cutoffs({"c": 9, "gamma": 1}, exact)
    with pytest.raises(AssertionError):
        assert_cutoffs({"c": 9, "gamma": 0}, exact)


@pytest.mark.parametrize(
    ("change", "says"),
    [
        ({"c1": 95}, "+1 support point"),
        ({"c2": 110}, "+7 support points"),
        ({"c1": 94.4}, "not a support point, +0.4 steps off"),
        ({"gamma1": 0.0867}, "4 decimal places, 8 asked for"),
        ({"gamma2": float("nan")}, "not a number"),
        ({"gamma1": float("inf")}, "not a number"),
        ({"gamma1": None}, "missing"),
        ({"c1": 95, "c2": 102}, "(closed-for-open)"),
        ({"gamma1": 0.514744492090, "gamma2": 0.0867146646010}, "(fractions-exchanged)"),
        ({"c1": 103, "c2": 94}, "support point"),
    ],
)
def test_numbers_that_differ(change: dict[str, object], says: str) -> None:
    with pytest.raises(AssertionError) as caught:
        assert_cutoffs({**RIGHT, **change}, window())
    message = str(caught.value)
    assert says in message
    assert "lam <= 8 or lam >= 12, alpha = 1/20, n = 10" in message
    assert "0.514744492090" in message


def test_fewer_digits_may_be_asked_for() -> None:
    assert_cutoffs({**RIGHT, "gamma1": 0.0867, "gamma2": 0.5147}, window(), digits=4)


def test_a_continuous_law_is_held_to_significant_digits() -> None:
    right = (float(gaps().c1.mid), float(gaps().c2.mid))
    assert_cutoffs(right, gaps(), digits=14)
    with pytest.raises(AssertionError, match="6 significant digits, 8 asked for"):
        assert_cutoffs((right[0] * (1 + 3e-7), right[1]), gaps())


def test_the_problem_may_be_a_problem_or_a_file(tmp_path: Path) -> None:
    assert_cutoffs(RIGHT, window().problem)
    root = Path(__file__).parents[2]
    assert_cutoffs(RIGHT, root / "casebook/demo/lot-release.case.toml")


@pytest.mark.parametrize(
    "mine",
    [{"k": 3}, (1, 2, 3), 5, "94", {**RIGHT, "c1": "sqrt(2)"}, {**RIGHT, "c1": [1]}, {**RIGHT, "c1": "x"}],
)
def test_numbers_that_cannot_be_used(mine: object) -> None:
    with pytest.raises(InputError):
        assert_cutoffs(mine, window())


@pytest.mark.parametrize("asked", [5, "no-such.case.toml", None])
def test_problems_that_cannot_be_used(asked: object) -> None:
    with pytest.raises(InputError):
        assert_cutoffs(RIGHT, asked)


def test_no_solution_is_handed_out_for_a_refuted_density() -> None:
    wrong = verify.Density("2*exp(-lam)*lam**x/factorial(x)", "x", "integers >= 0", "lam", "lam > 0")
    with pytest.raises(UndecidedError, match=r"normalisation: refuted.*at lam = 5/7 it is 2"):
        Answers(Path())(wrong, null="lam <= 8", alpha="0.05", n=1)


def test_answers_are_kept_by_what_is_asked() -> None:
    answers = Answers(Path())
    question = {"null": "p <= 1/2", "alpha": "0.05", "n": 10}
    first = answers(density("coin"), **question)
    assert answers(density("coin"), **question) is first
    assert answers(verify.Problem(density("coin"), **question)) is first
    assert answers(density("coin"), digits=40, **question).digits == 40
    with pytest.raises(InputError):
        answers(first.problem, n=5)


def test_numbers_are_taken_without_rounding() -> None:
    third = Fraction(1, 3)
    with mpmath.workdps(40):
        assert abs(number(-mpmath.mpf(1) / 3, "c1") + third) < Fraction(1, 10**39)
    for kind in (numpy.longdouble, numpy.float32, numpy.float64):
        given = kind(1) / kind(3)
        assert abs(number(given, "c1") - third) <= Fraction(*numpy.finfo(kind).eps.as_integer_ratio())
        assert number(kind("nan"), "c1") is None
        assert number(kind("inf"), "c1") is None
    assert number(Decimal("NaN"), "c1") is None
    assert number(mpmath.mpf(3) / 4 * 2**100, "c1") == 3 * 2**98


def test_the_size_is_that_of_the_numbers_as_they_are() -> None:
    """With a level next to 1 the window is narrow: rounded to 8 digits, both its ends would be one point."""
    narrow = solution("gaps", "theta = 2", "9999999/10000000", 10_000)
    mine = (float(narrow.c1.mid) * (1 + 1.5e-8), float(narrow.c2.mid) * (1 + 1.5e-8))
    with pytest.raises(AssertionError) as failure:
        assert_cutoffs(mine, narrow, digits=8)
    assert "7 significant digits, 8 asked for" in str(failure.value)
    assert "truncated" not in str(failure.value)
    assert "size is 1 " not in str(failure.value)


def test_digits_cut_off_by_the_developer_are_named() -> None:
    short = tuple(int(end.mid * 10_000) / 10_000 for end in (gaps().c1, gaps().c2))
    with pytest.raises(AssertionError, match=r"cut off instead of rounded \(truncated\)"):
        assert_cutoffs(short, gaps())


@pytest.mark.parametrize(
    ("digits", "says"),
    [
        (0, "0 digits; ask for 1 to 9990"),
        (-3, "-3 digits"),
        (True, "True digits"),
        ("8", "'8' digits"),
        (2.5, "2.5 digits"),
        (10_000, "10000 digits"),
        (30, "30 digits asked for of a solution with 30; prove more of them: digits=40"),
    ],
)
def test_digits_that_cannot_be_compared(digits: object, says: str) -> None:
    with pytest.raises(InputError, match=re.escape(says)):
        assert_cutoffs(RIGHT, window(), digits=digits)


def test_a_complaint_shows_no_frame_of_ours() -> None:
    for wrong in (lambda: assert_cutoffs({"lower": 1}, window()), lambda: Answers(Path())("no-such.case.toml")):
        with pytest.raises(InputError) as failure:
            wrong()
        assert len(failure.traceback.filter(failure)) == 2


def test_problems_about_one_density_share_a_derivation(monkeypatch: pytest.MonkeyPatch) -> None:
    first = answers.proven(verify.Problem(density("gaps"), "theta = 2", "0.05", 3), 15)
    monkeypatch.setattr(answers, "derive", None)
    again = answers.proven(verify.Problem(density("gaps"), "theta = 5", "0.05", 3), 15)
    assert again.derivation is first.derivation
