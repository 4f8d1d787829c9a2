"""The whole comparison, over laws, forms and injected failures."""

import json
import time
from math import nan

import pytest
from build import DENSITIES, solved

from verify.comparison import compare as module
from verify.comparison.compare import compare
from verify.comparison.question import Answer
from verify.errors import NotAttempted

UNIT = ("binomial", "bernoulli", "geometric", "geometric from 1", "negative binomial")
FORMS = ("one-sided", "outside", "interval", "point")


def null(name: str, form: str) -> str:
    low, high = ("1/4", "1/2") if name in UNIT else ("1", "2")
    return {
        "one-sided": f"t <= {low}",
        "outside": f"t <= {low} or t >= {high}",
        "interval": f"{low} <= t <= {high}",
        "point": f"t = {low}",
    }[form]


@pytest.mark.parametrize("form", FORMS)
@pytest.mark.parametrize("name", DENSITIES)
def test_both_routes_agree_on_an_ordinary_problem(name, form):
    comparison = compare(solved(name, null(name, form), n=1 if name == "normal variance" else 2), seconds=30)
    assert [flag for flag in comparison.flags if flag.kind != "ill-conditioned"] == []
    for opinion in comparison.opinions:
        assert all(opinion.numbers.values()), opinion


def test_two_levels():
    assert compare(solved("poisson", "t <= 4 or t >= 9", ("0.02", "0.05"), n=3)).flags == ()


def test_the_other_one_sided_null():
    assert compare(solved("exponential rate", "t >= 2", n=3)).flags == ()
    assert compare(solved("poisson", "t >= 2", n=3)).flags == ()


def test_it_is_plain_data():
    told = json.loads(json.dumps(compare(solved("poisson", "t = 5")).as_json()))
    assert [opinion["route"] for opinion in told["opinions"]] == ["SciPy", "brute force"]
    assert told["opinions"][0]["numbers"]["c2"] == "10"
    assert told["flags"] == []


def test_a_level_below_the_doubles_is_not_attempted():
    comparison = compare(solved("poisson", "t = 5", "1e-400"))
    assert all(opinion.note.startswith("not attempted") for opinion in comparison.opinions)
    assert comparison.flags == ()


@pytest.fixture
def solution():
    return solved("poisson", "t = 5")


def _sleeps(ask):
    time.sleep(60)


def _raises(ask):
    raise ZeroDivisionError("injected")


def _declines(ask):
    raise NotAttempted("injected")


def _nan(ask):
    return Answer({"c1": 1.0, "c2": 10.0, "gamma1": nan, "gamma2": 0.3755806986759519})


def _one_off(ask):
    return Answer({"c1": 2.0, "c2": 10.0, "gamma1": 0.5, "gamma2": 0.3755806986759519})


def _sloppy(ask):
    return Answer({"c1": 1.0, "c2": 10.0, "gamma1": 0.6754, "gamma2": 0.3755806986759519})


def replaced(monkeypatch, solution, route, **limits):
    monkeypatch.setitem(module.ROUTES, "SciPy", route)
    return compare(solution, **limits)


@pytest.mark.parametrize(
    ("route", "kind", "number", "word"),
    [
        (_raises, "solver failed", "all", "ZeroDivisionError"),
        (_nan, "solver failed", "gamma1", "nan"),
        (_one_off, "cutoffs differ", "c1", "proved 1"),
        (_sloppy, "few digits", "gamma1", "3 digits"),
    ],
)
def test_an_injected_failure_is_flagged(monkeypatch, solution, route, kind, number, word):
    comparison = replaced(monkeypatch, solution, route)
    (flag,) = comparison.flags
    assert (flag.kind, flag.number, flag.route) == (kind, number, "SciPy")
    assert word in flag.text
    assert all(comparison.opinions[1].numbers.values())


def test_a_sleeping_route_is_killed_and_the_other_still_speaks(monkeypatch, solution):
    comparison = replaced(monkeypatch, solution, _sleeps, seconds=1.0)
    (flag,) = comparison.flags
    assert (flag.kind, flag.text) == ("solver failed", "SciPy: stopped after 1 s")
    assert comparison.opinions[1].numbers["c1"] == "1"


def test_a_route_may_decline(monkeypatch, solution):
    comparison = replaced(monkeypatch, solution, _declines)
    assert comparison.flags == ()
    assert comparison.opinions[0].note == "not attempted: injected"


def test_the_flag_says_which_route_is_off(monkeypatch, solution):
    (flag,) = replaced(monkeypatch, solution, _sloppy).flags
    assert flag.text.endswith("so SciPy is off")


def test_a_tie_is_called_one(monkeypatch):
    tied = solved("bernoulli", "t <= 1/2", "1/4", n=2)  # P(V = 2) = 1/4 exactly
    monkeypatch.setitem(module.ROUTES, "SciPy", lambda ask: Answer({"c": 1.0, "gamma": 0.0}))
    (flag,) = compare(tied).flags
    assert flag.kind == "cutoffs differ"
    assert "tie: the proved fraction there is 0 or 1 to double precision" in flag.text


def test_limits_that_almost_coincide_are_ill_conditioned():
    comparison = compare(solved("poisson", "5 <= t <= 5.00000001"))
    assert comparison.condition > 1e6
    assert any(flag.kind == "ill-conditioned" for flag in comparison.flags)


def test_a_lost_tail_names_its_cause():
    comparison = compare(solved("poisson", "t <= 5", "1e-17"))
    texts = [flag.text for flag in comparison.flags if flag.route == "SciPy"]
    assert any("poisson inherits the generic _isf" in text for text in texts)


@pytest.mark.parametrize(("null_text", "alpha"), [("t <= 2/5 or t >= 3/5", "1/20"), ("2/5 <= t <= 3/5", "19/20")])
def test_brute_force_sees_that_one_atom_solves_both_equations(null_text, alpha):
    comparison = compare(solved("bernoulli", null_text, alpha, n=10))  # c1 = c2 = 5
    assert comparison.flags == ()
    assert [comparison.opinions[1].numbers[name] for name in ("c1", "c2")] == ["5", "5"]


def test_a_mass_that_doubles_cannot_see_is_not_called_a_tie():
    comparison = compare(solved("poisson", "t <= 1e-50 or t >= 2e-50", "1/20", n=1))
    texts = [flag.text for flag in comparison.flags if flag.kind == "cutoffs differ"]
    assert texts
    assert all("too small beside the level" in text and "tie" not in text for text in texts)
