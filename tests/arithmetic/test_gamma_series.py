"""The lower incomplete gamma function against mpmath's, and against Arb's upper function at twice the precision."""

from fractions import Fraction

import mpmath
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.arithmetic.ball import balls
from verify.arithmetic.exact import quotient
from verify.arithmetic.gamma_series import lower_gamma


@settings(max_examples=60, deadline=None)
@given(st.fractions(Fraction(1, 3), 4000, max_denominator=12), st.fractions(Fraction(1, 50), Fraction(49, 50)))
def test_it_agrees_with_mpmath(a, share):
    x = a * share
    with mpmath.workdps(60):
        known = mpmath.nstr(
            mpmath.gammainc(mpmath.mpf(a.numerator) / a.denominator, 0, mpmath.mpf(x.numerator) / x.denominator,
                            regularized=True), 40,
        )  # fmt: skip
    with balls(256) as A:
        found = lower_gamma(A.real(a), A.real(x), 256)
        assert abs(found / quotient(Fraction(known)) - 1) < A.power(A.real(10), -37)
        assert found.rel_accuracy_bits() > 200


@pytest.mark.parametrize(("a", "x"), [(5_000_000, 4_935_500), (30_000_000, 29_800_000), (10**9, 999_000_000)])
@pytest.mark.parametrize("prec", [64, 300, 715, 1000])
def test_far_below_a_large_parameter(a, x, prec):
    """One minus Arb's upper function has no bit of these tails at some of these precisions."""
    with balls(4000) as B:
        known = 1 - B.gamma_q(B.real(a), B.real(x))
        assert known.rel_accuracy_bits() > 100
    with balls(prec) as A:
        found = A.gamma_p(a, A.real(x))
        assert found.overlaps(known)
        assert found.rel_accuracy_bits() > prec - 50
