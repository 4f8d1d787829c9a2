"""Expectations of a test whose numbers are those printed: of phi and of V phi, in balls."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.exact import rationals
from verify.errors import NotRational
from verify.problem.numbers import Exact

if TYPE_CHECKING:
    from verify.laws import Law
    from verify.solution.solve import Solution

Number = Any


class Expectations:
    """The test of a solution with other numbers in the place of its own: fractions (lattice) or cutoffs (continuous).

    Parameters
    ----------
    solution : Solution
        Where the test rejects, its lattice points, and the affine map V = scale * Y + n * shift.
    prec : int
        Bits to work with.
    """

    def __init__(self, solution: Solution, prec: int) -> None:
        self.solution, self.prec = solution, prec
        self.region = solution.critical.region
        self.scale = solution.family.scale
        self.shift = solution.problem.n * solution.family.shift
        with balls(64) as A:
            self.flipped = bool(A.real(self.scale) < 0)
        self.lattice = solution.laws[0].lattice

    def law(self, t: Exact) -> Law:
        """Return the law of the sum of the Y's at a parameter value."""
        return self.solution.family.at(t, self.solution.problem.n)

    def phi(self, law: Law, values: tuple[Fraction, ...], *, exact: bool = False) -> Enclosure:
        """E phi for numbers in the order c1, c2 (or gamma1, gamma2) of V's scale; on request as a rational if it is
        a sum of few rational masses.
        """
        if exact and self.lattice:
            try:
                return Enclosure.of(self._sum(rationals(), law, values, moment=False))
            except NotRational:
                pass
        with balls(self.prec) as A:
            return to_enclosure(self._sum(A, law, values, moment=False))

    def v_phi(self, law: Law, values: tuple[Fraction, ...]) -> Enclosure:
        """E[V phi] = scale E[Y phi] + shift E phi."""
        with balls(self.prec) as A:
            first = self._sum(A, law, values, moment=True)
            return to_enclosure(
                A.real(self.scale) * first + A.real(self.shift) * self._sum(A, law, values, moment=False)
            )

    def mean(self, law: Law) -> Enclosure:
        """E[V], exactly where it is rational."""
        if isinstance(self.scale, Fraction) and isinstance(self.shift, Fraction):
            try:
                return Enclosure.of(self.scale * law.expectation(rationals()) + self.shift)
            except NotRational:
                pass
        with balls(self.prec) as A:
            return to_enclosure(A.real(self.scale) * law.expectation(A) + A.real(self.shift))

    def _sum(self, A: Any, law: Law, values: tuple[Fraction, ...], *, moment: bool) -> Number:
        below = law.partial_mean if moment else law.cdf
        above = law.upper_partial_mean if moment else law.sf
        ordered = values[::-1] if self.flipped and len(values) == 2 else values
        if self.lattice:
            return self._lattice(A, law, [A.real(v) for v in ordered], below, above, moment)
        ys = [(A.real(v) - A.real(self.shift)) / A.real(self.scale) for v in ordered]
        low, high = ys[0], ys[-1]
        start = law.support[0]
        whole = law.expectation(A) if moment else A.real(1)
        if len(values) == 2 and values[0] == values[1]:
            return A.real(0) if self.region == "inside" else whole

        def up_to(y: Number) -> Number:
            return A.real(0) if start is not None and y <= A.real(start) else below(A, y)

        def beyond(y: Number) -> Number:
            return whole if start is not None and y <= A.real(start) else above(A, y)

        return {
            "inside": lambda: up_to(high) - up_to(low),
            "outside": lambda: up_to(low) + beyond(high),
            "above": lambda: beyond(low),
            "below": lambda: up_to(low),
        }[self.region]()

    def _lattice(self, A: Any, law: Law, gammas: list[Number], below: Any, above: Any, moment: bool) -> Number:
        low, high = self.solution.critical.c1, self.solution.critical.c2
        if self.region in ("above", "below"):
            high = low
        ends = [(low, gammas[0])] if low == high else [(low, gammas[0]), (high, gammas[-1])]
        total = A.real(0)
        for y, gamma in ends:
            total = total + gamma * law.density(A, y) * (y if moment else 1)
        if self.region == "inside":
            return total + below(A, high - 1) - below(A, low) if high - low > 1 else total
        if self.region != "above":
            total = total + below(A, low - 1)
        return total + above(A, high) if self.region != "below" else total
