"""The window of two laws (or one) at their levels: what the search needs to know, the search, and the proof."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from verify.laws import Law
from verify.solution.conditions import Conditions
from verify.solution.continuous_search import ContinuousSearch
from verify.solution.continuous_window import solve_continuous_window
from verify.solution.lattice_window import LatticeSearch, solve_lattice_window
from verify.solution.window import SEARCH_BITS, Window, rough_laws, search_precision

Search = LatticeSearch | ContinuousSearch


def window_search(
    laws: tuple[Law, ...], levels: tuple[Any, ...], outside: bool, even: Callable[[int], bool] | None = None
) -> Search:
    """Return the search for the window of a two-sided test.

    Parameters
    ----------
    laws : tuple of Law
        At the two limits, or the one of a point null.
    levels : tuple of Exact
        One for each law.
    outside : bool
        Whether the test rejects outside the window.
    even : callable, optional
        Lattice point -> whether it is shown to have exactly the same mass under both laws.

    Raises
    ------
    UndecidedError
        When the two laws cannot be told apart.
    """
    rough, closeness, rising = rough_laws(laws)
    conditions = Conditions(laws, levels, outside, tuple(law.mean for law in rough), even)
    lattice = laws[0].lattice
    narrow = not lattice and (not outside or float(min(levels, key=float)) > 0.5)
    prec = search_precision(rough, levels, closeness, narrow=narrow, base=SEARCH_BITS[lattice])
    return (LatticeSearch if lattice else ContinuousSearch)(conditions, rough, rising, prec)


def solve_window(search: Search, digits: int) -> Window:
    """Search for the window and prove it to so many significant digits.

    Raises
    ------
    UndecidedError
        When no window could be proved.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from verify.laws import Poisson
    >>> laws = Poisson(Fraction(80)), Poisson(Fraction(120))
    >>> window = solve_window(window_search(laws, (Fraction(1, 20),) * 2, False), 20)
    >>> window.c1, window.c2, window.phi1.text(8)
    (94, 103, '0.086714664')
    """
    if isinstance(search, LatticeSearch):
        return solve_lattice_window(search, digits)
    return solve_continuous_window(search, digits)
