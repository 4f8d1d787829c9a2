"""The two side conditions as functions of the cutoffs, in any arithmetic.

A two-sided critical function phi is 1 strictly inside (or strictly outside) a window, a fraction at each of
its two ends, and 0 elsewhere. Its side conditions are linear in the fractions:

    whole(c1, c2) + g1 * unit(c1) + g2 * unit(c2) = targets,

with two rows: E_t1 phi and E_t2 phi, or, for a point null, E phi and E[(V - m) phi] (the target of the second
is then 0, which is E[V phi] = alpha E[V] after the first).

Source: Lehmann and Romano 2005, Theorem 3.7.1 and section 4.2.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from verify.arithmetic.exact import quotient, rationals, summed
from verify.laws import Law
from verify.solution.start import Rough, scored_window

Row = tuple[Any, Any]

MOST_EXACT_ATOMS = 20_000
"""A tie is decided in exact fractions when at most so many atoms must be summed."""

FEW_ATOMS = 8
"""A window of at most so many interior lattice points is summed mass by mass, which does not cancel."""


def interior(law: Law, A: Any, low: Any, high: Any, centre: float) -> Any:
    """Return P(low < V < high), from the side on which the least cancels.

    Parameters
    ----------
    law : Law
        The law.
    A : arithmetic
        The arithmetic in use.
    low, high : int or number of A
        The ends (ints on a lattice).
    centre : float
        Roughly the mean of the law: it only chooses between formulas that are equally true.
    """
    last = high - 1 if law.lattice else high
    if law.lattice and last - low <= FEW_ATOMS:
        return sum((law.density(A, k) for k in range(low + 1, high)), A.real(0))
    if float(low) > centre:
        return law.sf(A, low) - law.sf(A, last)
    if float(high) < centre:
        return law.cdf(A, last) - law.cdf(A, low)
    return 1 - law.cdf(A, low) - law.sf(A, last)


@dataclass(frozen=True)
class Conditions:
    """Two side conditions of a two-sided test.

    Attributes
    ----------
    laws : tuple of Law
        The laws at the two limits, or the one law of a point null.
    levels : tuple of Exact
        The level at each limit (one for a point null).
    outside : bool
        Whether the test rejects outside the window.
    centres : tuple of float
        Rough means of the laws; they only choose between equally true formulas.
    even : callable, optional
        Lattice point -> whether it is shown to have exactly the same mass under both laws.
    """

    laws: tuple[Law, ...]
    levels: tuple[Any, ...]
    outside: bool
    centres: tuple[float, ...]
    even: Callable[[int], bool] | None = None

    @property
    def point(self) -> bool:
        """Whether this is the point null: one law and a moment condition."""
        return len(self.laws) == 1

    @property
    def lattice(self) -> bool:
        """Whether the statistic lives on a lattice."""
        return self.laws[0].lattice

    def targets(self, A: Any) -> Row:
        """Right-hand sides of the two conditions."""
        first = A.real(self.levels[0])
        return (first, A.real(0)) if self.point else (first, A.real(self.levels[1]))

    def whole(self, A: Any, c1: Any, c2: Any) -> Row:
        """Contribution of the points strictly inside (or strictly outside) the window."""
        if self.point:
            return self._moment_tails(A, self.laws[0], c1, c2)
        first, second = (
            self._tails(A, law, c1, c2) if self.outside else interior(law, A, c1, c2, centre)
            for law, centre in zip(self.laws, self.centres, strict=True)
        )
        return first, second

    def _before(self, c: Any) -> Any:
        return c - 1 if self.lattice else c

    def _tails(self, A: Any, law: Law, c1: Any, c2: Any) -> Any:
        """P(V < c1) + P(V > c2)."""
        return law.cdf(A, self._before(c1)) + law.sf(A, c2)

    def _moment_tails(self, A: Any, law: Law, c1: Any, c2: Any) -> Row:
        """P(V < c1) + P(V > c2), and E[(V - m); V < c1] + E[(V - m); V > c2]."""
        return self._tails(A, law, c1, c2), law.shortfall(A, c2) - law.shortfall(A, self._before(c1))

    def unit(self, A: Any, c: Any) -> Row:
        """Contribution of one unit of phi at c (per unit length where the law is continuous)."""
        if self.point:
            law = self.laws[0]
            mass = law.density(A, c)
            return mass, (law.value(A, c) - law.expectation(A)) * mass
        return self.laws[0].density(A, c), self.laws[1].density(A, c)

    def unit_slope(self, A: Any, c: Any, unit: Row, stretch: Any = None) -> Row | None:
        """Derivative of :meth:`unit` by its place, at c or over a stretch that contains c (continuous laws).

        With L the derivative of log density, f(x) = f(c) exp((x - c) L(z)) for some z between c and x. None where
        the laws do not offer L.
        """
        x = c if stretch is None else stretch
        slopes = [law.log_slope(A, x) for law in self.laws]
        if any(slope is None for slope in slopes):
            return None
        if stretch is not None:
            grown = [A.exp((x - c) * slope) for slope in slopes]
            unit = unit[0] * grown[0], unit[1] * grown[-1]
        if self.point:
            law = self.laws[0]
            return unit[0] * slopes[0], unit[0] * (1 + (law.value(A, x) - law.expectation(A)) * slopes[0])
        return unit[0] * slopes[0], unit[1] * slopes[1]

    def total(self, A: Any) -> Row:
        """Value of the two rows for phi = 1 everywhere."""
        return A.real(1), A.real(0 if self.point else 1)


def improved_start(
    conditions: Conditions, rough: tuple[Rough, ...], levels: tuple[float, ...], ends: tuple[float, float]
) -> tuple[float, float]:
    """Return better rough ends, through the normal scores of the laws; a point null keeps the ones it has."""
    if conditions.point or min(levels) < 1e-200:
        return ends

    def score(i: int, v: float) -> tuple[float, float]:
        return conditions.laws[i].normal_score(v, rough[i].mean, rough[i].spread)

    return scored_window(score, (levels[0], levels[-1]), ends, conditions.outside)


def solve_two_by_two(first: Row, second: Row, right: Row) -> Row:
    """Solve g1 * first + g2 * second = right by Cramer's rule.

    Examples
    --------
    >>> from fractions import Fraction as F
    >>> solve_two_by_two((F(1), F(0)), (F(1), F(2)), (F(3), F(4)))
    (Fraction(1, 1), Fraction(2, 1))
    """
    determinant = first[0] * second[1] - second[0] * first[1]
    return (
        (right[0] * second[1] - second[0] * right[1]) / determinant,
        (first[0] * right[1] - right[0] * first[1]) / determinant,
    )


@dataclass(frozen=True)
class LinearSystem:
    """The side conditions of one pair of cutoffs, evaluated: linear in the two end fractions.

    Attributes
    ----------
    whole : Row
        Contribution of the points that reject for certain.
    first, second : Row
        Contribution of one unit of phi at c1 and at c2.
    fractions : Row
        The fractions (phi at c1, phi at c2) that make both conditions hold.
    """

    whole: Row
    first: Row
    second: Row
    fractions: Row

    def left_hand_sides(self) -> Row:
        """Return the two expectations at these fractions."""
        g1, g2 = self.fractions
        left, right = (self.whole[i] + g1 * self.first[i] + g2 * self.second[i] for i in (0, 1))
        return left, right


def linear_system(conditions: Conditions, A: Any, c1: Any, c2: Any) -> LinearSystem:
    """Evaluate the side conditions at a pair of cutoffs and solve them for the end fractions."""
    target, whole = conditions.targets(A), conditions.whole(A, c1, c2)
    first, second = conditions.unit(A, c1), conditions.unit(A, c2)
    fractions = solve_two_by_two(first, second, (target[0] - whole[0], target[1] - whole[1]))
    return LinearSystem(whole, first, second, fractions)


def end_fractions(conditions: Conditions, A: Any, c1: Any, c2: Any) -> Row:
    """Return the fractions (phi at c1, phi at c2) that make both side conditions hold for this pair of cutoffs."""
    return linear_system(conditions, A, c1, c2).fractions


def exact_fractions(conditions: Conditions, c1: int, c2: int) -> Row:
    """Return the same as exact quotients, every mass of the window summed.

    Raises
    ------
    NotRational
        When a mass is irrational, or the sum too long.
    """
    A = rationals()

    def row(pair: Row) -> Row:
        return quotient(pair[0]), quotient(pair[1])

    first, second = row(conditions.unit(A, c1)), row(conditions.unit(A, c2))
    sums = summed((conditions.unit(A, k) for k in range(c1 + 1, c2)), 2)
    target, total = row(conditions.targets(A)), row(conditions.total(A))
    if conditions.outside:
        right = [target[i] - total[i] + sums[i] + first[i] + second[i] for i in (0, 1)]
    else:
        right = [target[i] - sums[i] for i in (0, 1)]
    return solve_two_by_two(first, second, (right[0], right[1]))
