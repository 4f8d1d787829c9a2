"""One case through the pipeline: asked, derived, solved, compared."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from verify.derivation.ledger import Grade, weakest
from verify.errors import InputError

if TYPE_CHECKING:
    from verify.comparison.compare import Comparison
    from verify.derivation.derive import Derivation
    from verify.problem.casefile import Case
    from verify.problem.problem import Problem
    from verify.solution.solve import Solution

CLAIMS = "claims"
"""Name of the step that judges what the case file claims; the solution does not lean on it."""


@dataclass(frozen=True)
class CaseRun:
    """What came of one case.

    Attributes
    ----------
    case : Case
        What was asked.
    derivation : Derivation
        The ledger.
    solution : Solution or None
        None when the derivation does not carry one (a step is refuted or undecided).
    comparison : Comparison or None
        The double-precision opinions; None when there is no solution or they were not wanted.
    """

    case: Case
    derivation: Derivation
    solution: Solution | None = None
    comparison: Comparison | None = None

    @property
    def grade(self) -> Grade:
        """Weakest grade; without a solution, undecided unless a step is refuted."""
        if self.solution is None:
            return weakest([self.derivation.grade, Grade.UNDECIDED])
        return weakest([self.derivation.grade, self.solution.grade])


def derive_case(case: Case, *, budget: float = 10.0) -> Derivation:
    """Derive the density of a case, with the limits, n and claims that the case states."""
    from verify.derivation.derive import derive

    problem = case.problem
    limits = problem.hypothesis.limits if problem else ()
    return derive(case.density, limits=limits, claim=case.claim, n=problem.n if problem else None, budget=budget)


def carries_solution(derivation: Derivation) -> bool:
    """Whether a solution can lean on it: the law is known and no step but the claims is refuted."""
    refuted = any(step.grade is Grade.REFUTED for step in derivation.steps if step.name != CLAIMS)
    return derivation.family is not None and not refuted


def problem_of(case: Case) -> Problem:
    """Return what a case asks of the parameter.

    Raises
    ------
    InputError
        When the case asks nothing (it has no ``[problem]``).
    """
    if case.problem is None:
        raise InputError("nothing to solve", 'add [problem] with null = "...", alpha = "0.05", n = 10',
                         key="problem", file=str(case.path))  # fmt: skip
    return case.problem


def solve_case(case: Case, derivation: Derivation, *, digits: int, cache: str | None = None) -> Solution:
    """Solve what a case asks, with a memory where ``cache`` names a directory; a complaint names the case's file.

    Raises
    ------
    InputError
        When the case asks nothing, or no test has its two levels.
    UndecidedError
        When the solution cannot be proved within its precision.
    """
    from verify.memory import solver

    try:
        return solver(cache)(problem_of(case), digits, derivation)
    except InputError as error:
        raise error.at(file=str(case.path)) from None


def run_case(
    case: Case, *, digits: int = 50, budget: float = 10.0, with_comparison: bool = True, cache: str | None = None
) -> CaseRun:
    """Take one case as far as it goes, with a memory where ``cache`` names a directory.

    Raises
    ------
    InputError
        When the case asks no question about the parameter (it has no ``[problem]``), or cannot be solved.
    UndecidedError
        When the solution cannot be proved within its precision.
    """
    problem_of(case)
    derivation = derive_case(case, budget=budget)
    if not carries_solution(derivation):
        return CaseRun(case, derivation)
    solution = solve_case(case, derivation, digits=digits, cache=cache)
    if not with_comparison:
        return CaseRun(case, derivation, solution)
    from verify.comparison.compare import compare

    return CaseRun(case, derivation, solution, compare(solution))
