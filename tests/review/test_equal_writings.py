"""One test in several writings, and fractions printed without decimals."""

from fractions import Fraction
from pathlib import Path

import pytest

from verify import Density, Problem, derive, review
from verify.problem.casefile import read_case
from verify.review.style import Style

ROOT = Path(__file__).parents[2]
BINOMIAL = Density(
    "binomial(10, x)*p**x*(1-p)**(10-x)",
    variable="x",
    support="integers 0..10",
    parameter="p",
    space="0 < p < 1",
)
TIE = "11/1024"  # P(V >= 9) = (10 + 1) / 2**10 at p = 1/2
DERIVED = derive(BINOMIAL)


def judged(null, alpha, style=None, **numbers):
    return review(Problem(BINOMIAL, null, alpha, 1), style=style or Style(), derivation=DERIVED, digits=20, **numbers)


@pytest.mark.parametrize(
    ("null", "c", "gamma", "style"),
    [
        ("p <= 1/2", "9", "1", Style()),
        ("p <= 1/2", "8", "0", Style()),
        ("p <= 1/2", "8", "0.000", Style()),
        ("p >= 1/2", "1", "1", Style()),
        ("p >= 1/2", "2", "0", Style()),
        ("p <= 1/2", "8", "1", Style(fractions="of acceptance")),
        ("p >= 1/2", "2", "1", Style(fractions="of acceptance")),
        ("p <= 1/2", "2", "0", Style(scale=Fraction(-1), shift=Fraction(10))),  # failures counted in place of successes
    ],
)
def test_both_writings_of_a_one_sided_tie_agree(null, c, gamma, style) -> None:
    found = judged(null, TIE, style, c=c, gamma=gamma)
    assert (found.verdict, found.slips) == ("agrees", ())


@pytest.mark.parametrize(
    ("null", "c", "gamma"), [("p <= 1/2", "10", "0"), ("p <= 1/2", "8", "1"), ("p >= 1/2", "1", "0")]
)
def test_a_neighbouring_test_still_differs(null, c, gamma) -> None:
    assert judged(null, TIE, c=c, gamma=gamma).verdict == "differs"


def test_no_slip_is_named_on_the_strength_of_a_bare_zero() -> None:
    # twice the level gives c = 8 and a fraction of 0.30..., which zero decimals would print as 0
    found = judged("p <= 1/2", "0.012", c="8", gamma="0")
    assert (found.verdict, found.off, found.slips) == ("differs", ("gamma",), ())
    named = judged("p <= 1/2", "0.012", c="8", gamma="0.30")
    assert [slip.name for slip in named.slips] == ["alpha-doubled"]


def test_a_bare_zero_has_the_decimals_of_the_fraction_beside_it() -> None:
    right = judged("p <= 0.3 or p >= 0.7", "0.05", c1="4", c2="6", gamma1="0", gamma2="0.00").correct_printed
    assert len(right["gamma1"].partition(".")[2]) == 2


@pytest.mark.parametrize("gamma", ["9765625/39191040", "0.249180"])
def test_a_test_on_one_atom_is_decided_at_20_digits(gamma) -> None:
    case = read_case(ROOT / "casebook" / "numerics" / "one-atom.case.toml")
    found = review(case.problem, digits=20, c1="5", c2="5", gamma1=gamma, gamma2=gamma)
    assert found.verdict == "agrees"
