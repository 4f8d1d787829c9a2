"""Proven solutions, each found once."""

from __future__ import annotations

import os
from pathlib import Path
from typing import Any

from verify.derivation.ledger import Grade
from verify.errors import InputError, UndecidedError
from verify.oracle import DIGITS
from verify.problem.casefile import Case, read_case
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import Solution, solve


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
        problem = problem_of(self._found(asked), **question)
        key = (problem, digits or self.digits)
        if key not in self.kept:
            self.kept[key] = proven(problem, key[1])
        return self.kept[key]

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
        if asked.problem is None:
            raise InputError("the case asks nothing", "add [problem]", key="problem", file=asked.path)
        return asked.problem
    if not isinstance(asked, Problem):
        right = "give a Problem, a Solution, the path of a case file, or a Density with null=, alpha= and n="
        raise InputError(f"{type(asked).__name__} is no problem", right, key="asked")
    return asked


def proven(asked: Any, digits: int) -> Solution:
    """Return a solution whose derivation holds.

    Raises
    ------
    UndecidedError
        When a step of the derivation is open or refuted: then nothing is proved.
    """
    solution = asked if isinstance(asked, Solution) else solve(problem_of(asked), digits=digits)
    weak = [step for step in solution.steps if step.grade in (Grade.REFUTED, Grade.UNDECIDED)]
    if solution.grade in (Grade.REFUTED, Grade.UNDECIDED):
        why = "; ".join(map(str, weak))
        raise UndecidedError(f"there is no proven solution: {why}")
    return solution
