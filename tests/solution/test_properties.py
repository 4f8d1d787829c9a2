"""Properties that hold for every problem of every law and form."""

from fractions import Fraction

import mpmath
import pytest
from build import DENSITIES, density, solved
from hypothesis import given, settings
from hypothesis import strategies as st

from verify.derivation.ledger import Grade

EPSILON = Fraction(1, 10**25)

INSIDE_UNIT = {"binomial", "bernoulli", "geometric", "geometric from 1", "negative binomial"}


@st.composite
def limits(draw, name):
    if name in INSIDE_UNIT:
        low = draw(st.fractions(Fraction(1, 20), Fraction(9, 10), max_denominator=20))
        return low, low + (1 - low) * draw(st.sampled_from([Fraction(1, 10), Fraction(1, 2), Fraction(1, 10**6)]))
    low = draw(st.fractions(Fraction(1, 4), Fraction(20), max_denominator=16))
    return low, low * (1 + draw(st.sampled_from([Fraction(1, 10), Fraction(1, 2), Fraction(1), Fraction(1, 10**6)])))


@st.composite
def problems(draw):
    name = draw(st.sampled_from(sorted(DENSITIES)))
    low, high = draw(limits(name))
    null = draw(st.sampled_from([f"t <= {low} or t >= {high}", f"{low} <= t <= {high}", f"t = {low}", f"t <= {low}",
                                 f"t >= {low}"]))  # fmt: skip
    level = draw(st.sampled_from(["1/20", "1/100", "1/3", "9/10", "1e-12"]))
    return name, null, level, draw(st.integers(1, 30))


@settings(max_examples=120)
@given(problems())
def test_the_side_conditions_are_enclosed_tightly(asked):
    solution = solved(*asked)
    for condition in solution.side_conditions:
        assert condition.expectation.contains(condition.target)
        assert condition.expectation.radius < EPSILON
    assert solution.grade is Grade.PROVED


@settings(max_examples=60)
@given(problems())
def test_fractions_are_canonical(asked):
    solution = solved(*asked)
    for gamma in (solution.gamma1, solution.gamma2, solution.gamma):
        if gamma is not None:
            assert 0 <= gamma.lower <= gamma.upper <= 1
            at_least = gamma.upper < 1 if solution.rejects == "outside" else gamma.lower > 0
            assert at_least


@settings(max_examples=60)
@given(problems())
def test_the_power_at_the_limits_is_the_level(asked):
    solution = solved(*asked)
    for condition in solution.side_conditions:
        if condition.of == "phi":
            power = solution.power(condition.at)
            assert power.contains(condition.target)


@pytest.mark.parametrize("name", sorted(DENSITIES))
def test_power_from_the_density_itself(name):
    """E phi by summing or integrating the user's own formula in mpmath, for n = 1."""
    low, high = ("1/4", "1/2") if name in INSIDE_UNIT else ("2", "3")
    solution = solved(name, f"t <= {low} or t >= {high}", "1/10")
    middle = Fraction(3, 8) if name in INSIDE_UNIT else Fraction(5, 2)
    expected = mean_of_phi(solution, density(name).expr, middle)
    assert abs(expected - float(solution.power(middle).mid)) < 1e-10


def mean_of_phi(solution, formula, t) -> float:
    """Sum or integrate phi(T(x)) f(x; t) over x, with SymPy numbers and mpmath."""
    import sympy

    x, parameter = (next(s for s in formula.free_symbols if s.name == name) for name in ("x", "t"))
    here = formula.subs(parameter, sympy.Rational(t.numerator, t.denominator))
    statistic = solution.derivation.statistic
    symbol = next(iter(statistic.free_symbols))
    if solution.laws[0].lattice:
        first = 1 if "from 1" in str(solution.problem.density.support) else 0
        total = 0.0
        for k in range(first, 60):
            mass = here.subs(x, k)
            if mass == 0 or solution.problem.density.parsed_support.upper < k:
                continue
            value = statistic.subs(symbol, k)
            total += float(mass) * float(solution.phi(str(value)).mid)
        return total
    f = sympy.lambdify(x, here, "mpmath")
    value = sympy.lambdify(symbol, statistic, "mpmath")
    c1, c2 = (mpmath.mpf(c.mid.numerator) / c.mid.denominator for c in (solution.c1, solution.c2))
    ends = sorted(
        mpmath.findroot(lambda v, c=c: value(v) - c, start)
        for c in (c1, c2)
        for start in STARTS[statistic.func.__name__](c)
    )
    return float(sum(mpmath.quad(f, pair) for pair in zip(ends[::2], ends[1::2], strict=True)))


STARTS = {
    "Symbol": lambda c: [c],
    "log": lambda c: [mpmath.exp(c)],
    "Pow": lambda c: [mpmath.sqrt(c), -mpmath.sqrt(c)],
}
"""Where T(x) = c, for the statistics of these densities."""


def test_close_cutoffs_are_told_apart_in_what_is_printed():
    """At a level of 1e-200 the window is about 1e-200 wide: the printed digits must still determine it."""
    solution = solved("normal mean", "t <= 0 or t >= 1", "1e-200", 4, digits=20)
    texts = [end.text(solution.cutoff_digits) for end in (solution.c1, solution.c2)]
    assert texts[0] != texts[1]
    width = solution.c2.mid - solution.c1.mid
    assert solution.c1.radius < width / 10**20
    assert abs(Fraction(texts[1]) - Fraction(texts[0]) - width) < width / 10**18
