"""One row of a table of answers, computed from texts alone, in whichever process."""

from __future__ import annotations

from functools import cached_property, lru_cache
from typing import TYPE_CHECKING, Any

from verify.answers.grid import Design, problem_of_design
from verify.derivation.derive import Derivation, derive
from verify.derivation.ledger import Grade, Step
from verify.errors import InputError, UndecidedError
from verify.memory import solver
from verify.problem.casefile import Case, read_case
from verify.problem.density import Density
from verify.problem.numbers import Exact
from verify.problem.problem import Problem
from verify.report.json_form import enclosure_json
from verify.versions import versions

if TYPE_CHECKING:
    from verify.arithmetic.enclosure import Enclosure
    from verify.solution.solve import Solution

Record = dict[str, Any]


class Asker:
    """Answers the designs of one grid. What it derived before it is pickled travels with it: all workers lean on that.

    Parameters
    ----------
    path, text : str
        The case file's name and contents.
    digits : int
        Significant digits to prove.
    budget : float
        Seconds for each symbolic step.
    cache : str or None
        Directory of remembered results.
    """

    def __init__(self, path: str, text: str, digits: int, budget: float, cache: str | None) -> None:
        self.path, self.text, self.digits, self.budget, self.cache = path, text, digits, budget, cache

    @cached_property
    def derivation(self) -> Derivation:
        """The derivation of the density, whatever the limits."""
        return derive(self.case.density, budget=self.budget)

    @property
    def case(self) -> Case:
        """The case file."""
        return _case(self.path, self.text)

    def refusal(self) -> Step | None:
        """Return the step of the derivation that forbids a table, if there is one."""
        derivation = self.derivation
        weak = [step for step in derivation.steps if step.grade in (Grade.REFUTED, Grade.UNDECIDED)]
        return None if derivation.carries_numbers else min(weak, key=lambda step: step.grade is not Grade.REFUTED)

    def about(self) -> dict[str, str]:
        """Return what the rows depend on."""
        case = self.case
        return {**dict(versions()), "digits": str(self.digits), "case_sha256": case.sha256, "title": case.title}

    def __call__(self, design: Design) -> Record:
        """Return the record of a row: ``status`` says proved, undecided or unusable; nothing is raised for one row."""
        record = {"limits": design["limits"], "levels": design["levels"], "n": design["n"], "null": ""}
        try:
            problem = problem_of_design(self.case.require_problem(), design)
            record["null"] = problem.hypothesis.text(problem.density.parameter)
            solution = solver(self.cache)(problem, self.digits, self._derivation_for(problem))
            _require_firm(solution)
        except InputError as error:
            return record | {"status": "unusable", "reason": str(error)}
        except UndecidedError as error:
            return record | {"status": "undecided", "reason": " ".join(str(error).split())}
        return record | numbers_record(solution)

    def _derivation_for(self, problem: Problem) -> Derivation:
        """Return the one derivation where it holds for all parameter values, else one that covers these limits."""
        if self.derivation.covers(problem.hypothesis.limits):
            return self.derivation
        return _derived(problem.density, problem.hypothesis.limits, self.budget)


def holds_everywhere(derivation: Derivation) -> bool:
    """Whether a derivation serves all limits: its natural parameter is proved to be monotone for every parameter."""
    step = derivation.step("monotonicity")
    return step is not None and step.grade is Grade.PROVED


@lru_cache(maxsize=4)
def _case(path: str, text: str) -> Case:
    """Read the case, once a process."""
    return read_case(path, text)


@lru_cache(maxsize=64)
def _derived(density: Density, limits: tuple[Exact, ...], budget: float) -> Derivation:
    return derive(density, limits=limits, budget=budget)


def _require_firm(solution: Solution) -> None:
    """Leave a row without numbers where they lean on an open or refuted step: at its limits, it alone may."""
    weak = [step for step in solution.steps if step.grade in (Grade.REFUTED, Grade.UNDECIDED)]
    if solution.grade in (Grade.REFUTED, Grade.UNDECIDED):
        raise UndecidedError("; ".join(f"{step.name} {step.grade.value}: {step.statement}" for step in weak))


def numbers_record(solution: Solution) -> Record:
    """Write the numbers of a solution."""
    record: Record = {"status": solution.grade.value, "reason": "", "rejects": solution.rejects}
    for name, value in solution.numbers.items():
        ends = enclosure_json(value, solution.digits_of(name))
        record[name] = [ends["lower"], ends["upper"], nearest_double(value)]
    return record


def nearest_double(value: Enclosure) -> float | None:
    """Return the midpoint of an enclosure as a double; None where it does not fit into one."""
    try:
        return float(value.mid)
    except OverflowError:
        return None
