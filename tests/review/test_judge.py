"""Claims without fractions: is the level kept, and would a larger region keep it too? An open answer is no answer."""

from fractions import Fraction
from math import comb

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from scipy import stats

from verify import Density, Problem, UndecidedError, derive, review
from verify.review import judge
from verify.review.judge import _outcome_by_level
from verify.review.verdict import Outcome

POISSON = Density(
    "exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0", parameter="lam", space="lam > 0"
)
BINOMIAL = Density(
    "binomial(10, x)*p**x*(1-p)**(10-x)", variable="x", support="integers 0..10", parameter="p", space="0 < p < 1"
)
DERIVED = {density: derive(density) for density in (POISSON, BINOMIAL)}


def judged(density, null, alpha, **numbers):
    return review(Problem(density, null, alpha, 1), derivation=DERIVED[density], digits=20, **numbers)


@pytest.mark.parametrize("c", range(10, 18))
@pytest.mark.parametrize(("alpha", "value"), [("0.0707", 0.0707), ("sqrt(2)/20", 2**0.5 / 20)])
def test_an_irrational_level_is_judged_like_a_rational_one(c, alpha, value) -> None:
    """SciPy's tails of a Poisson law of mean 8, none of which is near the level."""
    tail = stats.poisson(8).sf
    best = tail(c) <= value < tail(c - 1)
    found = judged(POISSON, "lam <= 8", alpha, c=str(c))
    assert found.verdict == ("agrees" if best else "differs")
    assert found.consequences.level_kept is bool(tail(c) <= value)


def test_a_tie_with_the_level_is_decided() -> None:
    """P(V >= 8) = 56/1024 for ten throws of a fair coin (45 + 10 + 1 of 1024 outcomes)."""
    assert judged(BINOMIAL, "p <= 1/2", "7/128", c="7").verdict == "agrees"
    loose = judged(BINOMIAL, "p <= 1/2", "7/128", c="8")
    assert loose.verdict == "differs"
    assert "the region that also rejects at V = 8 is within the level too" in loose.notes


@given(
    st.integers(0, 10),
    st.integers(0, 10),
    st.fractions(Fraction(1, 5), Fraction(4, 5), max_denominator=6),
    st.booleans(),
)
@settings(max_examples=25, deadline=None)
def test_levels_that_are_tails_are_told_from_those_a_little_less(c, wanted, p, less) -> None:
    """Every level here is exactly a tail of the law, or less than it by 1e-60."""

    def tail(k: int) -> Fraction:
        return sum((comb(10, j) * p**j * (1 - p) ** (10 - j) for j in range(k + 1, 11)), Fraction(0))

    level = tail(wanted) - (Fraction(1, 10**60) if less else 0)
    assume(0 < level < 1)
    found = judged(BINOMIAL, f"p <= {p}", str(level), c=str(c))
    best = tail(c) <= level and (c == 0 or tail(c - 1) > level)
    assert found.consequences.level_kept is (tail(c) <= level)
    assert found.verdict == ("agrees" if best else "differs")


@pytest.mark.parametrize(
    ("kept", "larger", "wrong_side", "outcome"),
    [
        (True, {}, False, Outcome.AGREES),
        (True, {"V = 1": False, "V = 9": False}, False, Outcome.AGREES),
        (True, {"V = 1": False, "V = 9": None}, False, Outcome.UNDECIDED),
        (True, {"V = 1": True, "V = 9": None}, False, Outcome.DIFFERS),
        (True, {}, True, Outcome.DIFFERS),
        (None, {}, False, Outcome.UNDECIDED),
        (False, {}, False, Outcome.DIFFERS),
    ],
)
def test_what_stayed_open_is_no_answer(kept, larger, wrong_side, outcome) -> None:
    assert _outcome_by_level(kept, larger, wrong_side=wrong_side) is outcome


def test_a_larger_region_of_unknown_size_leaves_the_verdict_open(monkeypatch) -> None:
    def unknown(_curve):
        raise UndecidedError("the peak of the power could not be bracketed inside the parameter space")

    monkeypatch.setattr(judge, "sizes", unknown)
    found = judged(POISSON, "lam <= 8", "0.05", c="13")
    assert found.verdict == "undecided"
    assert "whether the region that also rejects at V = 13 is within the level too stayed open" in found.notes
