"""Expectations behind the printed numbers: exact where they are rational, and no mistake passes for "not rational"."""

from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from verify import Density, Problem, derive, solve
from verify.arithmetic.enclosure import Enclosure
from verify.certificate.expectations import Expectations
from verify.laws import Binomial
from verify.problem.numbers import exact

COINS = Density(
    "binomial(10, x)*p**x*(1-p)**(10-x)", variable="x", support="integers 0..10", parameter="p", space="0 < p < 1"
)
TOSSED = derive(COINS)


def expectations(null: str) -> Expectations:
    return Expectations(solve(Problem(COINS, null, "1/20", 1), 20, TOSSED), 128)


@given(st.fractions(Fraction(1, 10), Fraction(9, 10), max_denominator=12), st.fractions(0, 1, max_denominator=20))
@settings(max_examples=20, deadline=None)
def test_rational_masses_give_exact_means_and_what_balls_enclose(p, gamma) -> None:
    """The probability of more than 8 heads and a share of 8, summed in fractions."""
    found = expectations("p <= 1/2")
    law = Binomial(10, p)
    assert found.mean(law) == Enclosure.of(10 * p)
    mass = [Fraction([1, 10, 45][k]) * p ** (10 - k) * (1 - p) ** k for k in range(3)]
    assert found.phi(law, (gamma,)).contains(mass[0] + mass[1] + gamma * mass[2])


def test_an_irrational_mean_is_enclosed() -> None:
    found = expectations("p = 1/2")
    mean = found.mean(found.law(exact("sqrt(2)/2")))
    assert not mean.exact
    assert (mean.lower / 10) ** 2 < Fraction(1, 2) < (mean.upper / 10) ** 2


def test_a_mistake_in_a_law_is_not_taken_for_an_irrational_number(monkeypatch) -> None:
    def broken(self, A):
        raise TypeError("unsupported operand")

    found = expectations("p = 1/2")
    monkeypatch.setattr(Binomial, "expectation", broken)
    with pytest.raises(TypeError):
        found.mean(Binomial(10, Fraction(1, 2)))
