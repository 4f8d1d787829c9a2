"""Windows known to twenty digits: the proof has them, the comparison names what doubles get wrong.

The values are recorded from a computation in Arb balls at rising precision, each by two routes.
"""

from fractions import Fraction

import pytest
from build import density, solved

from verify.comparison.compare import compare
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import solve

CHI_SQUARE = [
    (1, "1/20", "0.0031593294235925554679", "7.8168344865367104084"),
    (3, "1/100", "0.10104841077181396133", "15.126948580054699071"),
    (10, "1/1000000", "0.32429608388869040549", "50.879973474003011992"),
    (100, "1/20", "74.743607417710949844", "130.39100590562287153"),
    (1000000, "1/20", "997230.75227097098868", "1002774.3696753933462"),
]
"""Degrees of freedom, level, cutoffs of the unbiased variance test: n observations of N(0, v), v = 1."""

POISSON = [
    (5, "1/20", 1, 10, "0.67547159257243044625", "0.37558069867595186313"),
    (100, "1/20", 81, 120, "0.51924918352702647139", "0.24265466550275030507"),
    (10000, "1/20", 9805, 10197, "0.14288193307590195041", "0.86241583504678063627"),
    (100000000, "1/20", 99980401, 100019600, "0.50037652801693400833", "0.21989594081816695646"),
    (50, "1/1000000", 20, 88, "0.10862442127480266117", "0.061485994714189108653"),
]
"""Mean, level, cutoffs, fractions of the unbiased test of a Poisson mean."""

BINOMIAL = [
    (10, "1/5", "1/20", 0, 5, "1229031/4194304", "26405/57344"),
    (10, "1/2", "1/20", 2, 8, "73/225", "73/225"),
    (20, "1/3", "1/100", 2, 12, "467301967/3112960000", "478317923/5374720000"),
]
"""Trials, probability, level, cutoffs, fractions."""


def close(enclosure, text: str) -> bool:
    return abs(enclosure.mid / Fraction(text) - 1) < Fraction(2, 10**19)


def flags(comparison, route):
    return {(flag.kind, flag.number) for flag in comparison.flags if flag.route == route}


@pytest.mark.parametrize(("df", "alpha", "c1", "c2"), CHI_SQUARE)
def test_chi_square(df, alpha, c1, c2):
    solution = solved("normal variance", "t = 1", alpha, n=df)
    assert close(solution.c1, c1)
    assert close(solution.c2, c2)
    comparison = compare(solution)
    assert {kind for kind, _ in flags(comparison, "SciPy")} <= ({"few digits"} if df > 10**5 else set())
    assert all(opinion.digits.get("c1", 16) >= 3 for opinion in comparison.opinions)


@pytest.mark.parametrize(("mean", "alpha", "c1", "c2", "gamma1", "gamma2"), POISSON)
def test_poisson(mean, alpha, c1, c2, gamma1, gamma2):
    solution = solved("poisson", f"t = {mean}", alpha)
    assert (solution.c1.mid, solution.c2.mid) == (c1, c2)
    assert close(solution.gamma1, gamma1)
    assert close(solution.gamma2, gamma2)
    comparison = compare(solution)
    assert all(opinion.digits["c1"] == opinion.digits["c2"] == 16 for opinion in comparison.opinions)
    if mean == 10**8:  # errors of 4e-4 in the fractions
        assert {("few digits", "gamma1"), ("few digits", "gamma2")} <= flags(comparison, "SciPy")
        assert {("few digits", "gamma1"), ("few digits", "gamma2")} <= flags(comparison, "brute force")
    else:
        assert comparison.flags == ()


@pytest.mark.parametrize(("trials", "p", "alpha", "c1", "c2", "gamma1", "gamma2"), BINOMIAL)
def test_binomial(trials, p, alpha, c1, c2, gamma1, gamma2):
    bernoulli = density("bernoulli")
    solution = solve(Problem(bernoulli, null=f"t = {p}", alpha=alpha, n=trials), digits=30)
    assert (solution.c1.mid, solution.c2.mid) == (c1, c2)
    assert solution.gamma1.contains(Fraction(gamma1))
    assert solution.gamma2.contains(Fraction(gamma2))
    assert compare(solution).flags == ()


@pytest.mark.parametrize(("trials", "alpha"), [(5, "1/16"), (6, "1/32")])
def test_four_descriptions_of_one_test_are_called_a_tie_or_agree(trials, alpha):
    comparison = compare(solved("bernoulli", "t = 1/2", alpha, n=trials))
    assert all(flag.kind == "cutoffs differ" and "tie" in flag.text for flag in comparison.flags)


def test_a_mean_of_1e12_breaks_the_quantile():
    comparison = compare(solved("poisson", "t = 1000000000000"))
    failed = [flag for flag in comparison.flags if flag.kind == "solver failed"]
    assert [flag.route for flag in failed] == ["SciPy"]
    assert "nan" in failed[0].text
    assert comparison.opinions[1].note.startswith("not attempted")


def test_half_a_degree_of_freedom():
    gamma = Density("x**(1/4-1)*exp(-x/(2*t))/(gamma(1/4)*(2*t)**(1/4))", variable="x", support="reals > 0",
                    parameter="t", space="t > 0")  # fmt: skip
    solution = solve(Problem(gamma, null="t = 1", alpha="1/100", n=1), digits=30)
    assert close(solution.c1, "1.1404545992744244509e-8")
    assert close(solution.c2, "10.311244400865132854")
    assert compare(solution).flags == ()
