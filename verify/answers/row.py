"""One row of a table of answers, computed from texts alone, in whichever process."""

from __future__ import annotations

from functools import lru_cache
from typing import TYPE_CHECKING, Any

from verify.answers.columns import numbers_of
from verify.answers.grid import Design, base_problem, problem_of_design
from verify.derivation.derive import Derivation, derive
from verify.derivation.ledger import Grade, Step
from verify.errors import InputError, UndecidedError
from verify.memory import solver
from verify.parallel.cluster import engines
from verify.problem.casefile import Case, read_case
from verify.report.json_form import enclosure_json
from verify.report.pipeline import carries_solution

if TYPE_CHECKING:
    from verify.arithmetic.enclosure import Enclosure
    from verify.solution.solve import Solution

Record = dict[str, Any]


class Asker:
    """Answers the designs of one grid; it pickles as texts, and derives once a process.

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

    def refusal(self) -> Step | None:
        """Return the step of the derivation that forbids a table, if there is one."""
        derivation = setting(self.path, self.text, self.budget)[1]
        weak = [step for step in derivation.steps if step.grade in (Grade.REFUTED, Grade.UNDECIDED)]
        return None if carries_solution(derivation) else min(weak, key=lambda step: step.grade is not Grade.REFUTED)

    def about(self) -> dict[str, str]:
        """Return what the rows depend on."""
        case = setting(self.path, self.text, self.budget)[0]
        return {**dict(engines()), "digits": str(self.digits), "case_sha256": case.sha256, "title": case.title}

    def __call__(self, design: Design) -> Record:
        """Return the record of a row: ``status`` says proved, undecided or unusable; nothing is raised for one row."""
        case, derivation = setting(self.path, self.text, self.budget)
        record = {"limits": design["limits"], "levels": design["levels"], "n": design["n"], "null": ""}
        try:
            problem = problem_of_design(base_problem(case), design)
            record["null"] = problem.hypothesis.text(problem.density.parameter)
            solution = solver(self.cache)(problem, self.digits, derivation)
        except InputError as error:
            return record | {"status": "unusable", "reason": str(error)}
        except UndecidedError as error:
            return record | {"status": "undecided", "reason": " ".join(str(error).split())}
        return record | numbers_record(solution)


@lru_cache(maxsize=4)
def setting(path: str, text: str, budget: float) -> tuple[Case, Derivation]:
    """Read the case and derive its density, once a process."""
    case = read_case(path, text)
    return case, derive(case.density, budget=budget)


def numbers_record(solution: Solution) -> Record:
    """Write the numbers of a solution."""
    record: Record = {"status": solution.grade.value, "reason": "", "rejects": solution.rejects}
    for name in numbers_of(solution.form):
        value: Enclosure | None = getattr(solution, name)
        if value is not None:
            ends = enclosure_json(value, solution.digits)
            record[name] = [ends["lower"], ends["upper"], nearest_double(value)]
    return record


def nearest_double(value: Enclosure) -> float | None:
    """Return the midpoint of an enclosure as a double; None where it does not fit into one."""
    try:
        return float(value.mid)
    except OverflowError:
        return None
