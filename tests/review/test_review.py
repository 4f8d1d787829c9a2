"""One claim: verdicts, other writings of the same test, what follows from a wrong one."""

from fractions import Fraction

import pytest
from scipy import optimize, stats

from verify import Density, InputError, Problem, derive, review
from verify.review.judge import _leaning
from verify.review.style import Style
from verify.review.verdict import Outcome, Verdict

POISSON = Density(
    "exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0", parameter="lam", space="lam > 0"
)
BINOMIAL = Density(
    "binomial(10, x)*p**x*(1-p)**(10-x)",
    variable="x",
    support="integers 0..10",
    parameter="p",
    space="0 < p < 1",
)
DERIVED = {}


def judged(density, null, alpha, n, style=None, claim=None, **numbers):
    key = (density.formula, str(claim))
    if key not in DERIVED:
        DERIVED[key] = derive(density, claim=claim or {})
    problem = Problem(density, null, alpha, n)
    return review(problem, style=style, claim=claim, derivation=DERIVED[key], digits=20, **numbers)


LOT = (POISSON, "lam <= 8 or lam >= 12", "0.05", 10)
RIGHT = {"c1": "94", "c2": "103", "gamma1": "0.0867", "gamma2": "0.5147"}


def slips(verdict) -> list[str]:
    return [slip.name for slip in verdict.slips]


def test_the_right_numbers_agree() -> None:
    verdict = judged(*LOT, **RIGHT)
    assert (verdict.verdict, verdict.off, verdict.slips) == ("agrees", (), ())
    assert verdict.correct_printed == RIGHT


@pytest.mark.parametrize(
    ("change", "verdict", "named"),
    [
        ({"gamma1": "0.0868"}, "last digit", []),
        ({"gamma1": "0.09", "gamma2": "0.5"}, "agrees", []),
        ({"gamma2": "0.51474449"}, "agrees", []),
        ({"gamma1": "0.086", "gamma2": "0.514"}, "last digit", ["truncated"]),
        ({"c1": "93"}, "differs", ["lower-off-by-one"]),
    ],
)
def test_digits_decide(change, verdict, named) -> None:
    found = judged(*LOT, **{**RIGHT, **change})
    assert (found.verdict, slips(found)) == (verdict, named)


@pytest.mark.parametrize(
    ("style", "given"),
    [
        (Style("mean"), {"c1": "9.4", "c2": "10.3", "gamma1": "0.0867", "gamma2": "0.5147"}),
        (Style("4"), {"c1": "23.5", "c2": "25.75", "gamma1": "0.0867", "gamma2": "0.5147"}),
        (Style(window="closed"), {"c1": "95", "c2": "102", "gamma1": "0.0867", "gamma2": "0.5147"}),
        (Style(window="closed"), RIGHT),
        (
            Style(region="reject inside", fractions="of acceptance"),
            {**RIGHT, "gamma1": "0.9133", "gamma2": "0.4853"},
        ),
    ],
)
def test_other_ways_of_reporting_agree(style, given) -> None:
    assert judged(*LOT, style=style, **given).verdict == "agrees"


def test_a_fraction_of_zero_is_the_next_point_with_one() -> None:
    """Binomial(20, p), 0.3 and 0.7 at 0.5: any exact tie has two writings, and a printed 0 or 1 must be
    read as both.
    """
    verdict = judged(BINOMIAL, "0.4 <= p <= 0.6", "0.1", 1, c1="1", c2="9", gamma1="0", gamma2="0")
    assert verdict.verdict == "differs"
    same = judged(BINOMIAL, "0.4 <= p <= 0.6", "0.1", 1, c1="0", c2="10", gamma1="1", gamma2="1")
    first, second = verdict.consequences, same.consequences
    assert first is not None
    assert second is not None
    assert [e.value.mid for e in first.expectations] == pytest.approx([e.value.mid for e in second.expectations])


def test_one_atom_is_read_with_one_fraction() -> None:
    """Binomial(10, p), 0.4 and 0.6, level 0.05: one atom, 5, with fraction 0.05 / P(V = 5) (exact:
    0.2491...).
    """
    mass = Fraction(252) * Fraction(4, 10) ** 5 * Fraction(6, 10) ** 5
    text = f"{float(Fraction(1, 20) / mass):.6f}"
    outside = (BINOMIAL, "p <= 0.4 or p >= 0.6", "0.05", 1)
    assert judged(*outside, c1="5", c2="5", gamma1=text, gamma2=text).verdict == "agrees"
    assert judged(*outside, c1="5", c2="5", gamma1=text).verdict == "agrees"
    assert judged(*outside, c1="5", c2="6", gamma1=text, gamma2="0").verdict == "agrees"


