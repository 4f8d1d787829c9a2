"""The scaled complementary error function against mpmath, on both sides of the place where its series takes over."""

from fractions import Fraction

import mpmath
import pytest

from verify.arithmetic.ball import balls
from verify.arithmetic.exact import quotient


@pytest.mark.parametrize("x", [Fraction(1, 10), *map(Fraction, (3, 15, 17, 200, 10**7))])
@pytest.mark.parametrize("prec", [64, 250])
def test_it_agrees_with_mpmath(x, prec):
    with mpmath.workdps(120):
        z = mpmath.mpf(x.numerator) / x.denominator
        known = mpmath.nstr(mpmath.exp(z * z) * mpmath.erfc(z) if z < 1000 else _continued_fraction(z), 90)
    with balls(prec) as A:
        found = A.erfcx(A.real(x))
        assert abs(found / quotient(Fraction(known)) - 1) < A.power(A.real(2), 20 - prec)
        assert found.rel_accuracy_bits() > prec - 30


def _continued_fraction(z):
    """Source: DLMF 7.9.1, the continued fraction of Laplace."""
    tail = z
    for k in range(200, 0, -1):
        tail = z + mpmath.mpf(k) / 2 / tail
    return 1 / (mpmath.sqrt(mpmath.pi) * tail)
