"""The window of a lattice law: a cell search, then a proof in balls, then ties in exact fractions.

Every pair of cutoffs (a cell) has exactly one pair of end fractions that satisfies the side conditions; a
cell whose fractions both lie in [0, 1] is the test, and it is the only one (the power function of the window
moves one way as the window slides, because the likelihood ratio is monotone). So nothing has to be believed
about the search.

Source: Lehmann and Romano 2005, Theorem 3.7.1; S. Karlin, Total Positivity (1968), for the
variation-diminishing property.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import Any

from verify.arithmetic.ball import accuracy_bits, balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.exact import enclosure_of, rationals
from verify.errors import InputError, NotRational, UndecidedError
from verify.laws import Law
from verify.solution.conditions import (
    MOST_EXACT_ATOMS,
    Conditions,
    LinearSystem,
    exact_fractions,
    improved_start,
    linear_system,
)
from verify.solution.lattice_step import as_float, cells, log_float
from verify.solution.narrow import even_point, narrow_contents
from verify.solution.precision import accuracy_for, bits_for, may_be_decimal
from verify.solution.sliding import slide
from verify.solution.start import window_start
from verify.solution.window import Window, WindowSearch

MOST_STEPS = 40
"""Steps of the fast search before the bracketing one takes over."""

NEIGHBOURS = 4
"""Cells tried one step at a time before searching again at a higher precision."""

MORE_BITS = 192
"""Bits by which a search that could not see is sharpened first."""

Cell = tuple[int, int]


@dataclass(frozen=True)
class LatticeSearch(WindowSearch):
    """Search for the cell of the window."""

    def cell(self) -> Cell:
        """Return the cell, or the best guess that a proof may still move by a little."""
        for bits in (self.prec, self.prec + MORE_BITS, 2 * self.prec + MORE_BITS):
            with balls(bits) as A:
                found, blurred = self._fast(A)
            if found is not None:
                return found
            if not blurred:
                break
        return self.bracket(self.prec)

    def _first(self, A: Any) -> Cell:
        narrow = self._narrow(A)
        if narrow is not None:
            return narrow
        levels = tuple(float(level) for level in self.conditions.levels)
        ends = window_start(self.rough, max(levels[0], 1e-300), self.conditions.outside)
        a, b = improved_start(self.conditions, self.rough, levels, ends)
        c1 = math.floor(a) + 1
        return self.on_atoms((c1, max(math.ceil(b), c1 + 1)), -1, -1)

    def _narrow(self, A: Any) -> Cell | None:
        """Two neighbouring atoms, where the window holds less than either of them."""
        contents = narrow_contents(self.conditions, A)
        if contents is None or not self.conditions.laws[0].plain_points:
            return None
        place = float(even_point(self.conditions, A, contents))
        if not abs(place) < 1e300:
            return None
        c1 = math.floor(place)
        cell = self.on_atoms((c1, c1 + 1), 1, 1)
        light = all(
            content < law.density(A, c)
            for content, law in zip(contents, self.conditions.laws, strict=True)
            for c in cell
        )
        return cell if light else None

    def on_atoms(self, cell: Cell, out1: int, out2: int) -> Cell:
        """Bring a cell into the support and its ends to atoms, each on in the direction in which it moved."""
        law = self.conditions.laws[0]
        low, high = law.support
        c1, c2 = cell
        if low is not None:
            c1, c2 = max(c1, low), max(c2, low + 1)
        if high is not None:
            c1, c2 = min(c1, high - 1), min(c2, high)
        c1 = law.atom(c1, -1 if out1 > 0 else 1)
        c2 = law.atom(max(c2, c1 + 1), 1 if out2 > 0 else -1)
        if c1 < c2:
            return c1, c2
        c2 = law.atom(c1 + 1, 1)
        return (c1, c2) if high is None or c2 <= high else (law.atom(c1 - 1, -1), c1)

    def _fast(self, A: Any) -> tuple[Cell | None, bool]:
        """Newton's method on the piecewise linear side conditions: each step solves the 2 x 2 system of a cell.

        Where it finds no cell, say whether for want of precision.
        """
        cell, seen = self._first(A), set()
        caps = [4 * max(r.spread for r in self.rough) + 2] * 2
        for _ in range(MOST_STEPS):
            if cell in seen:
                return None, False
            seen.add(cell)
            system = linear_system(self.conditions, A, *cell)
            balls_of = window_shares(self.conditions, system)
            weights = [as_float(ball) for ball in balls_of]
            if any(math.isnan(w) for w in weights):
                return None, True
            grain = 1e-9 * min(max(abs(w) for w in weights), 1e300)
            if all(-grain <= w <= 1 + 1e-9 for w in weights):
                return cell, False
            moves = [self._move(A, system, *end) for end in zip(cell, balls_of, (-1, +1), caps, strict=True)]
            caps = [2 * cap if abs(move) >= cap / 2 else cap for move, cap in zip(moves, caps, strict=True)]
            cell = self.on_atoms(grown(cell, *moves), *moves)
        return None, False

    def _move(self, A: Any, system: LinearSystem, c: int, weight: Any, side: int, cap: float) -> int:
        """Cells by which an end must go outward (negative: inward) to gather the weight it wants."""
        laws = self.conditions.laws
        rules = max(range(len(laws)), key=lambda i: log_float(laws[i].density(A, c)))
        rejected, level = system.whole[rules], A.real(self.conditions.levels[rules])
        part, target = (1 - rejected, 1 - level) if self.conditions.outside else (rejected, level)
        return cells(A, laws[rules], c, side, weight, cap, part, target)

    def bracket(self, bits: int) -> Cell:
        """Return the cell by the sure, slow search."""
        return slide(self.conditions, self.rough, self.rising, bits)


def grown(cell: Cell, out1: int, out2: int) -> Cell:
    """Move the ends outward by so many cells; ends that would meet or cross move on together, past the shrinking side.

    Examples
    --------
    >>> grown((3, 9), 1, -2), grown((1, 2), 0, -1), grown((1, 2), -1, 0), grown((3, 5), -4, -4)
    ((2, 7), (0, 1), (2, 3), (4, 5))
    """
    c1, c2 = cell[0] - out1, cell[1] + out2
    if c1 < c2:
        return c1, c2
    if out2 < 0 <= out1:
        return min(c1, cell[0]) - 1, min(c1, cell[0])
    if out1 < 0 <= out2:
        return max(c2, cell[1]), max(c2, cell[1]) + 1
    middle = (cell[0] + cell[1]) // 2
    return middle, middle + 1


def window_shares(conditions: Conditions, system: LinearSystem) -> tuple[Any, Any]:
    """Return the fraction of each end that belongs to the window, in balls."""
    first, second = system.fractions
    return (1 - first, 1 - second) if conditions.outside else (first, second)


def solve_lattice_window(search: LatticeSearch, digits: int) -> Window:
    """Find the window of a lattice law and prove it.

    Parameters
    ----------
    search : LatticeSearch
        The side conditions with what the search needs to know.
    digits : int
        Significant digits wanted of the fractions.

    Raises
    ------
    UndecidedError
        When a tie can be decided neither in balls nor in exact fractions.
    """
    conditions, wanted, cell = search.conditions, bits_for(digits), search.cell()
    bits, tried = wanted + search.prec - 56, {cell}
    cap, doubled = 8 * bits + 4096, False  # exact fractions can be very long: balls have a second try before them
    while bits <= cap:
        with balls(bits) as A:
            system = linear_system(conditions, A, *cell)
            moves = [_side(g, conditions.outside) for g in system.fractions]
            if moves == [0, 0]:
                reached = min(accuracy_bits(g) for g in system.fractions)
                if reached >= wanted:
                    window = _enclosed(system, cell, bits)
                    exact = _exact_tie(conditions, cell, bits) if _may_be_exact(window, digits) else None
                    return exact if isinstance(exact, Window) else window
                bits += wanted - reached + 8
                continue
        if None in moves:
            exact = _exact_tie(conditions, cell, bits) if doubled else None
            if isinstance(exact, Window):
                return exact
            if exact is None:
                bits, doubled = 2 * bits, True
                continue
            moves = [*exact]
        cell = _neighbour(search, cell, moves, tried, bits)
    raise UndecidedError(f"an end fraction at {cell} could not be told from 0 or 1 within {cap} bits")


def prove_pair(conditions: Conditions, c1: int, c2: int, bits: int, digits: int) -> Window | None:
    """Look at one pair of lattice points: where its fractions certainly lie inside (0, 1), it is the window.

    Returns None where that is not shown at this precision, with too few digits, or where only exact fractions can say
    what the numbers are.
    """
    low, high = conditions.laws[0].support
    if not c1 < c2 or (low is not None and c1 < low) or (high is not None and c2 > high):
        return None
    with balls(bits) as A:
        system = linear_system(conditions, A, c1, c2)
        if not all(g > 0 and g < 1 and accuracy_bits(g) >= accuracy_for(digits) for g in system.fractions):
            return None
        window = _enclosed(system, (c1, c2), bits)
    return None if _may_be_exact(window, digits) else window


def _enclosed(system: LinearSystem, cell: Cell, bits: int) -> Window:
    """The window of a pair whose fractions are known to lie inside (0, 1)."""
    first, second = (to_enclosure(g, low=_ZERO, high=_ONE) for g in system.fractions)
    return Window(*cell, first, second, tuple(to_enclosure(side) for side in system.left_hand_sides()), bits)


def _may_be_exact(window: Window, digits: int) -> bool:
    return any(phi is not None and may_be_decimal(phi, digits) for phi in (window.phi1, window.phi2))


def _neighbour(search: LatticeSearch, cell: Cell, moves: list[Any], tried: set[Cell], bits: int) -> Cell:
    """Next cell to try, where this one is certainly wrong: one step each way, else a search at this precision."""
    step = search.on_atoms(grown(cell, *moves), *moves)
    if step in tried or len(tried) % NEIGHBOURS == 0:
        step = replace(search, prec=bits).cell() if len(tried) <= NEIGHBOURS else search.bracket(bits)
        if step in tried:
            raise UndecidedError(f"no pair of cutoffs near {cell} could be proved")
    tried.add(step)
    return step


def _side(g: Any, outside: bool) -> int | None:
    """0 when 0 < g < 1 is certain; +1 (-1) when the window certainly wants more (less) here; None when open."""
    if g > 0 and g < 1:
        return 0
    if g > 1:
        return -1 if outside else 1
    if g < 0:
        return 1 if outside else -1
    return None


def _exact_tie(conditions: Conditions, cell: Cell, bits: int) -> Window | tuple[int, int] | None:
    """Decide a tie in exact rational arithmetic: the window, or how its ends must move outward.

    None when the masses are irrational or the window too long.
    """
    if cell[1] - cell[0] > MOST_EXACT_ATOMS:
        return None
    try:
        g1, g2 = exact_fractions(conditions, *cell)
        targets = conditions.targets(rationals())
    except NotRational:
        return _one_atom(conditions, cell, bits)
    if not (0 <= g1 <= 1 and 0 <= g2 <= 1):
        return _side(g1, conditions.outside) or 0, _side(g2, conditions.outside) or 0
    sides = tuple(Enclosure.of(t) for t in targets)
    return canonical(conditions.laws[0], cell, (g1, g2), conditions.outside, sides, bits)


def _one_atom(conditions: Conditions, cell: Cell, bits: int) -> Window | None:
    """The test that turns on one atom alone, where both conditions hold there for one and the same fraction."""
    atom = _balanced(conditions, cell)
    if atom is None:
        return None
    with balls(2 * bits) as A:
        masses = [law.density(A, atom) for law in conditions.laws]
        level = A.real(conditions.levels[0])
        fraction = 1 - (1 - level) / masses[0] if conditions.outside else level / masses[0]
        if not (fraction > 0 and fraction < 1):
            return None
        phi = to_enclosure(fraction, low=_ZERO, high=_ONE)
        sides = [to_enclosure((1 - m if conditions.outside else 0) + fraction * m) for m in masses]
    if conditions.point:
        sides.append(Enclosure.of(0))
    return Window(atom, atom, phi, phi, tuple(sides), 2 * bits)


def _balanced(conditions: Conditions, cell: Cell) -> int | None:
    """Point null: the mean. Two limits with one level: an atom of exactly the same mass under both laws."""
    if not conditions.point:
        if conditions.even is None or conditions.levels[0] != conditions.levels[1]:
            return None
        return next((c for c in cell if conditions.even(c)), None)
    try:
        mean = conditions.laws[0].expectation(rationals())
    except NotRational:
        return None
    return int(mean) if mean in cell else None


def canonical(
    law: Law, cell: Cell, fractions: tuple[Any, Any], outside: bool, conditions: tuple[Enclosure, ...], bits: int
) -> Window:
    """Bring exact end fractions to the canonical form: an end that belongs wholly to the other side moves inward.

    Rejecting inside, the ends are the outermost points where phi > 0; rejecting outside, where phi < 1.
    """
    gone = 1 if outside else 0
    c1, c2 = cell
    g1, g2 = (enclosure_of(g, bits) for g in fractions)
    inner = Enclosure.of(1 - gone)
    if fractions[0] == gone and fractions[1] == gone:
        if law.atom(c1 + 1, 1) == c2:
            raise InputError("the window is empty", "ask for a level above 0", key="problem.alpha")
        return Window(law.atom(c1 + 1, 1), law.atom(c2 - 1, -1), inner, inner, conditions, 0)
    if fractions[0] == gone:
        c1 = law.atom(c1 + 1, 1)
        g1 = g2 if c1 == c2 else inner
    elif fractions[1] == gone:
        c2 = law.atom(c2 - 1, -1)
        g2 = g1 if c1 == c2 else inner
    return Window(c1, c2, g1, g2, conditions, 0)


_ZERO, _ONE = Enclosure.of(0).lower, Enclosure.of(1).lower