def test_the_size_is_at_the_peak_when_the_peak_lies_in_the_null() -> None:
    """Reject on 60 < V < 70 of a Poisson sum: its power peaks near 6.5, far inside the null t <= 8 (SciPy's
    peak).
    """
    verdict = judged(*LOT, c1="60", c2="70", gamma1="0", gamma2="0")
    size = verdict.consequences.size
    peak = optimize.minimize_scalar(
        lambda t: -(stats.poisson(10 * t).cdf(69) - stats.poisson(10 * t).cdf(60)),
        bounds=(5, 8),
        method="bounded",
    )
    assert float(size.value.mid) == pytest.approx(-peak.fun, abs=1e-9)
    assert size.value.radius < Fraction(1, 10**12)
    assert size.at.startswith("about 6.4")
    assert verdict.consequences.level_kept is False


def test_a_test_that_rejects_outside_under_an_outside_null_has_size_one() -> None:
    verdict = judged(*LOT, style=Style(region="accept inside"), c1="60", c2="140", gamma1="0.5", gamma2="0.5")
    size = verdict.consequences.size
    assert size.value.upper == 1
    assert size.value.lower > Fraction(999, 1000)
    assert "->" in size.at


def test_expectations_agree_with_brute_force() -> None:
    verdict = judged(*LOT, c1="91", c2="108", gamma1="0.32", gamma2="0.51")
    for e in verdict.consequences.expectations:
        law = stats.poisson(10 * float(e.at))
        value = sum(law.pmf(k) for k in range(92, 108)) + 0.32 * law.pmf(91) + 0.51 * law.pmf(108)
        assert float(e.value.mid) == pytest.approx(value, rel=1e-12)


def test_claims_without_fractions_are_judged_by_the_level() -> None:
    kept = judged(*LOT, c1="94", c2="103")
    assert (kept.verdict, kept.consequences.level_kept) == ("agrees", True)
    assert any("no region larger" in note for note in kept.notes)
    loose = judged(*LOT, c1="95", c2="103")
    assert loose.verdict == "differs"
    assert any("rejects at V = 95 is within the level" in note for note in loose.notes)
    wide = judged(*LOT, c1="90", c2="110")
    assert (wide.verdict, wide.consequences.level_kept) == ("differs", False)


def test_a_wrong_derivation_is_refuted_and_the_numbers_are_still_judged() -> None:
    verdict = judged(*LOT, claim={"natural_parameter": "lam"}, **RIGHT)
    assert verdict.verdict == "refuted"
    assert verdict.off == ()
    assert verdict.refuted_steps[0].name == "claims"


def test_a_density_that_is_no_family_is_refuted() -> None:
    cauchy = Density("1/(pi*(1+(x-m)**2))", variable="x", support="reals", parameter="m", space="reals")
    verdict = review(Problem(cauchy, "m <= 0", "0.05", 3), c="1.2")
    assert verdict.verdict == "refuted"
    assert verdict.numbers == {}


def test_the_claimed_statistic_sets_the_scale() -> None:
    normal = Density("exp(-(x-m)**2/2)/sqrt(2*pi)", variable="x", support="reals", parameter="m", space="reals")
    plain = judged(normal, "m <= -1 or m >= 1", "0.05", 4)
    assert plain.verdict == "agrees"
    found = judged(normal, "m <= 0", "0.05", 4, claim={"statistic": "3 - 2*x"}, c="5.421")
    assert found.correct_printed["c"] == "5.421"  # 3 * 4 - 2 * 3.2897
    assert found.verdict == "agrees"


@pytest.mark.parametrize(
    ("given", "key"),
    [
        ({"c1": "94"}, "c2"),
        ({"c": "94"}, "c"),
        ({"c1": "94", "c2": "103", "gamma1": "0.1"}, "gamma2"),
        ({**RIGHT, "gamma1": "1.2"}, "gamma1"),
        ({**RIGHT, "c1": "ninety"}, "c1"),
    ],
)
def test_unusable_numbers_are_refused_by_name(given, key) -> None:
    with pytest.raises(InputError) as error:
        judged(*LOT, **given)
    assert error.value.key == key


