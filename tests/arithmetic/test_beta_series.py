"""The incomplete beta function where its endless series is slow, against mpmath."""

from fractions import Fraction

import mpmath
import pytest

from verify.arithmetic import beta_series
from verify.arithmetic.ball import balls
from verify.arithmetic.exact import quotient
from verify.errors import UndecidedError


@pytest.mark.parametrize("failures", [10, 20_000, 60_000])
@pytest.mark.parametrize("size", [Fraction(5, 2), Fraction(1, 3)])
def test_a_ratio_near_one(failures, size):
    """The tails of a negative binomial law with success probability 1/10000 and a size that is not whole."""
    chance = Fraction(1, 10_000)
    with mpmath.workdps(60):
        ends = mpmath.mpf(size.numerator) / size.denominator, failures + 1
        below = mpmath.betainc(*ends, 0, mpmath.mpf(chance.numerator) / chance.denominator, regularized=True)
        known = [mpmath.nstr(below, 40), mpmath.nstr(1 - below, 40)]
    with balls(256) as A:
        found = A.beta_p(A.real(chance), size, failures + 1), A.beta_p(A.real(1 - chance), failures + 1, size)
        for ball, text in zip(found, known, strict=True):
            assert abs(ball - quotient(Fraction(text))) < A.power(A.real(10), -38)
            assert ball.rel_accuracy_bits() > 150


@pytest.mark.parametrize(
    ("x", "a", "b"),
    [(1 - Fraction(1, 10**9), Fraction(1, 3), Fraction(2, 3)), (1 - Fraction(1, 10**9), Fraction(1, 3), 10**12)],
)
def test_too_long_a_sum_is_given_up_in_words(monkeypatch, x, a, b):
    """Both of the series, with a smaller cap, at an x so near 1 that they need far more terms."""
    monkeypatch.setattr(beta_series, "MOST_TERMS", 2000)
    with balls(100) as A, pytest.raises(UndecidedError, match="more than 2000 terms"):
        beta_series._lower(A.real(x), 1 - A.real(x), a, b, 100)
