"""Single calls of SciPy 1.17 whose true value is known: the count of agreeing digits names the wrong ones.

True values: recorded from a computation in Arb balls at rising precision, confirmed by a second route; those
that the arithmetic of this package can evaluate are recomputed below.
"""

import math
from fractions import Fraction
from math import comb

import pytest
from scipy import special, stats

from verify.arithmetic.agreement import significant_digits
from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.comparison.flags import ENOUGH
from verify.comparison.scipy_laws import lost_tail_hint
from verify.killable.calls import run_limited

WRONG = {
    "poisson.logpmf(5e15, 5e15)": (lambda: stats.poisson.logpmf(5e15, 5e15), "-18.993045686877065576"),
    "poisson.pmf(1e6, 1e6)": (lambda: stats.poisson.pmf(1e6, 1e6), "0.00039894224715624402970"),
    "poisson.logcdf(5, 1000)": (lambda: stats.poisson.logcdf(5, 1000), "-970.24370784624099880"),
    "nbinom.logcdf(5, 200, 0.01)": (lambda: stats.nbinom.logcdf(5, 200, 0.01), "-899.30562077458420772"),
    "hypergeom.sf(9, 10**14, 10**5, 10)": (
        lambda: stats.hypergeom.sf(9, 10**14, 10**5, 10), "9.9955008699100043024e-91"),
    "binom.isf(1e-20, 10000, 4e-5)": (lambda: stats.binom.isf(1e-20, 10000, 4e-5), "16"),
    "betainc(3.16e16, 3.13e18, 0.01)": (
        lambda: special.betainc(3.1622776601699636e16, 3.130654883566682e18, 0.010000000000005001),
        "0.49999999475234036100"),
    "vonmises.sf(0.5, 730)": (lambda: stats.vonmises.sf(0.5, 730.0), "4.7381075329418898186e-41"),
    "zipf.sf(10**6, 3)": (lambda: stats.zipf.sf(10**6, 3.0), "4.1595327033687542083e-13"),
    "nchypergeom_fisher.sf(574, 2000, 1000, 1000, 1)": (
        lambda: stats.nchypergeom_fisher.sf(574, 2000, 1000, 1000, 1.0), "1.2308647794172245431e-11"),
    "poisson.isf(1e-17, 5)": (lambda: stats.poisson.isf(1e-17, 5.0), "34"),
    "geom.isf(1e-16, 0.5)": (lambda: stats.geom.isf(1e-16, 0.5), "54"),
    "poisson.ppf(0.025, 1e12)": (lambda: stats.poisson.ppf(0.025, 1e12), "999998040036"),
    "beta.ppf(1e-20, 1.03, 0.72)": (lambda: stats.beta.ppf(1e-20, 1.03, 0.72), "5.2908038636843185996e-20"),
    "invgauss.ppf(1e-20, 0.25)": (lambda: stats.invgauss.ppf(1e-20, 0.25), "0.010535951071994956054"),
    "1 - binom.cdf(60, 100, 0.2)": (lambda: 1 - stats.binom.cdf(60, 100, 0.2), "4.0921494631932843464e-19"),
    "gammainc(1e8, 99950000)": (lambda: special.gammainc(1e8, 99950000.0), "2.8546421399586261430e-7"),
    "chi2.cdf(1.999e8, 2e8)": (lambda: stats.chi2.cdf(1.999e8, 2e8), "2.8546421399586261430e-7"),
}  # fmt: skip

RIGHT = {
    "hypergeom.sf(40, 1600, 50, 300)": (
        lambda: stats.hypergeom.sf(40, 1600, 50, 300), "7.5651488792284464123e-23"),
    "beta.ppf(0.9999999999997369, 75, 66334470)": (
        lambda: stats.beta.ppf(0.9999999999997369, 75.0, 66334470.0), "2.3436208029823925279e-6"),
}  # fmt: skip


def truth(text: str) -> Enclosure:
    """The value as printed: whole numbers are exact, the rest to half a unit of the last digit."""
    value = Fraction(text)
    if value.denominator == 1:
        return Enclosure.of(value)
    size = Fraction(10) ** (math.floor(math.log10(abs(value))) - 18)
    return Enclosure(value - size, value + size)


def called(call) -> float:
    (outcome,) = run_limited([lambda: float(call())], seconds=20)
    assert outcome.failure == ""
    return outcome.value


@pytest.mark.parametrize("name", WRONG)
def test_a_wrong_call_is_named(name):
    call, text = WRONG[name]
    value, true = called(call), truth(text)
    if true.exact:  # a lattice quantile is right or wrong
        assert value != true.mid
    else:
        assert significant_digits(value, true) < ENOUGH


@pytest.mark.parametrize("name", RIGHT)
def test_a_right_call_is_not_flagged(name):
    call, text = RIGHT[name]
    assert significant_digits(called(call), truth(text)) >= ENOUGH


def enclosed(compute) -> Enclosure:
    with balls(400) as A:
        return to_enclosure(compute(A))


RECOMPUTED = {
    "-18.993045686877065576": lambda A: 5 * 10**15 * (A.log(A.real(5 * 10**15)) - 1) - A.log(A.factorial(5 * 10**15)),
    "0.00039894224715624402970": lambda A: A.exp(10**6 * (A.log(A.real(10**6)) - 1) - A.log(A.factorial(10**6))),
    "-970.24370784624099880": lambda A: A.log(A.gamma_q(6, 1000)),
    "4.0921494631932843464e-19": lambda A: A.beta_p(A.real(Fraction(0.2)), 61, 40),
    "2.8546421399586261430e-7": lambda A: A.gamma_p(10**8, 99950000),
}


@pytest.mark.parametrize(("text", "compute"), RECOMPUTED.items())
def test_the_true_values_are_right(text, compute):
    assert abs(enclosed(compute).mid / Fraction(text) - 1) < Fraction(1, 10**18)


def smallest_with_tail_at_most(masses: list[Fraction], level: Fraction) -> int:
    return next(k for k in range(len(masses)) if sum(masses[k + 1 :]) <= level)


def test_a_tie_puts_isf_one_off():
    binomial = [comb(3, k) * Fraction(3, 4) ** k * Fraction(1, 4) ** (3 - k) for k in range(4)]
    hypergeometric = [Fraction(comb(3, k) * comb(3, 4 - k), comb(6, 4)) for k in range(4)]
    assert smallest_with_tail_at_most(binomial, Fraction(27, 64)) == 2
    assert called(lambda: stats.binom.isf(27 / 64, 3, 0.75)) == 3
    assert smallest_with_tail_at_most(hypergeometric, Fraction(1, 5)) == 2
    assert called(lambda: stats.hypergeom.isf(0.2, 6, 3, 4)) == 3


@pytest.mark.parametrize(
    ("distribution", "lost"),
    [(stats.poisson, "_isf"), (stats.geom, "_isf"), (stats.zipf, "_sf"), (stats.vonmises, "_sf")],
)
def test_the_cause_can_be_looked_up(distribution, lost):
    assert lost in lost_tail_hint(distribution)


@pytest.mark.parametrize("distribution", [stats.binom, stats.nbinom, stats.gamma, stats.norm, stats.invgauss])
def test_classes_of_their_own_are_not_suspected(distribution):
    assert lost_tail_hint(distribution) == ""


def test_calls_that_never_come_back_are_stopped():
    calls = [lambda: stats.hypergeom.sf(9, 10**16, 10**5, 10), lambda: stats.logser.isf(1e-20, 0.5)]
    assert all(outcome.failure for outcome in run_limited(calls, seconds=1.0))
