"""Masses and tails of the laws, in balls, against certified and printed values."""

from fractions import Fraction

import pytest

from verify.arithmetic.ball import balls, to_enclosure
from verify.laws import Binomial, Poisson

# L. Knuesel's certified values as used by A. T. Yalta, Comput. Stat. Data Anal. 52 (2008) 4579-4586;
# relative error 5e-6.
BINOMIAL_1030 = {
    1: "8.96114e-308",
    100: "1.39413e-169",
    300: "2.91621e-42",
    390: "3.18196e-15",
    420: "1.76037e-9",
    500: "0.183106",
    550: "0.986550",
}
POISSON_200 = {
    0: "1.38390e-87",
    103: "1.41720e-14",
    200: "0.0281977",
    315: "1.41948e-14",
    400: "5.58069e-36",
    900: "1.73230e-286",
}
POISSON_AT_ITS_MEAN = {10**3: "0.508409", 10**5: "0.500841", 10**7: "0.500084", 10**9: "0.500008"}

# R, tests/d-p-q-r-tst-2.R.
POISSON_MASS = [
    (Fraction(15, 2), 40, "6.81705586862060455e-17"),
    (Fraction(1000), 1400, "1.46677334419656833e-33"),
]

# Harvard Computation Laboratory, Tables of the Cumulative Binomial Probability Distribution (1955):
# p = 1/2, P(X >= k).
HARVARD = [
    (10, 8, "0.05469"),
    (10, 9, "0.01074"),
    (100, 59, "0.04431"),
    (100, 63, "0.00602"),
    (1000, 527, "0.04684"),
]

# M. H. DeGroot and M. J. Schervish, Probability and Statistics, 4th ed. (2012), p. 556:
# Binomial(10, 0.2), P(Y > k).
DEGROOT = [(4, "0.0328"), (3, "0.1209")]

CLOSE = Fraction(5, 10**6)


def enclosed(law, method: str, v: int):
    with balls(200) as A:
        return to_enclosure(getattr(law, method)(A, v))


@pytest.mark.parametrize("k", BINOMIAL_1030)
def test_knuesel_binomial(within, k) -> None:
    assert within(enclosed(Binomial(1030, Fraction(1, 2)), "cdf", k), BINOMIAL_1030[k], CLOSE)


@pytest.mark.parametrize("k", POISSON_200)
def test_knuesel_poisson_mass(within, k) -> None:
    assert within(enclosed(Poisson(Fraction(200)), "density", k), POISSON_200[k], CLOSE)


@pytest.mark.parametrize("mean", POISSON_AT_ITS_MEAN)
def test_knuesel_poisson_at_its_mean(within, mean) -> None:
    assert within(enclosed(Poisson(Fraction(mean)), "cdf", mean), POISSON_AT_ITS_MEAN[mean], CLOSE)


@pytest.mark.parametrize(("mean", "k", "printed"), POISSON_MASS)
def test_r_poisson_mass(within, mean, k, printed) -> None:
    assert within(enclosed(Poisson(mean), "density", k), printed, Fraction(1, 10**16))


@pytest.mark.parametrize(("m", "k", "printed"), HARVARD)
def test_harvard_binomial_tail(rounds_to, m, k, printed) -> None:
    assert rounds_to(enclosed(Binomial(m, Fraction(1, 2)), "sf", k - 1), printed)


@pytest.mark.parametrize(("k", "printed"), DEGROOT)
def test_degroot_binomial_tail(rounds_to, k, printed) -> None:
    assert rounds_to(enclosed(Binomial(10, Fraction(1, 5)), "sf", k), printed)
