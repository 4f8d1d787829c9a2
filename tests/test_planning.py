"""Planning: sample sizes and decisions."""

from fractions import Fraction
from itertools import pairwise

import exhaustive
import pytest
from build import density, derivation, solved

from verify.errors import InputError
from verify.planning import Planner, accepting_at_the_ends, decide, observed_statistic
from verify.problem.problem import Problem


def planner(name: str, null: str, alpha: str, at: str) -> Planner:
    return Planner(Problem(density(name), null=null, alpha=alpha, n=1), derivation(name), at)


def exact_power(n: int, null: tuple[Fraction, Fraction], level: Fraction, at: Fraction) -> Fraction:
    """Power of the best test of Binomial(3 n, t), outside null, by exact fractions and every pair of cutoffs."""
    laws = [exhaustive.binomial(3 * n, t) for t in null]
    c1, c2, g1, g2 = exhaustive.inside(*laws, (level, level))
    there = exhaustive.binomial(3 * n, at)
    if c1 == c2:
        return g1 * there[c1]
    return g1 * there[c1] + g2 * there[c2] + sum(there[k] for k in range(c1 + 1, c2))


def test_smallest_sample_against_exact_fractions():
    null, level, at = (Fraction(1, 10), Fraction(9, 10)), Fraction(1, 10), Fraction(1, 2)
    plan = planner("binomial", "t <= 1/10 or t >= 9/10", "1/10", "1/2").smallest("0.6")
    powers = {n: exact_power(n, null, level, at) for n in range(1, plan.n + 1)}
    assert [n for n, power in powers.items() if power >= Fraction(6, 10)] == [plan.n]
    assert plan.power.contains(powers[plan.n])
    assert plan.power_before.contains(powers[plan.n - 1])


def test_power_never_falls_with_n():
    plan = planner("poisson", "t <= 2 or t >= 4", "0.05", "3")
    powers = [plan.power(n) for n in range(1, 15)]
    assert all(later.upper >= earlier.lower for earlier, later in pairwise(powers))


def test_scan_without_randomisation_sees_the_saw():
    """The conservative power is not monotone, so the first n that reaches a power may not keep it."""
    plan = planner("bernoulli", "t <= 1/2", "1/20", "4/5")
    powers = [float(plan.power_without_randomisation(n).mid) for n in range(1, 31)]
    assert any(later < earlier for earlier, later in pairwise(powers))
    scan = plan.without_randomisation("0.7", 30)
    above = [n for n, power in enumerate(powers, start=1) if power >= 0.7]
    assert scan.first == above[0]
    assert scan.stays == next((n for n in above if all(m in above for m in range(n, 31))), None)


def test_a_power_out_of_reach_is_an_input_error():
    with pytest.raises(InputError, match="still below"):
        planner("poisson", "t <= 2 or t >= 4", "0.05", "3").smallest("0.999", largest=4)
    with pytest.raises(InputError, match="outside the parameter space"):
        planner("poisson", "t <= 2 or t >= 4", "0.05", "-1")
    with pytest.raises(InputError, match="not a power"):
        planner("poisson", "t <= 2 or t >= 4", "0.05", "3").smallest("1.5")


def test_decisions():
    solution = solved("poisson", "t <= 8 or t >= 12", n=10)
    assert decide(solution, "98").says == "reject"
    assert decide(solution, "60").says == "do not reject"
    at_the_end = decide(solution, "94")
    assert at_the_end.says == "reject with probability phi"
    assert at_the_end.phi == solution.gamma1
    assert decide(solution, "94", u="0.05").after == "reject"
    assert decide(solution, "94", u="0.5").after == "do not reject"
    with pytest.raises(InputError, match="not a value of the statistic"):
        decide(solution, "94.5")
    with pytest.raises(InputError, match="not a number drawn"):
        decide(solution, "94", u="1")


def test_statistic_of_observed_data():
    solution = solved("normal variance", "t = 1", n=3)
    assert observed_statistic(solution, ["1", "0.5", "-2"]) == Fraction(21, 4)
    with pytest.raises(InputError, match="2 observations"):
        observed_statistic(solution, ["1", "2"])
    counts = solved("poisson", "t <= 8 or t >= 12", n=2)
    with pytest.raises(InputError, match="outside the support"):
        observed_statistic(counts, ["1.5", "2"])


def test_accepting_at_the_ends_loses_exactly_the_end_masses():
    solution = solved("binomial", "t <= 1/4 or t >= 3/4", n=4)
    law = solution.family.at(Fraction(1, 2), 4)
    full, cut = (test.power(law, 200) for test in (solution.critical, accepting_at_the_ends(solution.critical)))
    masses = exhaustive.binomial(12, Fraction(1, 2))
    lost = solution.gamma1.mid * masses[int(solution.c1.lower)] + solution.gamma2.mid * masses[int(solution.c2.lower)]
    assert abs(full.mid - cut.mid - lost) < Fraction(1, 10**25)


@pytest.mark.parametrize(
    ("null", "at"),
    [
        ("t <= 2", "2"),
        ("t <= 2 or t >= 4", "1"),
        ("t <= 2 or t >= 4", "4"),
        ("2 <= t <= 4", "3"),
        ("t = sqrt(2)", "2/sqrt(2)"),
        ("t >= 2*log(3)", "log(9)"),
    ],
)
def test_no_power_is_planned_in_the_null(null, at):
    """Equality of irrational numbers is decided, not rounded."""
    with pytest.raises(InputError, match="is in the null") as error:
        planner("poisson", null, "0.05", at)
    assert error.value.key == "at"


def test_a_hair_beyond_the_null_is_an_alternative():
    assert planner("poisson", "t <= 2", "0.05", "2 + 1e-60").at > 2
