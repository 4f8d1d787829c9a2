"""Double-exponential nodes on [0, 1]: for functions that are singular at the ends.

The map theta(t) = 1 / (1 + exp(-pi sinh t)) takes the line to (0, 1) so fast that an algebraic or logarithmic
singularity at an end no longer matters: the trapezoidal rule in t converges nearly geometrically. Balls carry the
rounding; the error of the rule itself is not bounded, so what comes out is a number to be checked by another route.

Source: H. Takahasi and M. Mori, *Publ. RIMS* 9 (1974) 721-741 (the map); M. Sugihara, *Numer. Math.* 75 (1997) 379-395
(the choice of the step). Both from memory.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from flint import arb, fmpq

from verify.errors import UndecidedError

Ball = Any
Density = Callable[[int, Ball, Ball], Ball]
"""Cell, and distances from both of its ends in units of its width, to a density per cell width."""

STRIP = 1.3
"""Half the width of the strip of t in which the mapped function is taken to be analytic (at most pi/2)."""

FIRST_LOOK, SECOND_LOOK = 60, 120
"""Distances from an end, in powers of two, at which the order of a singularity is read off."""

LEAST_ORDER = 0.1
"""Densities that grow as theta**(order - 1) with a smaller order than this are left alone."""


@dataclass(frozen=True)
class Node:
    """A point of [0, 1]: its distances from both ends, each with full relative accuracy, and its weight."""

    theta: Ball
    rest: Ball
    weight: Ball


def nodes(bits: int, reach: int, turns: float = 0.0) -> list[Node]:
    """Return nodes for an error of about 2**-bits.

    Parameters
    ----------
    bits : int
        Accuracy aimed at.
    reach : int
        How near to the ends the nodes go, in powers of two.
    turns : float
        How many times the integrand oscillates over the interval.

    Examples
    --------
    >>> from verify.arithmetic.ball import balls
    >>> with balls(400):
    ...     print(sum((node.weight / node.theta.sqrt() for node in nodes(80, 170)), arb(0)).str(20, radius=False))
    2.0000000000000000000
    """
    width = 2 * math.pi * STRIP / (bits * math.log(2) + 2 * math.pi * turns * math.pi / 4 * STRIP)
    step = fmpq(max(1, math.floor(width * 2**20)), 2**20)
    last = math.ceil(math.asinh(reach * math.log(2) / math.pi) / width)
    return [_node(arb(k * step), arb(step)) for k in range(-last, last + 1)]


def _node(t: Ball, step: Ball) -> Node:
    falls, grows = (-arb.pi() * t.sinh()).exp(), (arb.pi() * t.sinh()).exp()
    theta, rest = 1 / (1 + falls), 1 / (1 + grows)
    return Node(theta, rest, step * arb.pi() * t.cosh() * theta * rest)


def reach_for(density: Density, cells: int, bits: int) -> int:
    """Return how near to the ends of its cells (in powers of two) a density must be looked at for an error of 2**-bits.

    Raises
    ------
    UndecidedError
        When the density grows too fast towards an end.
    """
    order = min(_order(density, cell, high=high) for cell in range(cells) for high in (False, True))
    if order < LEAST_ORDER:
        raise UndecidedError("the density of the statistic grows too fast towards an end for this quadrature")
    return math.ceil(1.05 * bits / order) + 8


def _order(density: Density, cell: int, *, high: bool) -> float:
    """The a of a density that behaves as theta**(a - 1) near an end, at most 1."""

    def at(look: int) -> Ball:
        near = arb(2) ** -look
        return density(cell, 1 - near, near) if high else density(cell, near, 1 - near)

    first, second = at(FIRST_LOOK), at(SECOND_LOOK)
    if not (first > 0 and second > first):
        return 1.0
    return 1.0 - float((second / first).log() / arb(2).log()) / (SECOND_LOOK - FIRST_LOOK)
