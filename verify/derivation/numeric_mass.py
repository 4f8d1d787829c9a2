"""The total mass of a density at one parameter value, by adding balls: a lower bound that is certain.

The line is cut into pieces that double in length away from the middle and halve towards a finite end. Each
piece is enclosed; what lies beyond the last piece is not. As a density is non-negative, the sum is a proved
lower bound of the total, and agreement with one is a numerical check, not a proof.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from fractions import Fraction
from itertools import pairwise
from typing import Any

import sympy as sp
from sympy import Expr, Symbol

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.quadrature import integral, integrand

PRECISION = 96
REACH = 80
"""Pieces reach from 2**-REACH to 2**REACH."""
SMALL = 50
"""Pieces are enclosed to 2**-SMALL; several in a row below that end a side."""
MOST_TERMS = 20_000
MOST_EVALUATIONS = 10_000
"""Evaluations of the density on one piece; beyond, the question is left open."""


@dataclass(frozen=True)
class PartialMass:
    """Enclosure of the mass that was added up at a parameter value."""

    at: Expr
    lower: Fraction
    upper: Fraction

    @property
    def exceeds_one(self) -> bool:
        """Whether the total is certainly above one."""
        return self.lower > 1

    @property
    def digits(self) -> int:
        """Decimal digits to which the added mass agrees with one, at most 15."""
        gap = max(abs(self.lower - 1), abs(self.upper - 1), Fraction(1, 10**16))
        return max(0, sum(1 for k in range(1, 16) if gap < Fraction(1, 2 * 10**k)))

    def text(self, digits: int = 10) -> str:
        """The added mass in decimals."""
        return str(sp.N(sp.Rational(str((self.lower + self.upper) / 2)), digits))


def partial_integral(f: Expr, x: Symbol, lower: Expr, upper: Expr, t: Symbol, at: Expr) -> PartialMass | None:
    """Add up the integral of f over (lower, upper) at ``t = at``; None when a piece cannot be enclosed."""
    low, high = (end.subs(t, at) for end in (lower, upper))
    middle = (low + high) / 2 if low.is_finite and high.is_finite else sp.S.Zero
    if not middle.is_finite or not (low < middle < high):
        middle = low + 1 if low.is_finite else high - 1
    pieces = f.subs(x, middle + x), f.subs(x, middle - x)
    with balls(PRECISION) as A:
        values = {t.name: A.real(at)}
        whole = A.real(0)
        for g, reach in zip(pieces, (high - middle, middle - low), strict=True):
            side = _side(integrand(g, x.name, values, PRECISION), reach, A)
            if side is None:
                return None
            whole += side
        found = to_enclosure(whole)
    return PartialMass(at, found.lower, found.upper)


def _side(g: Callable[[Any, bool], Any], reach: Expr, A: Any) -> Any | None:
    """Integral of g from 0 to ``reach`` by pieces, until a dozen in a row are small."""
    total, quiet = A.real(0), 0
    for left, right in _cuts(reach, A):
        piece = integral(g, left, right, tolerance=SMALL, evaluations=MOST_EVALUATIONS)
        if not piece.is_finite():
            return None
        total += piece
        quiet = quiet + 1 if abs(piece) < A.real(Fraction(1, 2**45)) else 0
        if quiet >= 12 or total > 2:
            break
    return total


def _cuts(reach: Expr, A: Any) -> Iterator[tuple[Any, Any]]:
    if reach.is_infinite:
        ends = [A.real(0)] + [A.real(2) ** k for k in range(REACH)]
    else:
        whole = A.real(Fraction(int(reach.p), int(reach.q)) if reach.is_Rational else reach)
        ends = [whole * (1 - A.real(2) ** -k) for k in range(REACH)]
    yield from pairwise(ends)


def partial_sum(f: Expr, x: Symbol, lower: Expr, upper: Expr, t: Symbol, at: Expr) -> PartialMass | None:
    """Add up the sum of f over the whole numbers in [lower, upper] at ``t = at``."""
    with balls(PRECISION) as A:
        values, total, quiet = {t.name: A.real(at)}, A.real(0), 0
        for k in _points(lower, upper):
            term = evaluate(f, A, {**values, x.name: A.real(k)})
            if not term.is_finite():
                return None
            total += term
            quiet = quiet + 1 if abs(term) < A.real(Fraction(1, 2**60)) else 0
            if quiet >= 200 or total > 2:
                break
        found = to_enclosure(total)
    return PartialMass(at, found.lower, found.upper)


def _points(lower: Expr, upper: Expr) -> Iterator[int]:
    if lower.is_finite:
        last = MOST_TERMS if upper.is_infinite else min(MOST_TERMS, int(upper - lower) + 1)
        yield from (int(lower) + k for k in range(last))
    elif upper.is_finite:
        yield from (int(upper) - k for k in range(MOST_TERMS))
    else:
        yield 0
        yield from (sign * k for k in range(1, MOST_TERMS) for sign in (1, -1))
