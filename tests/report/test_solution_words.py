"""The words around a solution: on which side it rejects and why, and how far its optimality was shown."""

from dataclasses import replace

import pytest

from verify.derivation.ledger import Grade
from verify.problem.casefile import read_case
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.report.pipeline import run_case
from verify.report.solution_text import solution_text
from verify.report.text import run_text
from verify.solution.solve import solve


def text_of(formula: str, support: str, space: str, null: str, title: str = "case") -> str:
    case = f'''title = "{title}"
[density]
formula = "{formula}"
variable = "x"
support = "{support}"
parameter = "t"
space = "{space}"
[problem]
null = "{null}"
alpha = "0.05"
n = 4
'''
    return run_text(run_case(read_case("-", text=case), digits=15, with_comparison=False))


@pytest.mark.parametrize(
    ("formula", "support", "null", "side", "rule"),
    [
        ("t*exp(-t*x)", "reals > 0", "t <= 1", "Q(t) is decreasing, so a larger t makes V stochastically", "V < c"),
        ("t*exp(-t*x)", "reals > 0", "t >= 1", "Q(t) is decreasing, so a smaller t makes V", "V > c"),
        ("exp(-x/t)/t", "reals > 0", "t <= 1", "Q(t) is increasing, so a larger t makes V", "V > c"),
        ("t*(1-x)**(t-1)", "reals in (0, 1)", "t >= 3", "Q(t) is increasing, so a smaller t makes V", "V < c"),
    ],
)
def test_a_one_sided_test_says_why_it_rejects_on_its_side(formula, support, null, side, rule) -> None:
    text = " ".join(text_of(formula, support, "t > 0", null).split())
    assert side in text
    assert f"reject when {rule}" in text


def test_optimality_is_claimed_only_as_far_as_monotonicity_was_shown() -> None:
    density = Density("t*exp(-t*x)", variable="x", support="reals > 0", parameter="t", space="t > 0")
    solution = solve(Problem(density, null="t = 1", alpha="0.05", n=4), digits=15)
    claim = "among parameter values for which Q is shown to be monotone"
    assert claim not in " ".join(solution_text(solution).split())
    steps = solution.derivation.steps
    weaker = tuple(replace(step, grade=Grade.ENCLOSED) if step.name == "monotonicity" else step for step in steps)
    weak = replace(solution, derivation=replace(solution.derivation, steps=weaker))
    assert claim in " ".join(solution_text(weak).split())


def test_digits_of_a_density_that_was_only_checked_say_what_they_lean_on() -> None:
    density = Density("t*exp(-t*x)", variable="x", support="reals > 0", parameter="t", space="t > 0")
    solution = solve(Problem(density, null="t = 1", alpha="0.05", n=4), digits=15)
    assert "Leans on" not in solution_text(solution)
    steps = solution.derivation.steps
    weaker = tuple(replace(step, grade=Grade.CHECKED) if step.name == "normalisation" else step for step in steps)
    weak = replace(solution, derivation=replace(solution.derivation, steps=weaker))
    assert "Leans on the density as written: its normalisation, only checked numerically above" in " ".join(
        solution_text(weak).split()
    )


def test_controls_in_a_title_are_shown_not_obeyed() -> None:
    text = text_of("t*exp(-t*x)", "reals > 0", "t > 0", "t <= 1", title="\\u001b[2Jnew")
    assert text.startswith("[U+001B][2Jnew")
