"""The largest power over the null: enclosures that overlap, and a level of its own at each limit."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

from verify import Density, Problem, derive, review
from verify.arithmetic.enclosure import Enclosure
from verify.review.size import Size, _larger
from verify.review.style import Style

POISSON = Density(
    "exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0", parameter="lam", space="lam > 0"
)
DERIVED = derive(POISSON)
TWO = Problem(POISSON, "8 <= lam <= 12", ("0.02", "0.05"), 1)
RIGHT = {"c1": "3", "c2": "18", "gamma1": "0.1803", "gamma2": "0.4596"}

points = st.fractions(0, 1, max_denominator=50)
intervals = st.tuples(points, points).map(lambda ends: Enclosure(min(ends), max(ends)))


@given(intervals, intervals, st.data())
def test_the_larger_of_two_numbers_lies_in_its_enclosure(a, b, data) -> None:
    x, y = (data.draw(st.fractions(e.lower, e.upper)) for e in (a, b))
    found = _larger(Size(a, "a", Fraction(1)), Size(b, "b", Fraction(1)))
    assert found.value.contains(max(x, y))
    assert found.value.lower in (a.lower, b.lower)


def test_a_wide_enclosure_is_not_outvoted_by_its_middle() -> None:
    exact, wide = Enclosure.of(Fraction(7, 10)), Enclosure(Fraction(1, 5), Fraction(1))
    found = _larger(Size(exact, "8", Fraction(1)), Size(wide, "t -> oo", Fraction(1)))
    assert (found.value, found.at) == (Enclosure(Fraction(7, 10), Fraction(1)), "8")


def test_each_limit_of_an_interval_null_is_held_to_its_own_level() -> None:
    """SciPy: E phi is 0.0200 at lam = 8 and 0.0500 at lam = 12."""
    powers = []
    for mean in (8, 12):
        law = stats.poisson(mean)
        powers.append(law.cdf(2) + law.sf(18) + 0.1803 * law.pmf(3) + 0.4596 * law.pmf(18))
    found = review(TWO, derivation=DERIVED, digits=20, **RIGHT)
    assert found.verdict == "agrees"
    assert powers == pytest.approx([0.02, 0.05], abs=1e-5)
    assert found.consequences.size.value.upper - found.consequences.size.level < Fraction(1, 10**4)
    assert float(found.consequences.size.value.mid) == pytest.approx(powers[int(found.consequences.size.at == "12")])


def test_a_test_without_fractions_at_two_levels() -> None:
    """{V < 3 or V > 18} keeps both levels, and so does no region larger by one point."""
    kept = review(TWO, derivation=DERIVED, digits=20, c1="3", c2="18")
    assert (kept.verdict, kept.consequences.level_kept) == ("agrees", True)
    loose = review(TWO, derivation=DERIVED, digits=20, c1="4", c2="17")
    assert (loose.verdict, loose.consequences.level_kept) == ("differs", False)


def test_a_peak_between_the_limits_is_held_to_the_larger_level() -> None:
    """Rejecting inside an interval null: its peak, near lam = 9.5, is the size (SciPy's grid)."""
    found = review(TWO, derivation=DERIVED, digits=20, style=Style(region="reject inside"), c1="8", c2="12")
    peak = max(stats.poisson(8 + k / 1000).cdf(11) - stats.poisson(8 + k / 1000).cdf(8) for k in range(4001))
    assert found.consequences.level_kept is False
    assert float(found.consequences.size.value.mid) == pytest.approx(peak, abs=1e-6)
