"""Gauss-Legendre rules on straight stretches of the complex plane, with a proven bound of their error.

A rule with N >= 2 nodes on [-1, 1] integrates polynomials of degree 2 N - 1 exactly. A function bounded by M on
the ellipse around [-1, 1] whose half axes have the sum rho has Chebyshev coefficients of size at most
2 M rho**-k; those of odd order integrate to 0 on both sides, and those of even order k >= 2 N >= 4 change the
integral by at most 2 / (k**2 - 1) <= 2/15 and the rule by at most 2 (the sum of its weights). So the error is at
most the sum of 2 M rho**-k (2/15 + 2) over even k >= 2 N, which is (64/15) M rho**(-2 N) / (1 - rho**-2).

Unlike an adaptive integrator, the same nodes serve many integrands: what is costly is computed once.

Source: L. N. Trefethen, "Is Gauss quadrature better than Clenshaw-Curtis?", *SIAM Review* 50 (2008) 67-87,
Theorem 4.5 (the argument is the one above).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from math import ceil, log2
from typing import Any

from flint import acb, arb, fmpq

from verify.arithmetic.ball import balls

Ball = Any
ComplexBall = Any
Bound = Callable[[ComplexBall], tuple[Ball, Ball]]
"""Bounds over a box of a function that is kept, and of the largest factor that may come to it.

