"""Sums of logarithms of whole numbers against brute force over products."""

from fractions import Fraction
from itertools import product
from math import prod
from typing import Any

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


@pytest.mark.parametrize("at", [Fraction(0), Fraction(3, 2)])
def test_a_kernel_on_a_finite_support_equals_brute_force(at: Fraction) -> None:
    """Masses are divided by their sum, and those of one parameter value come from those of another."""
    one = Atoms(sp.Integer(1), x ** (-s), "x", "s", 2, 6, normalised=False)
    mpmath.mp.dps = 40
    weights = {m: mpmath.power(m, -mpmath.mpf(at.numerator) / at.denominator) for m in range(2, 7)}
    masses: dict[int, mpmath.mpf] = {}
    for a, b in product(weights, repeat=2):
        masses[a * b] = masses.get(a * b, 0) + weights[a] * weights[b] / sum(weights.values()) ** 2
    mean = sum(mass * mpmath.log(m) for m, mass in masses.items())
    spread = mpmath.sqrt(sum(mass * (mpmath.log(m) - mean) ** 2 for m, mass in masses.items()))
    law, other = MultiplicativeSum(one, at, 2), MultiplicativeSum(one, Fraction(1, 3), 2)
    with balls(120) as A:
        other.cdf(A, 9)
        for v in range(1, 40):
            below = sum(mass for m, mass in masses.items() if m <= v)
            part = sum(mass * (mean - mpmath.log(m)) for m, mass in masses.items() if m <= v)
            assert _near(law.density(A, v), masses.get(v, 0))
            assert _near(law.cdf(A, v), below)
            assert _near(law.shortfall(A, v), part if v < 36 else 0)
        assert _near(law.expectation(A), mean)
        assert _near(law.spread(A), spread)


def _near(ball: Any, wanted: Any) -> bool:
    return bool(abs(mpmath.mpf(ball.str(32, radius=False)) - wanted) < mpmath.mpf(10) ** -28)


@pytest.mark.parametrize(("first", "last", "n"), [(2, None, 2), (1, 6, 2), (3, 5, 3), (1, None, 3)])
def test_atoms_are_the_products_that_can_occur(first: int, last: int | None, n: int) -> None:
    law = MultiplicativeSum(Atoms(sp.Integer(1), x ** (-s), "x", "s", first, last), Fraction(3), n)
    end = 64 if last is None else last**n
    reached = {prod(ms) for ms in product(range(first, (last or end) + 1), repeat=n)}
    for v in range(first**n, end + 1):
        assert law.atom(v, -1) == max(m for m in reached if m <= v)
        assert law.atom(v, 1) == min(m for m in reached if m >= v)


def test_a_single_atom_is_undecided_and_not_searched_for_ever() -> None:
    """No other atom tells how the masses of two parameter values compare: on a bounded and on an endless support."""
    alone = Atoms(sp.Integer(1), x ** (-s), "x", "s", 3, 3)
    endless = Atoms(sp.Integer(1), x ** (-s), "x", "s", 3, None, table={3: Fraction(1)})
    for one in (alone, endless):
        law = MultiplicativeSum(one, Fraction(2), 2)
        with balls(64) as A, pytest.raises(UndecidedError, match="fewer than two atoms"):
            law._tilt(A, Fraction(3))
