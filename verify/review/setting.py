"""What a row leans on: its problem, the derivation, the laws at the limits, and the right test, each found
once.
"""

from __future__ import annotations

from collections import OrderedDict
from collections.abc import Callable, Hashable
from dataclasses import dataclass, field, replace
from fractions import Fraction
from functools import cached_property
from typing import TYPE_CHECKING, Any, Generic, TypeVar

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.problem.hypothesis import Form
from verify.review.engine import TwoSided
from verify.review.numbers import Numbers, numbers_of
from verify.solution.critical import CriticalFunction
from verify.solution.solve import Solution, family_of, solve

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.derivation.family import LawFamily
    from verify.laws import Law
    from verify.problem.problem import Problem

K = TypeVar("K", bound=Hashable)
T = TypeVar("T")


@dataclass
class Setting:
    """One problem with everything that rows about it share.

    Attributes
    ----------
    problem : Problem
        What the row is about.
    derivation : Derivation
        Of its density.
    digits : int
        Significant digits to prove.
    memory : dict
        Results that later rows about the same problem use again.
    """

    problem: Problem
    derivation: Derivation
    digits: int
    memory: dict[str, Any] = field(default_factory=dict)

    @cached_property
    def family(self) -> LawFamily:
        """The law of T.

        Raises
        ------
        UndecidedError
            When it is not known.
        """
        return family_of(self.derivation)

    @property
    def form(self) -> Form:
        """Form of the null."""
        return self.problem.hypothesis.form

    @cached_property
    def laws(self) -> tuple[Law, ...]:
        """Laws of the sum of the Y's at the limits."""
        return tuple(self.family.at(limit, self.problem.n) for limit in self.problem.hypothesis.limits)

    @property
    def lattice(self) -> bool:
        """Whether the statistic lives on a lattice."""
        return self.laws[0].lattice

    @cached_property
    def flipped(self) -> bool:
        """Whether V falls as Y rises."""
        with balls(64) as A:
            return bool(A.real(self.family.scale) < 0)

    @cached_property
    def upward(self) -> bool:
        """Whether Y grows with the parameter."""
        return bool(self.derivation.rising) != self.flipped

    @cached_property
    def two_sided(self) -> TwoSided:
        """The two-sided problem on the scale of Y."""
        return TwoSided(self.laws, self.problem.levels, self.form is not Form.OUTSIDE)

    @cached_property
    def step(self) -> Enclosure | None:
        """Distance of neighbouring support points of V; None for a continuous law or one with uneven
        points.
        """
        if not self.lattice or not self.laws[0].plain_points:
            return None
        scale = self.family.scale
        if isinstance(scale, Fraction):
            return Enclosure.of(abs(scale))
        with balls(256) as A:
            return to_enclosure(abs(A.real(scale)))

    def solution_of(self, critical: CriticalFunction, n: int | None = None) -> Solution:
        """Return a critical function on the scale of Y as a solution, which knows its numbers on the scale
        of V.
        """
        problem = self.problem if n is None or n == self.problem.n else replace(self.problem, n=n)
        return Solution(problem, self.derivation, self.digits, critical, self.laws, (), (), 128)

    def numbers_of(self, critical: CriticalFunction, n: int | None = None) -> Numbers:
        """Return the numbers of a critical function on the scale of V."""
        return numbers_of(self.solution_of(critical, n))

    def right(self, guess: CriticalFunction | None = None) -> CriticalFunction:
        """Return the right test; a guess that is it needs no search.

        Raises
        ------
        UndecidedError
            When it cannot be proved.
        """
        if "right" not in self.memory:
            self.memory["right"] = self._confirmed(guess) or solve(self.problem, self.digits, self.derivation).critical
        found: CriticalFunction = self.memory["right"]
        return found

    def _confirmed(self, guess: CriticalFunction | None) -> CriticalFunction | None:
        if guess is None or guess.phi1 is None or self.form is Form.ONE_SIDED or not isinstance(guess.c1, int):
            return None
        return self.two_sided.confirm(guess.c1, guess.c2, self.digits)

    @property
    def numbers(self) -> Numbers:
        """The right numbers on the scale of V."""
        if "numbers" not in self.memory:
            self.memory["numbers"] = self.numbers_of(self.right())
        found: Numbers = self.memory["numbers"]
        return found


class Cache(Generic[K, T]):
    """The most recently used values, a bounded number of them.

    Examples
    --------
    >>> cache = Cache[str, int](2)
    >>> [cache.get(word, lambda word=word: len(word)) for word in ("a", "bb", "a", "ccc")], list(cache.kept)
    ([1, 2, 1, 3], ['a', 'ccc'])
    """

    def __init__(self, size: int) -> None:
        self.size = size
        self.kept: OrderedDict[K, T] = OrderedDict()

    def get(self, key: K, make: Callable[[], T]) -> T:
        """Return the value of a key, made now when it is not kept."""
        if key in self.kept:
            self.kept.move_to_end(key)
            return self.kept[key]
        value = make()
        self.kept[key] = value
        if len(self.kept) > self.size:
            self.kept.popitem(last=False)
        return value