def test_one_sided_claims() -> None:
    law = stats.poisson(96)
    gamma = (0.025 - law.sf(116)) / law.pmf(116)
    enough = (POISSON, "lam <= 8", "0.025", 12)
    assert judged(*enough, c="116", gamma=f"{gamma:.5f}").verdict == "agrees"
    assert slips(judged(*enough, c="117", gamma=f"{gamma:.5f}")) == ["upper-off-by-one"]
    assert judged(*enough, c="116").verdict == "agrees"
    assert judged(*enough, c="116", style=Style(window="closed")).consequences.level_kept is False


def test_a_test_that_does_not_look_at_the_data_has_its_level_for_size() -> None:
    """One Bernoulli trial, outside null: the best test rejects with probability alpha whatever is seen."""
    one = Density("p**x*(1-p)**(1-x)", variable="x", support="integers 0..1", parameter="p", space="0 < p < 1")
    verdict = judged(one, "p <= 0.3 or p >= 0.7", "0.05", 1, c1="0", c2="1", gamma1="0.05", gamma2="0.05")
    assert verdict.verdict == "agrees"
    assert verdict.consequences.size.value.contains(Fraction(1, 20))
    assert verdict.consequences.size.value.radius < Fraction(1, 10**20)


def test_more_digits_are_proved_than_were_printed() -> None:
    text = "0.0867146646010230299332107679655377742"
    assert judged(*LOT, **{**RIGHT, "gamma1": text}).verdict == "agrees"
    assert judged(*LOT, **{**RIGHT, "gamma1": text[:-1] + "3"}).verdict == "last digit"


def test_a_cutoff_outside_the_support_leaves_a_one_sided_test() -> None:
    gamma = Density("exp(-x/t)/t", variable="x", support="reals > 0", parameter="t", space="t > 0")
    verdict = judged(gamma, "t <= 1 or t >= 2", "0.05", 5, c1="-1", c2="6.9")
    assert verdict.verdict == "differs"
    assert float(verdict.consequences.expectations[0].value.mid) == pytest.approx(stats.gamma(5).cdf(6.9))
    assert verdict.consequences.size.value.upper == 1


def test_a_window_off_the_support_never_rejects() -> None:
    """A sum of 12 counts that begin at 1 is at least 12: a window at 2 and 3, as for one count, rejects nowhere."""
    clumps = Density("p*(1-p)**(x-1)", variable="x", support="integers >= 1", parameter="p", space="0 < p < 1")
    verdict = judged(clumps, "p <= 0.3 or p >= 0.6", "0.05", 12, c1="2", c2="3", gamma1="0.16865", gamma2="0.09921")
    result = verdict.consequences
    assert (result.level_kept, result.size.value.upper) == (True, 0)
    assert slips(verdict) == ["n-left-out"]


def test_a_right_number_that_was_not_printed_agrees_when_it_is_printed() -> None:
    """Fractions asked of a colleague who gave none are rounded, not cut off."""
    given = judged(*LOT, c1="94", c2="103").correct_printed
    assert judged(*LOT, **given).verdict == "agrees"


def test_a_fraction_of_0_or_1_is_no_rounded_fraction() -> None:
    """0.0867 is not "0" and 0.5147 is not "1": a test that never, or always, rejects at a cutoff is another test."""
    assert judged(*LOT, c1="94", c2="103", gamma1="0", gamma2="1").verdict == "differs"
    assert judged(*LOT, c1="94", c2="103", gamma1="0.1", gamma2="0.5").verdict == "agrees"


def test_a_verdict_on_numbers_that_are_only_checked_says_so() -> None:
    density = Density("exp(-t*x**2)*2*sqrt(t/pi)/erf(sqrt(t))", variable="x", support="reals in [0, 1]",
                      parameter="t", space="t > 0")  # fmt: skip
    problem = Problem(density, null="t <= 1", alpha="0.05", n=2)
    derivation = derive(density, limits=problem.hypothesis.limits, n=2)
    verdict = _leaning(Verdict(Outcome.AGREES, problem, None, derivation))
    assert verdict.outcome is Outcome.AGREES
    assert any("checked numerically, not proved" in note for note in verdict.notes)
