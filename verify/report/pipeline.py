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
    from verify.solution.solve import Solution


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
        return solver(cache)(case.require_problem(), digits, derivation)
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
    case.require_problem()
    derivation = derive_case(case, budget=budget)
    if not derivation.carries_numbers:
        return CaseRun(case, derivation)
    solution = solve_case(case, derivation, digits=digits, cache=cache)
    if not with_comparison:
        return CaseRun(case, derivation, solution)
    from verify.comparison.compare import compare

    return CaseRun(case, derivation, solution, compare(solution))
