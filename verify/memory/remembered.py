"""A solver with a memory."""

from __future__ import annotations

import json
import os
from collections.abc import Callable
from fractions import Fraction
from functools import cache
from typing import TYPE_CHECKING, Any

from verify.arithmetic.enclosure import Enclosure
from verify.memory.key import key_of
from verify.memory.reprove import continuous_tail, continuous_window, lattice_tail, lattice_window
from verify.memory.store import Store
from verify.problem.hypothesis import Form
from verify.solution.conditions import Conditions
from verify.solution.one_sided import TailProblem
from verify.solution.solve import Solution, family_of, rejects_above, solve, with_tail, with_window
from verify.solution.window import rough_laws

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.problem.problem import Problem

VARIABLE = "SIDECHECK_CACHE"
"""Environment variable that names the directory when no option does."""

Solver = Callable[["Problem", int, "Derivation"], Solution]


def cache_of(option: str | None) -> str | None:
    """Return the directory that an option or, without one, the environment names; None for no memory."""
    return option or os.environ.get(VARIABLE) or None


def solver(folder: str | None) -> Solver:
    """Return ``solve``, with a memory in this directory when one is given.

    Examples
    --------
    >>> solver(None) is solve
    True
    """
    return solve if folder is None else _remembered(folder).solve


@cache
def _remembered(folder: str) -> Remembered:
    return Remembered(Store(folder))


class Remembered:
    """Solves a problem, or proves again what it solved before.

    Parameters
    ----------
    store : Store
        Where results are kept.

    Attributes
    ----------
    found : int
        Answers that were remembered and proved again.
    """

    def __init__(self, store: Store) -> None:
        self.store, self.found = store, 0

    def solve(self, problem: Problem, digits: int, derivation: Derivation) -> Solution:
        """Return the same solution as :func:`verify.solution.solve.solve`, to the last bit.

        A result that cannot be proved again is solved afresh and replaced. Ties, which are decided in exact
        fractions, and windows of a single point are not remembered.
        """
        family_of(derivation)
        key = key_of(problem, digits, derivation)
        text = self.store.get(key)
        known = None if text is None else _proved_again(problem, digits, derivation, json.loads(text))
        if known is not None:
            self.found += 1
            return known
        solution = solve(problem, digits=digits, derivation=derivation)
        critical = solution.critical
        if solution.prec > 0 and (solution.form is Form.ONE_SIDED or critical.c1 != critical.c2):
            self.store.put(key, json.dumps(_kept(solution)))
        return solution


def _kept(solution: Solution) -> dict[str, Any]:
    """Where to look for this solution."""
    return {
        "ends": [_end_text(solution.critical.c1), _end_text(solution.critical.c2)],
        "sides": [_end_text(side) for side in solution.expectations],
        "prec": solution.prec,
    }


def _end_text(value: Any) -> Any:
    return [str(value.lower), str(value.upper)] if isinstance(value, Enclosure) else value


def _end(value: Any) -> Any:
    return Enclosure(Fraction(value[0]), Fraction(value[1])) if isinstance(value, list) else value


def _proved_again(problem: Problem, digits: int, derivation: Derivation, kept: dict[str, Any]) -> Solution | None:
    family = family_of(derivation)
    laws = tuple(family.at(limit, problem.n) for limit in problem.hypothesis.limits)
    ends, sides = [_end(end) for end in kept["ends"]], tuple(_end(side) for side in kept["sides"])
    prec, rough = kept["prec"], rough_laws(laws)[0]
    if problem.hypothesis.form is Form.ONE_SIDED:
        asked = TailProblem(laws[0], problem.levels[0], rejects_above(problem, derivation), rough[0], prec)
        if laws[0].lattice:
            tail = lattice_tail(asked, ends[0], prec, digits)
        else:
            tail = continuous_tail(asked, ends[0], sides[0], prec, digits)
        return None if tail is None else with_tail(problem, derivation, laws, digits, tail)
    outside = problem.hypothesis.form is not Form.OUTSIDE
    conditions = Conditions(laws, problem.levels, outside, tuple(law.mean for law in rough))
    if laws[0].lattice:
        window = lattice_window(conditions, ends[0], ends[1], prec, digits)
    else:
        window = continuous_window(conditions, ends[0], ends[1], sides, prec, digits)
    return None if window is None else with_window(problem, derivation, laws, digits, window)
