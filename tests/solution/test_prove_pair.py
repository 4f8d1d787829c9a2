"""One proof of a pair of lattice points, and numbers that are exact decimals."""

from fractions import Fraction

import pytest
from build import derivation
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from verify import Density, Problem, derive, solve
from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.exact import rationals
from verify.certificate.certify import certify
from verify.laws import Binomial, Poisson
from verify.solution.conditions import Conditions
from verify.solution.lattice_window import prove_pair
from verify.solution.precision import may_be_decimal
from verify.solution.window import rough_laws

COINS = Density(
    "binomial(10, x)*p**x*(1-p)**(10-x)", variable="x", support="integers 0..10", parameter="p", space="0 < p < 1"
)
TOSSED = derive(COINS)


def conditions(*laws, levels, outside=False) -> Conditions:
    return Conditions(laws, levels, outside, tuple(law.mean for law in rough_laws(laws)[0]))


LOT = conditions(Poisson(Fraction(80)), Poisson(Fraction(120)), levels=(Fraction(1, 20),) * 2)


def test_the_pair_of_the_demonstration_is_proved_and_no_other() -> None:
    """Computed: 94 and 103; its fractions are also those of the exhaustive search in test_against_exhaustive.py."""
    window = prove_pair(LOT, 94, 103, 300, 30)
    assert window is not None
    assert (window.phi1.text(12), window.phi2.text(12)) == ("0.0867146646010", "0.514744492090")
    assert all(side.contains(Fraction(1, 20)) for side in window.conditions)
    others = [(a, b) for a in range(91, 98) for b in range(100, 107) if (a, b) != (94, 103)]
    assert [pair for pair in others if prove_pair(LOT, *pair, 300, 30)] == []


@pytest.mark.parametrize(("c1", "c2", "bits"), [(103, 94, 300), (94, 94, 300), (-1, 103, 300), (94, 103, 60)])
def test_what_cannot_be_proved_is_none(c1, c2, bits) -> None:
    assert prove_pair(LOT, c1, c2, bits, 30) is None


@given(st.integers(1, 999_999), st.integers(15, 60))
def test_a_short_decimal_is_seen_and_a_third_is_not(units, digits) -> None:
    assume(units % 3)
    tiny = Fraction(1, 10 ** (digits + 5))
    decimal, third = Fraction(units, 10**6), Fraction(units, 3 * 10**6)
    assert may_be_decimal(Enclosure(decimal - tiny, decimal + tiny), digits)
    assert not may_be_decimal(Enclosure(third - tiny, third + tiny), digits)


def test_one_sided_fractions_that_are_decimals_are_exact() -> None:
    """P(V > 8) = 11/1024 and P(V = 8) = 45/1024 for ten fair coins: at level (11 + 45/8)/1024, gamma is 1/8."""
    problem = Problem(COINS, "p <= 1/2", str(Fraction(133, 8192)), 1)
    assert solve(problem, 20, TOSSED).gamma == Enclosure.of(Fraction(1, 8))
    certificate = certify(problem, 20)
    assert (certificate.recheck().status, certificate.predicate["test"]["gamma"]) == (0, "1/8")


@given(st.integers(1, 8), st.integers(1, 9), st.integers(1, 9))
@settings(max_examples=12, deadline=None)
def test_two_sided_fractions_that_are_decimals_are_exact(c1, first, second) -> None:
    """Levels made from the fractions: at each limit the sum of the masses, in exact fractions."""
    c2 = c1 + 1
    levels = []
    for p in (Fraction(2, 5), Fraction(3, 5)):
        law = [Binomial(10, p).density(rationals(), k) for k in range(11)]
        levels.append(Fraction(first, 10) * law[c1] + Fraction(second, 10) * law[c2])
    problem = Problem(COINS, "p <= 2/5 or p >= 3/5", tuple(map(str, levels)), 1)
    found = solve(problem, 20, TOSSED)
    assert (found.c1.lower, found.c2.lower) == (c1, c2)
    assert (found.gamma1, found.gamma2) == (Enclosure.of(Fraction(first, 10)), Enclosure.of(Fraction(second, 10)))


def test_irrational_masses_keep_their_enclosures() -> None:
    """A level of 0.3 P(V = 9) + P(V > 9), so that gamma is 0.3 with masses that no fraction holds."""
    level = "1 - exp(-4)*(1 + 4 + 8 + 32/3 + 32/3) + exp(-4)*32/3*3/10"
    problem = Problem(
        Density("exp(-t)*t**x/factorial(x)", variable="x", support="integers >= 0", parameter="t", space="t > 0"),
        "t <= 4", level, 1,
    )  # fmt: skip
    gamma = solve(problem, 20, derivation("poisson")).gamma
    assert not gamma.exact
    assert gamma.contains(Fraction(3, 10))
