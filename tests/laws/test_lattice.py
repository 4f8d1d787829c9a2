"""Lattice sums against exact fractions, closed forms and outside libraries."""

from fractions import Fraction
from itertools import product
from math import comb, factorial

import mpmath
import pytest
import sympy as sp

from verify import Density, Problem, derive, solve
from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.exact import rationals
from verify.errors import NotRational, UndecidedError
from verify.laws.atoms import Atoms
from verify.laws.lattice import LatticeSum
from verify.laws.poisson import Poisson

x, t = sp.Symbol("x", integer=True), sp.Symbol("t", positive=True)


def truncated_binomial(trials: int) -> Atoms:
    mass = sp.binomial(trials, x) * t**x * (1 - t) ** (trials - x)
    return Atoms(1 / (1 - (1 - t) ** trials), mass, "x", "t", 1, trials, space=(Fraction(0), Fraction(1)))


def truncated_poisson() -> Atoms:
    mean = t / (1 - sp.exp(-t))
    return Atoms(
        1 / (sp.exp(t) - 1),
        t**x / sp.factorial(x),
        "x",
        "t",
        1,
        None,
        space=(Fraction(0), None),
        mean=mean,
        variance=mean * (1 + t - mean),
    )


def skellam(size: int) -> Atoms:
    s = sp.Symbol("t", real=True)
    front = sp.exp(-size * (sp.exp(s) + sp.exp(-s)))
    return Atoms(
        front,
        sp.exp(s * x) * sp.besseli(x, 2 * size),
        "x",
        "t",
        None,
        None,
        mean=size * (sp.exp(s) - sp.exp(-s)),
        variance=size * (sp.exp(s) + sp.exp(-s)),
    )


def brute_force(trials: int, p: Fraction, n: int) -> dict[int, Fraction]:
    one = {k: comb(trials, k) * p**k * (1 - p) ** (trials - k) / (1 - (1 - p) ** trials) for k in range(1, trials + 1)}
    out: dict[int, Fraction] = {}
    for ks in product(one, repeat=n):
        mass = Fraction(1)
        for k in ks:
            mass *= one[k]
        out[sum(ks)] = out.get(sum(ks), Fraction(0)) + mass
    return out


@pytest.mark.parametrize("n", [1, 3])
def test_zero_truncated_binomial_equals_brute_force_exactly(n: int) -> None:
    masses, law, A = (
        brute_force(4, Fraction(1, 3), n),
        LatticeSum(truncated_binomial(4), Fraction(1, 3), n),
        rationals(),
    )
    mean = sum(v * m for v, m in masses.items())
    assert law.support == (n, 4 * n)
    assert law.expectation(A) == mean
    for v in range(n - 1, 4 * n + 2):
        assert law.density(A, v) == masses.get(v, 0)
        assert law.cdf(A, v) == sum(m for k, m in masses.items() if k <= v)
        assert law.sf(A, v) == sum(m for k, m in masses.items() if k > v)
        assert law.shortfall(A, v) == sum((mean - k) * m for k, m in masses.items() if k <= v)


def test_balls_contain_the_exact_values_at_two_parameter_values_and_precisions() -> None:
    one = truncated_binomial(5)
    for at in (Fraction(1, 3), Fraction(3, 7)):
        law = LatticeSum(one, at, 4)
        for prec in (64, 200):
            with balls(prec) as A:
                for v in (4, 9, 15, 20):
                    for name in ("density", "cdf", "sf", "shortfall"):
                        ball, exact = getattr(law, name)(A, v), getattr(law, name)(rationals(), v)
                        assert to_enclosure(ball).contains(exact), (at, prec, v, name)


def stirling(k: int, n: int) -> int:
    """Stirling number of the second kind, by inclusion and exclusion (DLMF 26.8.6)."""
    return sum((-1) ** j * comb(n, j) * (n - j) ** k for j in range(n + 1)) // factorial(n)


def test_zero_truncated_poisson_has_stirling_masses() -> None:
    """P(V = k) = n! S(k, n) t**k / (k! (e**t - 1)**n): T. Cacoullos, Ann. Math. Statist. 32 (1961) 904-905 (from
    memory).
    """
    one = truncated_poisson()
    with balls(160) as A:
        for at in (Fraction(3, 2), Fraction(2)):
            law = LatticeSum(one, at, 12)
            for k in (12, 19, 30):
                wanted = (
                    A.real(Fraction(factorial(12) * stirling(k, 12), factorial(k)) * at**k)
                    / (A.exp(A.real(at)) - 1) ** 12
                )
                found = law.density(A, k)
                assert found.overlaps(wanted)
                assert found.rel_accuracy_bits() > 120


def test_upper_tail_and_lower_tail_sum_to_one_on_a_long_table() -> None:
    law = LatticeSum(truncated_poisson(), Fraction(3, 2), 300)
    with balls(130) as A:
        centre = int(float(law.expectation(A)))
        for v in (centre - 60, centre, centre + 60):
            assert (law.cdf(A, v) + law.sf(A, v) - 1).contains(0)
            assert law.sf(A, v).rel_accuracy_bits() > 90


def test_two_sided_lattice_agrees_with_its_own_closed_form() -> None:
    """The sum of n Skellam variables is a Skellam variable with n times the rates."""
    with balls(160) as A:
        law, closed = LatticeSum(skellam(2), Fraction(1, 10), 5), LatticeSum(skellam(10), Fraction(1, 10), 1)
        for v in (-12, -1, 0, 3, 20):
            for name in ("density", "cdf", "sf", "shortfall"):
                first, second = getattr(law, name)(A, v), getattr(closed, name)(A, v)
                assert first.overlaps(second), (v, name)
                assert first.rel_accuracy_bits() > 100


