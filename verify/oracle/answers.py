"""Proven solutions, each found once."""

from __future__ import annotations

import os
from functools import lru_cache
from pathlib import Path
from typing import Any

from verify.answers.row import holds_everywhere
from verify.derivation.derive import Derivation, derive
from verify.derivation.ledger import Grade
from verify.errors import InputError, UndecidedError
from verify.oracle.settings import DIGITS
from verify.problem.casefile import Case, read_case
from verify.problem.density import Density
from verify.problem.numbers import Exact
from verify.problem.problem import Problem
from verify.solution.solve import MOST_DIGITS, Solution, solve

SPARE = 10
"""Digits proved beyond those that are compared."""
MOST_ASKED = MOST_DIGITS - SPARE


class Answers:
    """Hands out proven solutions and keeps them.

    Parameters
    ----------
    root : Path
        Where a relative path is looked for when it is not found from the current folder.
    digits : int
        Digits to prove unless a call asks for others.
    """

    def __init__(self, root: Path, digits: int = DIGITS) -> None:
        self.root, self.digits = root, digits
        self.kept: dict[tuple[Problem, int], Solution] = {}

    def __call__(self, asked: Any, *, digits: int | None = None, **question: Any) -> Solution:
        """Return the proven solution of a problem, of a case file, or of a density with ``null=, alpha=, n=``."""
        __tracebackhide__ = True
        try:
            problem = problem_of(self._found(asked), **question)
            key = (problem, digits or self.digits)
            if key not in self.kept:
                self.kept[key] = proven(problem, key[1])
            return self.kept[key]
        except (InputError, UndecidedError) as error:
            raise error.with_traceback(None) from None  # in a test, the line that asked is shown, and none of ours

    def _found(self, asked: Any) -> Any:
        if isinstance(asked, str | Path) and not os.path.exists(asked) and (self.root / asked).exists():
            return self.root / asked
        return asked


def problem_of(asked: Any, **question: Any) -> Problem:
    """Return the problem that something stands for.

    Raises
    ------
    InputError
        For anything else than a problem, a case, a path, or a density with its question.
    """
    if isinstance(asked, Density):
        return Problem(asked, **question)
    if question:
        raise InputError("a question beside a problem", "give null=, alpha= and n= with a density only", key="asked")
    if isinstance(asked, str | Path):
        asked = read_case(asked)
    if isinstance(asked, Case):
        return asked.require_problem()
    if not isinstance(asked, Problem):
        right = "give a Problem, a Solution, the path of a case file, or a Density with null=, alpha= and n="
        raise InputError(f"{type(asked).__name__} is no problem", right, key="asked")
    return asked


def proven_to(digits: int, asked: Any) -> Solution:
    """Return a solution with which so many digits can be compared.

    Raises
    ------
    InputError
        For a number of digits that cannot be, and a solution that has no more of them itself.
    """
    if not isinstance(digits, int) or isinstance(digits, bool) or not 1 <= digits <= MOST_ASKED:
        raise InputError(f"{digits!r} digits", f"ask for 1 to {MOST_ASKED}", key="digits")
    if isinstance(asked, Solution) and asked.digits <= digits:
        right = f"prove more of them: digits={digits + SPARE}"
        raise InputError(f"{digits} digits asked for of a solution with {asked.digits}", right, key="digits")
    return proven(asked, max(DIGITS, digits + SPARE))


def proven(asked: Any, digits: int) -> Solution:
    """Return a solution whose derivation holds.

    Raises
    ------
    UndecidedError
        When a step of the derivation is open or refuted: then nothing is proved.
    """
    if isinstance(asked, Solution):
        _require_firm(asked)
        return asked
    problem = problem_of(asked)
    derivation = _derivation_for(problem)
    _require_firm(derivation)
    solution = solve(problem, digits=digits, derivation=derivation)
    _require_firm(solution)
    return solution


def _require_firm(found: Solution | Derivation) -> None:
    if found.grade in (Grade.REFUTED, Grade.UNDECIDED):
        weak = [step for step in found.steps if step.grade in (Grade.REFUTED, Grade.UNDECIDED)]
        raise UndecidedError(f"there is no proven solution: {'; '.join(map(str, weak))}")


def _derivation_for(problem: Problem) -> Derivation:
    """Return one derivation for all problems about a density, where it holds whatever the limits."""
    once = _derived(problem.density, ())
    return once if holds_everywhere(once) else _derived(problem.density, problem.hypothesis.limits)


@lru_cache(maxsize=128)
def _derived(density: Density, limits: tuple[Exact, ...]) -> Derivation:
    return derive(density, limits=limits)
