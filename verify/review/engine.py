"""Solve for the test of given laws and levels: what a slip changes is a law or a level, the machinery stays
the same.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property
from typing import Any

from verify.laws import Law
from verify.review.numbers import complement
from verify.solution.critical import CriticalFunction, Region
from verify.solution.lattice_window import prove_pair
from verify.solution.one_sided import TailProblem
from verify.solution.precision import bits_for
from verify.solution.two_sided import Search, solve_window, window_search
from verify.solution.window import Window, rough_laws, search_precision


@dataclass(frozen=True)
class TwoSided:
    """A two-sided problem on the scale of Y.

    Attributes
    ----------
    laws : tuple of Law
        At the two limits, or the one of a point null.
    levels : tuple of Exact
        One for each limit.
    outside : bool
        Whether the test rejects outside the window.
    """

    laws: tuple[Law, ...]
    levels: tuple[Any, ...]
    outside: bool

    @cached_property
    def search(self) -> Search:
        """The search for the window."""
        return window_search(self.laws, self.levels, self.outside)

    def solve(self, digits: int) -> CriticalFunction:
        """Search for the window and prove it.

        Raises
        ------
        UndecidedError, InputError
            When the window cannot be proved, or none has these levels.
        """
        if not self.outside and len(self.laws) == 1:
            return self._inside_at_one_point(digits)
        return self._critical(solve_window(self.search, digits))

    def _critical(self, window: Window) -> CriticalFunction:
        region: Region = "outside" if self.outside else "inside"
        return CriticalFunction(region, window.c1, window.c2, window.phi1, window.phi2)

    def _inside_at_one_point(self, digits: int) -> CriticalFunction:
        """The limit of two close limits: the complement of the test of the point at level 1 - alpha."""
        other = TwoSided(self.laws, tuple(1 - level for level in self.levels), True).solve(digits)
        return CriticalFunction("inside", other.c1, other.c2, complement(other.phi1), complement(other.phi2))

    def confirm(self, c1: int, c2: int, digits: int) -> CriticalFunction | None:
        """Look at one pair of lattice points: a pair whose fractions certainly lie inside (0, 1) is the
        test, no search needed.

        Returns None when it is not, or when it is a tie or too few digits are reached.

        Notes
        -----
        Source: Lehmann and Romano 2005, Theorem 3.7.1: a critical function of this shape that satisfies the
        side conditions is the one.
        """
        search = self.search
        window = prove_pair(search.conditions, c1, c2, bits_for(digits) + search.prec - 56, digits)
        return None if window is None else self._critical(window)


def solve_tail(law: Law, level: Any, *, above: bool, digits: int) -> CriticalFunction:
    """Return the one-sided test that rejects above (or below) its cutoff with a probability of ``level``."""
    rough, _, _ = rough_laws((law,))
    tail = TailProblem(law, level, above, rough[0], search_precision(rough, (level,), 0)).solve(digits)
    return CriticalFunction("above" if above else "below", tail.c, tail.c, tail.phi, tail.phi)


def joined(lower: CriticalFunction, upper: CriticalFunction, region: str) -> CriticalFunction:
    """Return the two-sided critical function with the ends of two one-sided ones."""
    return CriticalFunction(region, lower.c1, upper.c1, lower.phi1, upper.phi1)  # type: ignore[arg-type]


def half(level: Any) -> Any:
    """Half of a level."""
    return level * Fraction(1, 2)
