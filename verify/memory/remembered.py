"""A solver with a memory."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import suppress
from functools import cache
from typing import TYPE_CHECKING, Any

from verify.arithmetic.enclosure import Enclosure
from verify.derivation.derive import Derivation, derivation_for
from verify.errors import InputError
from verify.memory.key import key_of
from verify.memory.place import Place
from verify.memory.reprove import continuous_tail, continuous_window, lattice_tail
from verify.memory.store import Store
from verify.problem.hypothesis import Form
from verify.solution.conditions import Conditions
from verify.solution.lattice_window import prove_pair
from verify.solution.one_sided import TailProblem
from verify.solution.solve import Solution, family_of, rejects_above, solve, with_tail, with_window
from verify.solution.window import rough_laws

if TYPE_CHECKING:
    from verify.laws import Law
    from verify.problem.problem import Problem

Solver = Callable[["Problem", int, "Derivation"], Solution]


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
        derivation = derivation_for(problem, derivation)
        family_of(derivation)
        key = key_of(problem, digits, derivation)
        known = self._known(key, problem, digits, derivation)
        if known is not None:
            self.found += 1
            return known
        solution = solve(problem, digits=digits, derivation=derivation)
        critical = solution.critical
        if solution.prec > 0 and (solution.form is Form.ONE_SIDED or critical.c1 != critical.c2):
            with suppress(InputError):  # the result is right without being remembered
                self.store.put(key, Place.of(solution).text())
        return solution

    def _known(self, key: str, problem: Problem, digits: int, derivation: Derivation) -> Solution | None:
        """Return what is remembered and proved again; what is there and cannot be is counted as refused."""
        try:
            text = self.store.get(key)
        except InputError:  # it was usable when the run began; what it holds now is not needed
            return None
        try:
            known = None if text is None else _proved_again(problem, digits, derivation, Place.read(text))
        except ValueError:
            known = None
        if text is not None and known is None:
            self.store.refuse(key)
        return known


def _proved_again(problem: Problem, digits: int, derivation: Derivation, place: Place) -> Solution | None:
    family = family_of(derivation)
    laws = tuple(family.at(limit, problem.n) for limit in problem.hypothesis.limits)
    lattice, form = laws[0].lattice, problem.hypothesis.form
    if not all(isinstance(end, int if lattice else Enclosure) for end in place.ends):
        return None
    if len(place.sides) != (1 if form is Form.ONE_SIDED else 2):
        return None
    if form is Form.ONE_SIDED:
        return _tail_again(problem, digits, derivation, laws, place)
    conditions = Conditions(
        laws, problem.levels, form is not Form.OUTSIDE, tuple(law.mean for law in rough_laws(laws)[0])
    )
    first: Any = place.ends[0]
    second: Any = place.ends[1]
    if lattice:
        window = prove_pair(conditions, first, second, place.prec, digits)
    else:
        window = continuous_window(conditions, first, second, place.sides, place.prec, digits)
    return None if window is None else with_window(problem, derivation, laws, digits, window)


def _tail_again(
    problem: Problem, digits: int, derivation: Derivation, laws: tuple[Law, ...], place: Place
) -> Solution | None:
    rough = rough_laws(laws)[0][0]
    asked = TailProblem(laws[0], problem.levels[0], rejects_above(problem, derivation), rough, place.prec)
    end: Any = place.ends[0]
    if laws[0].lattice:
        tail = lattice_tail(asked, end, place.prec, digits)
    else:
        tail = continuous_tail(asked, end, place.sides[0], place.prec, digits)
    return None if tail is None else with_tail(problem, derivation, laws, digits, tail)
