"""The density of the statistic of one continuous observation, where it stands and where it may break."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import lcm
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, to_fraction
from verify.arithmetic.evaluate import evaluate
from verify.errors import UndecidedError
from verify.laws.shape import FAR, Piece, Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

Number = Any

MOST_CELLS = 12
"""Most cells into which the support is cut for its breaks to lie at ends of cells."""


INSIDE, ACROSS = "inside", "across"
"""Certainly strictly between the values at the ends of a piece; or this is open, since a ball reaches over an end."""


def position(A: Any, piece: Piece, v: Any) -> str:
    """Whether v lies certainly below or above the values of a piece, certainly inside, or perhaps across an end."""
    low, high = (piece.at_low, piece.at_high) if piece.rising else (piece.at_high, piece.at_low)
    v = A.real(v)
    if low is not None and v <= A.real(low):
        return "below"
    if high is not None and v >= A.real(high):
        return "above"
    certain = (low is None or v > A.real(low)) and (high is None or v < A.real(high))
    return INSIDE if certain else ACROSS


def density_of_statistic(one: Shape, at: Exact, A: Any, v: Any) -> Number:
    """Density of T(X): f / abs(T') summed over the points where T = v.

    A ball that reaches over an end of a piece has values there to which the piece adds nothing.
    """
    total = A.real(0)
    for piece in one.pieces:
        place = position(A, piece, v)
        if place in (INSIDE, ACROSS):
            x = evaluate(piece.inverse, A, {"v": A.real(v)})
            slope = evaluate(one.slope, A, {one.variable: x})
            term = one.density(A, at, x) / abs(slope)
            total = total + (term if place == INSIDE else term.union(A.real(0)))
    return total


@dataclass(frozen=True)
class Frame:
    """How the values of T are measured: U = sign * (T - start) >= 0, in cells.

    Attributes
    ----------
    start : Exact
        A finite end of the support, or a cut beyond which next to nothing lies.
    sign : int
        1 from the low end, -1 from the high end.
    cell : Exact or None
        Width of a cell; None where the support has no other end.
    cells : int
        Number of cells; the density is analytic inside each.
    """

    start: Any
    sign: int
    cell: Any
    cells: int

    def mirrored(self) -> Frame:
        """Return the frame from the other end, for a support with two ends."""
        return Frame(self.start + self.sign * self.cells * self.cell, -self.sign, self.cell, self.cells)


def frame_of(one: Shape, at: Exact, bits: int) -> Frame:
    """Return the frame of a statistic; an infinite line is cut where less than 2**-bits lies beyond.

    Raises
    ------
    UndecidedError
        Where the breaks of the density do not lie on one grid, or a half-line has a break inside.
    """
    low, high = one.ends
    values = {end for piece in one.pieces for end in (piece.at_low, piece.at_high) if end is not None}
    inner = values - {low, high}
    if low is not None and high is not None:
        cells = 1 if not inner else _grid(inner, low, high)
        return Frame(low, 1, (high - low) / cells, cells)
    if inner:
        raise UndecidedError("the density of the statistic breaks inside a support that has not two ends")
    if low is not None or high is not None:
        return Frame(low, 1, None, 1) if high is None else Frame(high, -1, None, 1)
    cut_low, cut_high = (_cut(one, at, bits, upper=upper) for upper in (False, True))
    return Frame(cut_low, 1, cut_high - cut_low, 1)


def _grid(inner: set[Any], low: Any, high: Any) -> int:
    """Number of equal cells of [low, high] at whose ends all breaks lie."""
    shares = [(place - low) / (high - low) for place in inner]
    if all(isinstance(share, Fraction) for share in shares):
        cells = lcm(*(share.denominator for share in shares))
        if cells <= MOST_CELLS:
            return cells
    raise UndecidedError("the breaks of the density of the statistic do not lie on one coarse grid")


def _cut(one: Shape, at: Exact, bits: int, *, upper: bool) -> Fraction:
    """A value of T beyond which less than about 2**-bits lies."""
    places = []
    for piece in one.pieces:
        for end in (False, True):
            if one.end_kind(at, piece, upper=end) == FAR and (piece.rising == end) == upper:
                x, _ = one.far_cut(at, piece, bits, upper=end)
                with balls(bits) as A:
                    value = evaluate(one.statistic, A, {one.variable: A.real(x)})
                    places.append(to_fraction(value.upper() if upper else value.lower()))
    return max(places) if upper else min(places)
