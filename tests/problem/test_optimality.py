"""Which theorem speaks for which test, and what each claims, against linear programming and the tests themselves."""

from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import optimize, stats

from verify import Density, Problem, derive, solve
from verify.problem.hypothesis import Form
from verify.problem.optimality import optimality

POISSON = Density(
    "exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0", parameter="lam", space="lam > 0"
)
BINOMIAL = Density(
    "binomial(10, x)*p**x*(1-p)**(10-x)", variable="x", support="integers 0..10", parameter="p", space="0 < p < 1"
)


@pytest.mark.parametrize(
    ("form", "levels", "place", "sense"),
    [
        (Form.ONE_SIDED, ("1/20",), "Theorem 3.4.1", "uniformly most powerful"),
        (Form.OUTSIDE, ("1/20", "1/20"), "Theorem 3.7.1", "uniformly most powerful"),
        (Form.INTERVAL, ("1/20", "1/20"), "section 4.2", "uniformly most powerful unbiased"),
        (Form.POINT, ("1/20",), "section 4.2", "uniformly most powerful unbiased"),
        (Form.OUTSIDE, ("1/50", "1/20"), "Theorem 3.6.1", "most powerful at every alternative among"),
        (
            Form.INTERVAL,
            (Fraction(1, 50), Fraction(1, 20)),
            "Theorem 3.6.1",
            "most powerful at every alternative among",
        ),
    ],
)
def test_each_case_has_its_theorem(form, levels, place, sense) -> None:
    """Places in Lehmann and Romano 2005 (3rd ed.), from memory."""
    found = optimality(form, levels)
    assert found.source == f"Lehmann and Romano 2005, {place}"
    assert found.sense.startswith(sense)


def test_with_two_levels_a_test_need_not_be_unbiased() -> None:
    """Poisson, 8 <= lam <= 12 at levels 0.02 and 0.05: rejected less often at lam = 7 than at lam = 12."""
    two = solve(Problem(POISSON, "8 <= lam <= 12", ("0.02", "0.05"), 1), 20)
    assert two.power("7").upper < Fraction(4, 100) < Fraction(5, 100) <= two.power("12").upper
    one = solve(Problem(POISSON, "8 <= lam <= 12", "0.05", 1), 20)
    assert min(one.power(t).lower for t in ("7", "13")) > Fraction(5, 100)
    assert not any("4.2" in (step.reason or "") for step in two.steps if step.name == "numbers")
    assert any("4.2" in (step.reason or "") for step in one.steps if step.name == "numbers")


DERIVED = derive(BINOMIAL)


@given(
    st.sampled_from([("0.4 <= p <= 0.6", (0.2, 0.35, 0.65, 0.8)), ("p <= 0.4 or p >= 0.6", (0.45, 0.5, 0.58))]),
    st.sampled_from(["1/50", "1/20", "1/10"]),
    st.sampled_from(["1/40", "1/20", "1/10"]),
)
@settings(max_examples=12, deadline=None)
def test_no_test_with_the_same_two_expectations_has_more_power(asked, first, second) -> None:
    """SciPy's linear programming over all critical functions on 0..10 finds the same greatest power."""
    null, alternatives = asked
    solution = solve(Problem(BINOMIAL, null, (first, second), 1), 20, DERIVED)
    k = range(11)
    rows = [stats.binom(10, p).pmf(k) for p in (0.4, 0.6)]
    for p in alternatives:
        best = optimize.linprog(
            -stats.binom(10, p).pmf(k), A_eq=rows, b_eq=[float(Fraction(a)) for a in (first, second)], bounds=(0, 1)
        )
        assert float(solution.power(str(p)).mid) == pytest.approx(-best.fun, abs=1e-9)
