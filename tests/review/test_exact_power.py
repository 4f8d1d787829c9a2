"""Ties of a power and its level, decided in exact fractions."""

from fractions import Fraction
from math import comb

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.arithmetic.enclosure import Enclosure
from verify.errors import NotRational
from verify.laws import Binomial, NegativeBinomial, Poisson
from verify.review.exact_power import exact_power
from verify.solution.critical import CriticalFunction


def masses(n: int, p: Fraction) -> list[Fraction]:
    return [comb(n, k) * p**k * (1 - p) ** (n - k) for k in range(n + 1)]


@given(
    st.sampled_from(["inside", "outside", "above", "below"]),
    st.integers(0, 8),
    st.integers(0, 8),
    st.fractions(0, 1, max_denominator=9),
    st.fractions(0, 1, max_denominator=9),
    st.fractions(Fraction(1, 9), Fraction(8, 9), max_denominator=9),
)
@settings(max_examples=150, deadline=None)
def test_it_is_the_sum_of_phi_times_the_masses(region, a, b, g1, g2, p) -> None:
    c1, c2 = sorted((a, b))
    if region in ("above", "below"):
        c2 = c1
    if c1 == c2:
        g2 = g1
    test = CriticalFunction(region, c1, c2, Enclosure.of(g1), Enclosure.of(g2))
    wanted = sum(test.at(k).lower * mass for k, mass in enumerate(masses(8, p)))
    assert exact_power(test, Binomial(8, p)) == Enclosure.of(wanted)


def test_the_finite_side_of_an_infinite_support_is_summed() -> None:
    """Failures before the first success: P(V > 2) = (1-p)**3."""
    one = Enclosure.of(1)
    law = NegativeBinomial(Fraction(1), Fraction(1, 3))
    above = CriticalFunction("above", 3, 3, one, one)
    assert exact_power(above, law) == Enclosure.of(Fraction(8, 27))


@pytest.mark.parametrize(
    ("law", "phi"),
    [
        (Poisson(Fraction(8)), Enclosure.of(1)),
        (Binomial(8, Fraction(1, 2)), Enclosure(Fraction(1, 3), Fraction(2, 5))),
    ],
)
def test_what_is_irrational_or_not_exactly_known_is_refused(law, phi) -> None:
    with pytest.raises(NotRational):
        exact_power(CriticalFunction("above", 3, 3, phi, phi), law)
