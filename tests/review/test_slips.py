"""Each slip is told from chance: one printed number that does not fit drops it; several that fit are all said."""

import pytest

from verify import Density, Problem, derive, review
from verify.review.slip_table import SLIPS, TRUNCATED

POISSON = Density(
    "exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0", parameter="lam", space="lam > 0"
)
NAMES = """ends-exchanged fractions-exchanged fractions-complemented lower-off-by-one upper-off-by-one closed-for-open
n-left-out n-twice alpha-halved alpha-doubled equal-tails two-one-sided normal-approximation
normal-approximation-corrected rate-for-scale mean-for-sum first-limit-twice region-complemented truncated"""


@pytest.fixture(scope="module")
def derivation():
    return derive(POISSON)


def found(derivation, **numbers) -> list[str]:
    verdict = review(Problem(POISSON, "lam <= 8 or lam >= 12", "0.05", 10), derivation=derivation, digits=20, **numbers)
    return [slip.name for slip in verdict.slips]


def test_the_list_of_slips_is_the_published_one() -> None:
    assert [*SLIPS, TRUNCATED] == NAMES.split()


def test_every_slip_has_its_sentence() -> None:
    for function, words in SLIPS.values():
        assert words
        assert function.__doc__


@pytest.mark.parametrize("wrong", ["c1", "c2", "gamma1", "gamma2"])
def test_all_printed_numbers_must_fit(derivation, wrong) -> None:
    """alpha halved gives 96, 101, 0.1302, 0.4484 (the oracle's numbers); one number changed, and it is not said."""
    halved = {"c1": "96", "c2": "101", "gamma1": "0.1302", "gamma2": "0.4484"}
    assert found(derivation, **halved) == ["alpha-halved"]
    changed = {**halved, wrong: {"c1": "97", "c2": "102"}.get(wrong, "0.3303")}
    assert found(derivation, **changed) == []


def test_fractions_keep_an_approximation_from_being_named(derivation) -> None:
    """A normal approximation gives no fractions, so a claim with fractions cannot have come from one alone."""
    assert "normal-approximation" not in found(derivation, c1="95", c2="103", gamma1="0.5", gamma2="0.5")


def test_several_slips_are_all_said(derivation) -> None:
    """With two digits of the fractions, more than one explanation may remain: both are said."""
    names = found(derivation, c1="103", c2="94", gamma1="0.51", gamma2="0.09")
    assert names == ["ends-exchanged"]
    both = found(derivation, c1="9.4", c2="10.3", gamma1="0.09", gamma2="0.51")
    assert both == ["mean-for-sum"]
