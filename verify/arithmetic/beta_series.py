"""The regularised incomplete beta function in balls, by series of positive terms.

Arb's own routines for it take, at some precisions and arguments, a thousand times longer than at their
neighbours. These series do not: every term is positive, the ratio of neighbouring terms is known, and the
rest is bounded by a geometric series.

Source: DLMF 8.17.8 (I_x(a,b) as x^a (1-x)^b / (a B(a,b)) times 2F1(a+b, 1; a+1; x)), 15.8.1 (its
transformation, a polynomial when b is whole) and 8.17.4 (reflection).
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from flint import arb

from verify.errors import UndecidedError

Ball = Any

CHECK_EVERY = 8
"""Terms between two looks at whether the rest is small enough."""

MUCH = 8
"""Times as many terms that the smaller tail may need before the larger one is summed in its place."""

MOST_TERMS = 2_000_000
"""Terms after which the sum is given up: some seconds of work."""


def incomplete_beta(x: Ball, a: Any, b: Any, prec: int) -> Ball:
    """Return I_x(a, b) for 0 < x < 1, a > 0, b > 0.

    The smaller tail is summed, and the other is one minus it; unless that takes far longer.

    Parameters
    ----------
    x : arb
        Argument.
    a, b : int, Fraction or arb
        Parameters; whole ones are recognised.
    prec : int
        Bits of relative accuracy aimed at.

    Raises
    ------
    UndecidedError
        Where the sum is too long.
    """
    y = 1 - x
    below, above = (x, y, a, b), (y, x, b, a)
    small, large = (below, above) if (x * _ball(b)).mid() <= (y * _ball(a)).mid() else (above, below)
    summed = large if _costly(*small, prec) else small
    part = _lower(*summed, prec)
    return part if summed is below else 1 - part


def _costly(x: Ball, y: Ball, a: Any, b: Any, prec: int) -> bool:
    """Whether the series for I_x(a, b) is endless with a ratio near 1, and the other tail's sum finite and far shorter.

    One minus that sum then serves, at the cost of the bits of the tail's size.
    """
    if _whole(b) is not None or _whole(a) is None:
        return False
    endless = prec / max(float(y.mid()), 1e-300)
    finite = prec + 4 * float((y * _ball(a)).mid()) / max(float(x.mid()), 1e-300)
    return endless > MUCH * finite


def _ball(a: Any) -> Ball:
    return arb(a.numerator) / a.denominator if isinstance(a, Fraction) else arb(a)


def _whole(a: Any) -> int | None:
    if isinstance(a, int):
        return a
    return a.numerator if isinstance(a, Fraction) and a.denominator == 1 else None


def _lower(x: Ball, y: Ball, a: Any, b: Any, prec: int) -> Ball:
    whole, top, other = _whole(b), _ball(a), _ball(b)
    front = x**top * (top + other).gamma() / ((top + 1).gamma() * other.gamma())
    if whole is not None:
        start = _whole(a)
        base = top if start is None else start
        return front * y ** (whole - 1) * _polynomial(x / y, base, whole, prec)
    return front * y**other * _infinite(x, top, other, prec)


def _polynomial(w: Ball, a: Any, b: int, prec: int) -> Ball:
    """Return the sum over j < b of the products over i < j of w (b-1-i) / (a+1+i).

    The ratio of neighbouring terms falls with i, so once it is r < 1 the rest after a term t is at most t r / (1 - r).
    """
    total = term = arb(1)
    tiny = arb(2) ** -prec
    for i in range(b - 1):
        term = term * (b - 1 - i) / (a + 1 + i) * w
        total += term
        if i % CHECK_EVERY == 0:
            ratio = w * (b - 2 - i) / (a + 2 + i)
            if ratio < 1:
                rest = term * ratio / (1 - ratio)
                if rest < total * tiny:
                    return total + rest.union(arb(0))
            if i > MOST_TERMS:
                raise _too_long()
    return total


def _infinite(x: Ball, a: Ball, b: Ball, prec: int) -> Ball:
    """Return the sum over j of (a+b)_j / (a+1)_j x^j.

    The ratio x (a+b+j)/(a+1+j) moves monotonically towards x, so no later one exceeds the larger of the two.
    """
    total = term = arb(1)
    tiny = arb(2) ** -prec
    for j in range(MOST_TERMS):
        term = term * (a + b + j) / (a + 1 + j) * x
        total += term
        if j % CHECK_EVERY == 0:
            ratio = x.max(x * (a + b + j + 1) / (a + 2 + j))
            if ratio < 1:
                rest = term * ratio / (1 - ratio)
                if rest < total * tiny:
                    return total + rest.union(arb(0))
    raise _too_long()


def _too_long() -> UndecidedError:
    return UndecidedError(f"an incomplete beta function needs a sum of more than {MOST_TERMS} terms here")
