"""The incomplete beta function where its endless series is slow, against mpmath."""

from fractions import Fraction

import mpmath
import pytest

from verify.arithmetic.ball import balls
from verify.arithmetic.exact import quotient


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
