"""Independent recomputation: exact fractions and every pair of cutoffs."""

from fractions import Fraction

import exhaustive
from build import solved
from hypothesis import assume, given
from hypothesis import strategies as st

shares = st.fractions(min_value=Fraction(1, 12), max_value=Fraction(11, 12), max_denominator=12)
levels = st.sampled_from([Fraction(1, 20), Fraction(1, 100), Fraction(1, 4), Fraction(1, 64), Fraction(9, 10)])


def same(solution, expected) -> None:
    """The enclosures of the solution contain the exact values."""
    c1, c2, phi1, phi2 = expected
    assert (solution.c1.lower, solution.c2.lower) == (c1, c2)
    assert solution.c1.exact
    assert solution.gamma1.contains(phi1)
    assert solution.gamma2.contains(phi2)
    assert solution.gamma1.radius < Fraction(1, 10**28)


@given(shares, shares, levels, st.integers(1, 4))
def test_binomial_outside_null(p, q, level, n):
    assume(p != q)
    low, high = sorted((p, q))
    solution = solved("binomial", f"t <= {low} or t >= {high}", str(level), n)
    laws = exhaustive.binomial(3 * n, low), exhaustive.binomial(3 * n, high)
    same(solution, exhaustive.inside(*laws, (level, level)))


@given(shares, shares, levels, st.integers(1, 4))
def test_binomial_interval_null(p, q, level, n):
    assume(p != q)
    low, high = sorted((p, q))
    solution = solved("binomial", f"{low} <= t <= {high}", str(level), n)
    laws = exhaustive.binomial(3 * n, low), exhaustive.binomial(3 * n, high)
    same(solution, exhaustive.outside(*laws, (level, level)))


@given(shares, levels, st.integers(1, 4))
def test_binomial_point_null(p, level, n):
    solution = solved("binomial", f"t = {p}", str(level), n)
    same(solution, exhaustive.point(exhaustive.binomial(3 * n, p), level))


@given(shares, levels, st.integers(1, 4))
def test_binomial_one_sided(p, level, n):
    solution = solved("binomial", f"t <= {p}", str(level), n)
    c, gamma = exhaustive.above(exhaustive.binomial(3 * n, p), level)
    assert solution.c.lower == c
    assert solution.gamma.contains(gamma)
    assert solution.rejects == "above"


@given(st.sampled_from(["1/2", "1/3", "3/5"]), st.sampled_from(["3/4", "4/5"]), st.integers(1, 3))
def test_geometric_with_falling_natural_parameter(p, q, n):
    """Q = log(1 - t) falls, so the law with the larger t is the one with the smaller statistic."""
    level = Fraction(1, 10)
    solution = solved("geometric", f"t <= {p} or t >= {q}", str(level), n)
    laws = [exhaustive.negative_binomial(n, Fraction(value), 60) for value in (p, q)]
    same(solution, exhaustive.inside(*laws, (level, level)))


def test_shifted_lattice():
    """Counting trials instead of failures moves the cutoffs by n and nothing else."""
    null = "t <= 1/3 or t >= 2/3"
    failures, trials = solved("geometric", null, n=4), solved("geometric from 1", null, n=4)
    assert trials.c1.lower == failures.c1.lower + 4
    assert trials.gamma1 == failures.gamma1


@given(st.sampled_from([("1/20", "1/10"), ("1/10", "1/20"), ("1/50", "1/20")]))
def test_two_levels(pair):
    first, second = map(Fraction, pair)
    solution = solved("binomial", "t <= 1/4 or t >= 3/4", list(pair), 4)
    laws = exhaustive.binomial(12, Fraction(1, 4)), exhaustive.binomial(12, Fraction(3, 4))
    same(solution, exhaustive.inside(*laws, (first, second)))
