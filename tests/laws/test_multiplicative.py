"""Sums of logarithms of whole numbers against brute force over products."""

from fractions import Fraction
from itertools import product

import mpmath
import pytest
import sympy as sp

from verify.arithmetic.ball import balls
from verify.derivation.cumulants import cumulants
from verify.derivation.zeta_values import open_zeta
from verify.errors import UndecidedError
from verify.laws.atoms import Atoms
from verify.laws.multiplicative import MultiplicativeSum

s, x = sp.Symbol("s", positive=True), sp.Symbol("x", positive=True, integer=True)
MEAN, VARIANCE = cumulants(open_zeta(sp.log(sp.zeta(s))), -s, s)
ZETA = Atoms(1 / sp.zeta(s), x ** (-s), "x", "s", 1, None, mean=MEAN, variance=VARIANCE)


@pytest.mark.parametrize("at", [Fraction(3), Fraction(4)])
def test_masses_equal_brute_force(at: Fraction) -> None:
    count: dict[int, int] = {}
    for ms in product(range(1, 41), repeat=3):
        m = ms[0] * ms[1] * ms[2]
        count[m] = count.get(m, 0) + 1
    law = MultiplicativeSum(ZETA, at, 3)
    with balls(120) as A:
        front = A.real(at).zeta() ** 3
        total, moment = A.real(0), A.real(0)
        for m in range(1, 41):
            mass = A.real(Fraction(count[m], m ** int(at))) / front
            total, moment = total + mass, moment + mass * A.log(A.real(m))
            assert law.density(A, m).overlaps(mass)
            assert law.cdf(A, m).overlaps(total)
            assert law.shortfall(A, m).overlaps(law.expectation(A) * total - moment)
            assert law.density(A, m).rel_accuracy_bits() > 90


def test_moments_agree_with_mpmath() -> None:
    mpmath.mp.dps = 30
    law = MultiplicativeSum(ZETA, Fraction(5, 2), 4)
    wanted = -4 * mpmath.zeta(mpmath.mpf("2.5"), derivative=1) / mpmath.zeta(mpmath.mpf("2.5"))
    with balls(120) as A:
        assert abs(mpmath.mpf(law.expectation(A).str(28, radius=False)) - wanted) < mpmath.mpf(10) ** -25
        assert law.value(A, 8).overlaps(3 * A.log(A.real(2)))


def test_a_tail_too_far_out_is_undecided() -> None:
    with balls(64) as A, pytest.raises(UndecidedError, match="table of products"):
        MultiplicativeSum(ZETA, Fraction(3), 2).cdf(A, 10**7)
