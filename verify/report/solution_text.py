"""The solved test as text: in which sense it is optimal, when it rejects, numbers, side conditions."""

from __future__ import annotations

from typing import TYPE_CHECKING

from verify.derivation.ledger import MONOTONICITY, NONNEGATIVITY, NORMALISATION, Grade
from verify.problem.optimality import optimality
from verify.report.equations import equation_lines
from verify.report.layout import field, heading, number

if TYPE_CHECKING:
    from verify.solution.solve import Solution

REJECTS = {
    "inside": "reject when c1 < V < c2",
    "outside": "reject when V < c1 or V > c2",
    "above": "reject when V > c",
    "below": "reject when V < c",
}


def solution_text(solution: Solution) -> str:
    """Return the third section of a report."""
    lines = [
        heading(3, f"Solved to {solution.digits} digits", solution.grade.value),
        field("Optimal", _optimality(solution)),
        *_direction(solution),
        *_footing(solution),
        *cutoff_lines(solution),
    ]
    return "\n".join([*lines, "", *equation_lines(solution)])


def cutoff_lines(solution: Solution) -> list[str]:
    """Return the rule of the test and its numbers, a line each."""
    numbers = [number(name, value.text(solution.digits_of(name)), 6) for name, value in solution.numbers.items()]
    return [field("Test", _rule(solution)), "", *numbers]


def _optimality(solution: Solution) -> str:
    optimal = str(optimality(solution.form, solution.problem.levels))
    monotone = solution.derivation.step(MONOTONICITY)
    if monotone is not None and monotone.grade is not Grade.PROVED:
        return f"{optimal}, among parameter values for which Q is shown to be monotone (see above)"
    return optimal


def _direction(solution: Solution) -> list[str]:
    """Say why a one-sided test rejects on its side of V."""
    if solution.rejects not in ("above", "below"):
        return []
    t, up = solution.problem.density.parameter, solution.derivation.rising
    side, size = ("larger" if solution.problem.hypothesis.null_below else "smaller"), solution.rejects == "above"
    return [field("Side", f"Q({t}) is {'increasing' if up else 'decreasing'}, so a {side} {t} makes V stochastically "
                  f"{'larger' if size else 'smaller'}")]  # fmt: skip


def _footing(solution: Solution) -> list[str]:
    """Say that the digits are those of the density as written, where it was not proved to be one."""
    names = (NONNEGATIVITY, NORMALISATION)
    open_ = [step.name for step in solution.derivation.steps if step.name in names and step.grade is Grade.CHECKED]
    if not open_:
        return []
    return [field("Leans on", f"the density as written: its {' and '.join(open_)}, only checked numerically above, "
                  "may hold to fewer digits than are shown here")]  # fmt: skip


def _rule(solution: Solution) -> str:
    """Say when the test rejects."""
    rule = REJECTS[solution.rejects]
    if solution.gamma is not None:
        return f"{rule}; at V = c with probability gamma"
    if solution.gamma1 is None:
        return rule
    if _two_atoms(solution):
        return "reject with probability alpha whatever is observed: V has two values only"
    if solution.c1 == solution.c2:
        other = "never" if solution.rejects == "inside" else "always"
        return f"at V = c1 = c2 reject with probability gamma1 = gamma2; {other} elsewhere"
    return f"{rule}; at V = c1, c2 with probability gamma1, gamma2"


def _two_atoms(solution: Solution) -> bool:
    """Whether V has two values and the levels are equal, which leaves nothing but phi = alpha."""
    low, high = solution.laws[0].support
    few = low is not None and high is not None and high - low == 1
    return solution.laws[0].lattice and few and len(set(solution.problem.levels)) == 1
