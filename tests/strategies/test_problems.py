"""Generated problems have the law and the form asked for, and an answer that is proved or honestly open."""

import subprocess
import sys
from fractions import Fraction
from functools import cache

import pytest
from hypothesis import HealthCheck, find, given, settings
from hypothesis import strategies as st

from verify.derivation.derive import derive
from verify.derivation.ledger import Grade
from verify.errors import InputError
from verify.problem.hypothesis import Form
from verify.solution.solve import solve
from verify.strategies import FAMILIES, LAWS, problems
from verify.strategies.ties import beside, mass

derivation = cache(derive)


@pytest.mark.parametrize("family", FAMILIES, ids=lambda family: f"{family.law}: {family.formula}")
def test_every_density_has_the_law_it_is_listed_under(family):
    found = derivation(family.density)
    assert found.family is not None
    assert found.family.law.name == family.law
    assert found.grade in (Grade.PROVED, Grade.ENCLOSED)


@pytest.mark.parametrize("form", list(Form), ids=lambda form: form.value)
@pytest.mark.parametrize("law", LAWS)
@settings(max_examples=6)
@given(st.data())
def test_sane_problems_are_all_proved(law, form, data):
    problem = data.draw(problems(law, form))
    assert problem.hypothesis.form is form
    solution = solve(problem, digits=15, derivation=derivation(problem.density))
    assert solution.laws[0].name == law
    assert solution.grade is Grade.PROVED
    assert all(condition.expectation.contains(condition.target) for condition in solution.side_conditions)


@settings(max_examples=100, suppress_health_check=list(HealthCheck))
@given(problems(profile="adversarial", levels=2))
def test_adversarial_problems_are_well_formed(problem):
    levels = problem.levels
    assert all(0 < level < 1 for level in levels)
    assert len(levels) == len(problem.hypothesis.limits)
    assert 1 <= problem.n <= 10**7


@pytest.mark.parametrize(
    "wanted",
    [
        lambda p: p.levels[0] < Fraction(1, 10**150),
        lambda p: p.levels[0] > 1 - Fraction(1, 10**20),
        lambda p: p.n == 10**7,
        lambda p: len(p.hypothesis.limits) == 2 and not isinstance(p.hypothesis.limits[0], Fraction),
        lambda p: _gap(p) < Fraction(1, 10**18),
        lambda p: _gap(p) > 5000,
    ],
    ids=["tiny level", "level next to 1", "many observations", "irrational limits", "near limits", "far limits"],
)
def test_adversarial_problems_reach_the_extremes(wanted):
    quick = settings(max_examples=5000, database=None, suppress_health_check=list(HealthCheck))
    assert find(problems("Poisson", profile="adversarial"), wanted, settings=quick)


def _gap(problem) -> Fraction:
    limits = problem.hypothesis.limits
    if len(limits) == 1 or not all(isinstance(limit, Fraction) for limit in limits):
        return Fraction(1)
    return (limits[1] - limits[0]) / limits[0]


def test_ties_are_drawn():
    def exact(problem) -> bool:
        trials = problem.n * (problem.density.constant_values.get("m", Fraction(1)))
        masses = [mass(int(trials), Fraction(1, 2), k) for k in range(9)]
        return problem.n > 1 and problem.levels[0] in {2 * sum(masses[:reach], Fraction(0)) for reach in range(9)}

    quick = settings(max_examples=5000, database=None, suppress_health_check=list(HealthCheck))
    problem = find(problems("binomial", "point null", "adversarial"), exact, settings=quick)
    solution = solve(problem, digits=15, derivation=derivation(problem.density))
    assert solution.gamma1.exact
    assert solution.gamma1 == solution.gamma2


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        ({"law": "Cauchy"}, "law: no generated problems for 'Cauchy'; known: Poisson, binomial"),
        ({"form": "both"}, "form: no form 'both'; known: one-sided, outside null"),
        ({"profile": "evil"}, "profile: no profile 'evil'; known: sane, adversarial"),
        ({"levels": 3}, "levels: 3 levels; ask for 1 or 2"),
    ],
)
def test_what_is_not_known_is_refused(arguments, message):
    with pytest.raises(InputError, match=message):
        problems(**arguments)


def test_without_hypothesis_the_message_says_what_to_install():
    code = (
        "import sys; sys.modules['hypothesis'] = None\n"
        "from verify.errors import InputError\n"
        "try:\n    import verify.strategies\n"
        "except InputError as error: print(error)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.startswith("verify.strategies needs Hypothesis, which is not installed; run pip install ")


@pytest.mark.parametrize("level", [Fraction(1, 10**30), 1 - Fraction(1, 10**30), Fraction(1, 2)])
@pytest.mark.parametrize("share", [Fraction(1, 10**17), Fraction(-1, 10**17)])
def test_a_level_beside_a_tie_is_a_level(level, share):
    assert 0 < beside(level, share) < 1
    assert beside(level, share) != level