def test_two_sided_lattice_agrees_with_mpmath() -> None:
    mpmath.mp.dps = 30
    rates = [2 * mpmath.exp(s * mpmath.mpf(1) / 10) for s in (1, -1)]
    root = mpmath.sqrt(rates[0] / rates[1])
    wanted = sum(mpmath.exp(-5 * sum(rates)) * root**k * mpmath.besseli(k, 20) for k in range(-80, 4))
    with balls(120) as A:
        found = LatticeSum(skellam(2), Fraction(1, 10), 5).cdf(A, 3)
    assert abs(mpmath.mpf(found.mid().str(28, radius=False)) - wanted) < mpmath.mpf(10) ** -24


def test_poisson_through_the_general_route_agrees_with_the_closed_form() -> None:
    one = Atoms(sp.exp(-t), t**x / sp.factorial(x), "x", "t", 0, None, space=(Fraction(0), None), mean=t, variance=t)
    with balls(180) as A:
        for at in (Fraction(8), Fraction(12)):
            general, closed = LatticeSum(one, at, 10), Poisson(at * 10)
            for v in (50, 91, 108, 150):
                for name in ("density", "cdf", "sf", "shortfall"):
                    first, second = getattr(general, name)(A, v), getattr(closed, name)(A, v)
                    assert first.overlaps(second), (at, v, name)
                    assert first.rel_accuracy_bits() > 130


def test_kernel_is_divided_by_its_sum_and_matches_the_hypergeometric_law() -> None:
    """At odds ratio 1 the conditional law of a 2 x 2 table is hypergeometric."""
    kernel = sp.binomial(20, x) * sp.binomial(15, 12 - x) * t**x
    law = LatticeSum(Atoms(sp.Integer(1), kernel, "x", "t", 0, 12, normalised=False), Fraction(1), 1)
    for v in range(13):
        assert law.density(rationals(), v) == Fraction(comb(20, v) * comb(15, 12 - v), comb(35, 12))
    assert law.expectation(rationals()) == Fraction(12 * 20, 35)


def test_table_of_weights_with_a_gap() -> None:
    table = {0: Fraction(1), 1: Fraction(4), 2: Fraction(2), 4: Fraction(3)}
    law = LatticeSum(Atoms(sp.Integer(1), t**x, "x", "t", 0, 4, normalised=False, table=table), Fraction(2), 1)
    total = 1 + 8 + 8 + 48
    assert [law.density(rationals(), v) * total for v in range(5)] == [1, 8, 8, 0, 48]


def test_irrational_masses_are_not_rational() -> None:
    with pytest.raises(NotRational):
        LatticeSum(truncated_poisson(), Fraction(3, 2), 2).cdf(rationals(), 5)


def test_a_cut_that_is_too_early_would_be_seen() -> None:
    """The bound of the cut mass is really added: a two-sided answer off the table is an interval from 0."""
    law = LatticeSum(skellam(2), Fraction(0), 3)
    with balls(64) as A:
        far = law.cdf(A, -100_000)
    assert far.contains(0)
    assert far.upper() < 1e-30
    assert far.upper() > 0


def test_a_table_of_weights_reads_in_words() -> None:
    density = Density(
        weights=["1", "3", "5/2"], variable="x", support="integers 0..2", parameter="theta", space="theta > 0"
    )
    derivation = derive(density)
    law = "P(X = x) proportional to theta**x times the weights 1, 3, 5/2"
    assert derivation.family.text(n=3) == f"a sum of 3 independent terms, each from one observation with {law}"
    assert str(derivation.family.at(Fraction(2), 1)) == f"one term, from one observation with {law}, at theta = 2"
    (step,) = (step for step in derivation.steps if step.name == "factorisation")
    assert "h(x) = the weight of x" in step.statement


def test_moments_that_need_many_bits_do_not_stop_a_search() -> None:
    """Theta**(x**2) on 0..40 spans 2500 bits; at theta = 3 all mass but 1e-30 is at the top, so the cutoff is there."""
    density = Density(
        kernel="theta**(x**2)*gamma(x+1/3)",
        variable="x",
        support="integers 0..40",
        parameter="theta",
        space="theta > 0",
    )
    solution = solve(Problem(density, null="theta <= 3", alpha="0.05", n=2), digits=15)
    assert (solution.c.lower, solution.c.upper) == (2 * 40**2, 2 * 40**2)


@pytest.mark.parametrize(("first", "last"), [(2, 2), (2, None), (None, 2), (None, None)])
def test_a_single_atom_is_undecided_and_not_searched_for_ever(first: int | None, last: int | None) -> None:
    one = Atoms(sp.Integer(1), t**x, "x", "t", first, last, normalised=False, table={2: Fraction(1)})
    with balls(64) as A, pytest.raises(UndecidedError, match="fewer than two atoms"):
        one.ratio(A, Fraction(2), Fraction(3), 2)


def test_atoms_far_apart_or_below_the_place_are_found() -> None:
    """Masses t**y at 0 and 9000 only: their ratio for t = 2 and 3 is (2/3)**y."""
    one = Atoms(sp.Integer(1), t**x, "x", "t", 0, 9000, normalised=False, table={0: Fraction(1), 9000: Fraction(5)})
    with balls(64) as A:
        for near in (0, 1, 9000):
            C, rho = one.ratio(A, Fraction(2), Fraction(3), near)
            assert C.overlaps(A.real(1))
            assert rho.overlaps(A.real(Fraction(2, 3)))
