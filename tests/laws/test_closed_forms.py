"""The closed-form laws: known values, outside libraries, and properties that hold in every arithmetic."""

from fractions import Fraction
from itertools import pairwise

import cypari
import mpmath
import pytest
from hypothesis import given
from hypothesis import strategies as st

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.exact import rationals
from verify.arithmetic.high import high
from verify.laws import Binomial, Gamma, InverseGaussian, NegativeBinomial, Normal, Poisson

positive = st.fractions(Fraction(1, 10), Fraction(40), max_denominator=20)
share = st.fractions(Fraction(1, 20), Fraction(19, 20), max_denominator=20)

LATTICE = st.one_of(
    st.builds(Poisson, positive),
    st.builds(Binomial, st.integers(1, 40).map(Fraction), share),
    st.builds(NegativeBinomial, positive, share),
)
CONTINUOUS = st.one_of(
    st.builds(Gamma, st.fractions(1, 40, max_denominator=20), positive),
    st.builds(Normal, positive, positive),
    st.builds(InverseGaussian, positive, positive),
)
FUNCTIONS = ("density", "cdf", "sf", "shortfall", "partial_mean", "upper_partial_mean")


@given(LATTICE, st.integers(0, 60))
def test_a_lattice_law_sums_its_masses(law, k):
    with balls(160) as A:
        masses = [law.density(A, j) for j in range(k + 1)]
        mean = law.expectation(A)
        assert sum(masses, A.real(0)).overlaps(law.cdf(A, k))
        assert (law.cdf(A, k) + law.sf(A, k)).overlaps(A.real(1))
        short = sum(((mean - j) * mass for j, mass in enumerate(masses)), A.real(0))
        assert short.overlaps(law.shortfall(A, k))
        assert (law.partial_mean(A, k) + law.upper_partial_mean(A, k)).overlaps(mean)


@given(st.one_of(LATTICE, CONTINUOUS), st.fractions(Fraction(1, 5), Fraction(30), max_denominator=7))
def test_two_precisions_overlap_and_mpmath_agrees(law, v):
    v = int(v) if law.lattice else v
    H = high(40)
    there = H.real(v) if not law.lattice else v
    for name in FUNCTIONS:
        with balls(100) as A:
            coarse = getattr(law, name)(A, v if law.lattice else A.real(v))
        with balls(250) as A:
            fine = getattr(law, name)(A, v if law.lattice else A.real(v))
            assert coarse.overlaps(fine), name
            if name in ("density", "cdf"):
                mine = to_enclosure(fine).mid
                other = getattr(law, name)(H, there)
                assert abs(H.real(mine) - other) < H.mp.mpf(10) ** -25, name


@given(CONTINUOUS, st.fractions(Fraction(1, 5), Fraction(30), max_denominator=7))
def test_a_continuous_law_integrates_its_density(law, v):
    H = high(25)
    start = H.mp.ninf if law.support[0] is None else H.mp.mpf(0)
    mean, spread = law.expectation(H), law.spread(H)
    cuts = sorted(
        {start, *(c for c in (mean - 6 * spread, mean, mean + 6 * spread) if start < c < H.real(v)), H.real(v)}
    )
    area = sum(H.mp.quad(lambda x: law.density(H, x), [a, b]) for a, b in pairwise(cuts) if a < b)
    with balls(120) as A:
        value = to_enclosure(law.cdf(A, A.real(v))).mid
    assert abs(area - H.real(value)) < 1e-8


@given(st.integers(1, 30), share, st.integers(0, 30))
def test_exact_values_are_contained(trials, p, k):
    law = Binomial(Fraction(trials), p)
    exact = law.density(rationals(), k)
    with balls(120) as A:
        assert to_enclosure(law.density(A, k)).contains(exact)


@given(positive, st.integers(1, 6))
def test_sums_of_independent_copies(mean, n):
    """The variance of the sum is n times the variance: the law of the sum is what sum_of says."""
    for law in (Poisson(mean), Gamma(mean, Fraction(2)), Normal(mean, mean), InverseGaussian(mean, Fraction(3))):
        with balls(100) as A:
            total = law.sum_of(n)
            assert total.expectation(A).overlaps(n * law.expectation(A))
            assert (total.spread(A) ** 2).overlaps(n * law.spread(A) ** 2)


# Source: L. Knuesel's certified values as used by A. T. Yalta, Comput. Stat. Data Anal. 52 (2008) 4579-4586;
# relative accuracy 5e-6.
KNUESEL_BINOMIAL = {1: "8.96114e-308", 100: "1.39413e-169", 300: "2.91621e-42", 390: "3.18196e-15", 420: "1.76037e-9",
                    500: ".183106", 550: ".986550"}  # fmt: skip


@pytest.mark.parametrize(("k", "printed"), KNUESEL_BINOMIAL.items())
def test_knuesel_binomial(k, printed):
    with balls(1300) as A:
        value = to_enclosure(Binomial(Fraction(1030), Fraction(1, 2)).cdf(A, k)).mid
    assert abs(value / Fraction(printed) - 1) < Fraction(5, 10**6)


PARI_LAWS = [
    (Poisson(Fraction(80)), 93),
    (Binomial(Fraction(200), Fraction(1, 3)), 70),
    (NegativeBinomial(Fraction(5, 2), Fraction(1, 7)), 30),
    (Gamma(Fraction(7, 2), Fraction(3)), Fraction(2)),
    (Normal(Fraction(1), Fraction(5)), Fraction(4)),
]
PARI_CDF = {
    "Poisson": "incgam({v}+1,{mean})/gamma({v}+1)",
    "binomial": "sum(k=0,{v},binomial({trials},k)*{probability}^k*(1-{probability})^({trials}-k))*1.",
    "negative binomial": (
        "sum(k=0,{v},gamma({size}+k)/gamma({size})/k!*{probability}^(1.*{size})*(1-{probability})^k)"
    ),
    "gamma": "1-incgam({shape},{rate}*{v})/gamma({shape})",
    "normal": "erfc(({mean}-{v})/sqrt(2*{variance}))/2",
}
"""P(V <= v) in PARI's own functions."""


@pytest.mark.parametrize(("law", "v"), PARI_LAWS, ids=lambda x: str(x))
def test_pari_agrees(law, v):
    """PARI (through cypari) evaluates the same probabilities by its own incomplete gamma and error functions."""
    pari = cypari.pari
    pari.allocatemem(64 * 10**6)
    pari.set_real_precision(40)
    values = {key: f"({value})" for key, value in law.parameters.items()}
    formula = PARI_CDF[law.name].format(v=v, **values)
    theirs = Fraction(str(pari(formula)).replace(" E", "e"))
    with balls(160) as A:
        mine = to_enclosure(law.cdf(A, v if law.lattice else A.real(v)))
    assert abs(mine.mid - theirs) < Fraction(1, 10**30)


def test_mpmath_context_is_private():
    before = mpmath.mp.dps
    high(77)
    assert mpmath.mp.dps == before
