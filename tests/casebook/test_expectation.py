"""What passes and what does not: undecided never, refuted and unusable only where they are expected."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from verify.arithmetic.enclosure import Enclosure
from verify.casebook.expectation import CHECKS, GREEN, RED, judge
from verify.casebook.found import Found
from verify.casebook.outcome import STATUS, Outcome, Result, status_of, summary
from verify.errors import InputError
from verify.problem.keys import EXPECT_KEYS, NUMBER_NAMES

VERDICTS = (*GREEN, *RED, "undecided")
NEAR_TWO_THIRDS = Enclosure(Fraction(6666666666, 10**10), Fraction(6666666667, 10**10))


def test_every_key_of_the_table_is_checked() -> None:
    assert set(EXPECT_KEYS.kinds) == {*CHECKS, *NUMBER_NAMES}


@pytest.mark.parametrize("found", VERDICTS)
@pytest.mark.parametrize("expected", [None, *VERDICTS])
def test_verdicts(found: str, expected: str | None) -> None:
    outcome, messages = judge({} if expected is None else {"verdict": expected}, Found(found, error="why", key="k"))
    green = found in GREEN if expected is None else found == expected
    assert (outcome is Outcome.PASS) == (green and found != "undecided")
    assert bool(messages) == (outcome is not Outcome.PASS)
    if found == "undecided":
        assert outcome is Outcome.UNDECIDED


@given(st.dictionaries(st.sampled_from(["status", "step", "grade", "law", "c1"]), st.sampled_from(["1", "3"])))
def test_undecided_never_passes(expect: dict[str, str]) -> None:
    assert judge(expect, Found("undecided"))[0] is Outcome.UNDECIDED


@pytest.mark.parametrize(
    ("expect", "right", "wrong"),
    [
        ({"error": "a level"}, Found("unusable", error="problem.alpha: a level outside"), Found("proved")),
        ({"key": "problem.n"}, Found("unusable", key="problem.n"), Found("unusable", key="problem.alpha")),
        ({"step": "support"}, Found("refuted", weak=(("support", "w"),)), Found("refuted", weak=(("law", "w"),))),
        ({"witness": "x = 2"}, Found("refuted", weak=(("law", "at x = 2"),)), Found("refuted", weak=(("law", ""),))),
        ({"status": 1}, Found("differs"), Found("proved")),
        ({"status": "0"}, Found("proved"), Found("refuted")),
        ({"grade": "proved"}, Found("proved", grade="proved"), Found("enclosed", grade="enclosed")),
        ({"law": "gamma"}, Found("proved", law="gamma"), Found("proved", law="normal")),
        ({"law": "gamma(shape = 2)"}, Found("proved", law="gamma", law_text="gamma(shape=2)"), Found("proved")),
        ({"statistic": "x**2"}, Found("proved", statistic="x ** 2"), Found("proved", statistic="x")),
        ({"form": "point null"}, Found("proved", form="point null"), Found("proved", form="one-sided")),
        ({"verdict": "differs", "slips": ["n-twice"]}, Found("differs", slips=("n-twice", "x")), Found("differs")),
        ({"verdict": "differs", "slips": []}, Found("differs"), Found("differs", slips=("n-twice",))),
        ({"flags": "few digits"}, Found("proved", flags=("few digits",)), Found("proved", flags=("solver failed",))),
    ],
)  # fmt: skip
def test_keys(expect: dict[str, object], right: Found, wrong: Found) -> None:
    assert judge(expect, right) == (Outcome.PASS, ())
    outcome, messages = judge(expect, wrong)
    assert outcome is not Outcome.PASS
    assert messages


@pytest.mark.parametrize(
    ("text", "passes"),
    [("0.667", True), ("0.666", True), ("0.66666666", True), ("2/3", True),
     ("0.668", False), ("0.665", False), ("1/3", False)],
)  # fmt: skip
def test_numbers_are_held_to_the_digits_printed(text: str, passes: bool) -> None:
    outcome, messages = judge({"gamma": text}, Found("proved", numbers={"gamma": NEAR_TWO_THIRDS}))
    assert (outcome is Outcome.PASS) == passes
    assert passes or messages[0].text == f"expected {text}, found 0.666666666"


def test_a_number_that_the_test_does_not_have() -> None:
    outcome, messages = judge({"c1": "3"}, Found("proved", numbers={"c": Enclosure.of(3)}))
    assert outcome is Outcome.DIFFERS
    assert "this test has c" in str(messages[0])


@pytest.mark.parametrize("expect", [{"verdict": "agree"}, {"verdict": "green"}, {"c": "sqrt(2)"}])
def test_an_expectation_that_cannot_be_used(expect: dict[str, str]) -> None:
    with pytest.raises(InputError):
        judge(expect, Found("proved", numbers={"c": Enclosure.of(3)}))


@given(st.lists(st.sampled_from(Outcome)))
def test_the_status_is_0_only_when_every_case_passed(outcomes: list[Outcome]) -> None:
    results = [Result(str(i), str(i), outcome) for i, outcome in enumerate(outcomes)]
    assert (status_of(results) == 0) == all(outcome is Outcome.PASS for outcome in outcomes)
    assert status_of(results) == status_of(results[::-1])
    assert {outcome for outcome, status in STATUS.items() if status == 0} == {Outcome.PASS}
    assert summary(results).startswith(f"{len(results)} case")
