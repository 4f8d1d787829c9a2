"""Steps on a lattice: the right way, however near to staying the weight is, and far where far is meant."""

from fractions import Fraction
from itertools import accumulate

import pytest
from hypothesis import given
from hypothesis import strategies as st

from verify.arithmetic.ball import balls
from verify.arithmetic.exact import rationals
from verify.laws import Binomial, Poisson
from verify.solution.lattice_step import cells

LAW = Poisson(Fraction(10))
MOST_STEPS = 20
COUNTS = Binomial(400, Fraction(1, 40))
MASSES = [COUNTS.density(rationals(), k) for k in range(401)]
BEYOND = [*accumulate(reversed(MASSES), initial=Fraction(0))][-2::-1]


@pytest.mark.parametrize(("weight", "steps"), [(Fraction(1, 2), 0), (0, 0), (1, 0), (10**40 + 1, 1), (-1, -1)])
def test_a_weight_beyond_0_or_1_by_less_than_a_double_sees_is_a_step(weight, steps):
    with balls(300) as A:
        shared = A.real(Fraction(weight, 10**40) if abs(weight) > 1 or weight < 0 else Fraction(weight))
        assert cells(A, LAW, 20, -1, shared, 1.0, A.real(Fraction(1, 3)), A.real(Fraction(1, 3))) == steps


@given(st.integers(0, 60), st.integers(2, 180))
def test_a_few_steps_lead_to_the_cutoff(start, decades):
    """The cutoff by counting in exact fractions."""
    level, c = Fraction(1, 10**decades), start
    cutoff = next(c for c in range(401) if BEYOND[c] <= level)
    with balls(800) as A:
        for _ in range(MOST_STEPS):
            beyond, mass = A.real(BEYOND[c]), A.real(MASSES[c])
            c = min(400, c - cells(A, COUNTS, c, -1, (A.real(level) - beyond) / mass, 1e6, beyond, A.real(level)))
    assert c == cutoff