Not finite where the function is not known to be analytic.
"""

ELLIPSES = tuple(Fraction(k, 4) for k in (5, 6, 8, 11, 16, 24, 40, 72))
"""Sums of the half axes that are tried."""

BOUND_BITS = 64
EXACT_BITS = 512
"""Ends of panels are binary fractions that are exact in so many bits."""

SLICES = 4
LEAST_NODES, NODE_STEP, MOST_NODES = 4, 4, 160
OVERHEAD = 6
"""What a panel costs beyond its nodes, in nodes."""

EXTRA_BITS, BIT_STEP = 32, 64
"""Nodes are computed to so many more bits, because integrands are evaluated at their midpoints; and a grid of bits."""


@dataclass(frozen=True)
class Panel:
    """A stretch middle + half * [-1, 1] with its rule.

    Attributes
    ----------
    middle, half : acb
        Where it lies.
    rho : Fraction
        The ellipse of the bound.
    count : int
        Number of nodes.
    sizes : tuple of (acb, arb)
        Boxes that cover the ellipse, each with a bound of the function there, without the factor that may come to it.
    """

    middle: ComplexBall
    half: ComplexBall
    rho: Fraction
    count: int
    sizes: tuple[tuple[ComplexBall, Ball], ...]

    def bound(self, factor: Callable[[ComplexBall], Ball]) -> Ball:
        """Bound on the ellipse of the function times a factor, whose bounds over boxes are given."""
        return largest([size * factor(box) for box, size in self.sizes])

    def rule(self, prec: int) -> tuple[list[tuple[ComplexBall, ComplexBall]], Ball]:
        """Return (exact place, weight) of each node, and a ball e: the rule is off by at most e times a bound of the
        integrand on the ellipse.

        Weights include the direction and the length of the stretch. Each node is taken at its midpoint: on [-1, 1],
        and as near to it as the midpoints are, the derivative is at most the bound over half the distance to the
        ellipse (Cauchy), and the weights add up to 2.
        """
        bits = max(prec, ceil(2 * self.count * log2(float(self.rho)))) + EXTRA_BITS
        nodes = legendre(self.count, -(-bits // BIT_STEP) * BIT_STEP)
        with balls(bits):
            exact = [self.middle + self.half * node for node, _ in nodes]
            places = [place.mid() for place in exact]
            weights = [self.half * weight for _, weight in nodes]
            moved = largest([abs(z - place) for z, place in zip(exact, places, strict=True)]) / abs(self.half)
        rho = _ball(self.rho)
        distance = ((rho + 1 / rho) / 2 - 1) / 2
        if not moved < distance:
            return [], arb("inf")
        share = abs(self.half) * (_remainder(self.rho, self.count) + 2 * moved / distance)
        return list(zip(places, weights, strict=True)), share.upper()


@lru_cache(maxsize=512)
def legendre(count: int, prec: int) -> tuple[tuple[Ball, Ball], ...]:
    """Return nodes and weights on [-1, 1]."""
    with balls(prec):
        return tuple(arb.legendre_p_root(count, k, weight=True) for k in range(count))


def best_panel(bound: Bound, start: ComplexBall, toward: ComplexBall, length: Ball, goal: int) -> Panel | None:
    """Return the panel from ``start`` along ``toward`` for a length, with its error below 2**-goal; None where the
    function is not bounded around it, or too many nodes would be needed.
    """
    with balls(EXACT_BITS):
        half = toward * length / 2
        middle = start + half
    found = None
    for rho in ELLIPSES:
        pieces = [middle + half * piece for piece in _cover(rho)]
        sizes = [bound(piece) for piece in pieces]
        if not all(size.is_finite() and factor.is_finite() for size, factor in sizes):
            break
        count = _count(rho, largest([size * factor for size, factor in sizes]) * abs(half), goal)
        if found is not None and count > found.count:
            break  # the bound now grows faster than the rule gains
        if count <= max(MOST_NODES, goal):
            kept = tuple((piece, size) for piece, (size, _) in zip(pieces, sizes, strict=True))
            found = Panel(middle, half, rho, count, kept)
    return found


def panels_along(
    bound: Bound, start: ComplexBall, toward: ComplexBall, length: Ball, first: Ball, goal: int
) -> list[Panel]:
    """Return panels that cover a stretch, each about as long as serves best; none where a bound fails.

    Parameters
    ----------
    bound : callable
        Bounds over boxes.
    start, toward : acb
        Exact beginning and direction; points are start + r toward.
    length : arb
        Exact end of r.
    first : arb
        A length to begin with.
    goal : int
        Each panel is off by less than 2**-goal.
    """
    panels: list[Panel] = []
    place, step = arb(0), first
    while place < length:
        with balls(EXACT_BITS):
            here, left = start + place * toward, length - place
        panel, step = _best_length(lambda trial: best_panel(bound, here, toward, trial, goal), step, left)  # noqa: B023
        if panel is not None:
            panels.append(panel)
            with balls(EXACT_BITS):
                place = place + step
        elif step * 2**24 < first:
            return []
    return panels


def _best_length(panel_of: Callable[[Ball], Panel | None], step: Ball, left: Ball) -> tuple[Panel | None, Ball]:
    """The panel that covers most for its nodes among lengths about ``step`` and at most ``left``, and its length.

    None, with a shorter length to go on with, where there is no panel.
    """

    def rated(trial: Ball) -> tuple[float, Panel | None, Ball]:
        trial = trial if trial < left else left
        panel = panel_of(trial)
        return (float(trial) / (panel.count + OVERHEAD) if panel is not None else 0.0), panel, trial

    best = rated(step)
    longer = rated(2 * step) if step < left else best
    if longer[0] > best[0]:
        best = max(longer, rated(4 * step), key=lambda entry: entry[0])
    else:
        best = max(best, rated(step / 2), key=lambda entry: entry[0])
    return (best[1], best[2]) if best[1] is not None else (None, step / 4)


def _count(rho: Fraction, size: Ball, goal: int) -> int:
    """Number of nodes whose error is below 2**-goal."""
    if not size > 0:
        return LEAST_NODES
    bits = float(size.log() / arb(2).log()) + goal + 3 - log2(1 - float(rho) ** -2)
    needed = ceil(bits / (2 * log2(float(rho))))
    return max(LEAST_NODES, -(-needed // NODE_STEP) * NODE_STEP)


def _remainder(rho: Fraction, count: int) -> Ball:
    r = _ball(rho)
    return arb(64) / 15 * r ** (-2 * count) / (1 - r**-2)


def _ball(x: Fraction) -> Ball:
    return arb(fmpq(x.numerator, x.denominator))


@lru_cache(maxsize=64)
def _cover(rho: Fraction) -> tuple[ComplexBall, ...]:
    """Boxes that cover the ellipse, in slices along its long axis."""
    with balls(BOUND_BITS):
        r = _ball(rho)
        long, short = ((r + 1 / r) / 2).upper(), ((r - 1 / r) / 2).upper()
        boxes = []
        for k in range(SLICES):
            left, right = arb(2 * k - SLICES) / SLICES, arb(2 * k + 2 - SLICES) / SLICES
            near = arb(0) if left * right <= 0 else abs(left).min(abs(right))
            high = (short * (1 - near**2).sqrt()).upper()
            boxes.append(acb((long * left).union(long * right), (-high).union(high)))
        return tuple(boxes)


def largest(balls_: list[Ball]) -> Ball:
    """Return the largest upper end."""
    largest = balls_[0].upper()
    for ball in balls_[1:]:
        largest = largest.max(ball.upper())
    return largest
