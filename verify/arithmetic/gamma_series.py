"""The regularised lower incomplete gamma function in balls, by a series of positive terms.

One minus the upper function loses the bits of the tail's size, and for large a sometimes far more. Here every term is
positive, so that nothing cancels, and the ratio of neighbouring terms falls, so that a geometric series bounds what is
left out.

Source: DLMF 8.11.4 (P(a, x) = x^a exp(-x) / Gamma(a+1) times the sum of x^k / ((a+1) ... (a+k))).
"""

from __future__ import annotations

import math
from typing import Any

from flint import arb

Ball = Any

CHECK_EVERY = 16
"""Terms between two looks at whether the rest is small enough."""


def terms_needed(a: Ball, x: Ball, prec: int) -> float:
    """Return roughly how many terms the series needs for 0 < x < a: a guide to its cost.

    The log of the k-th term is near -(k d + k^2 / (2a)) with d = log(a / x).

    Examples
    --------
    >>> 40 < terms_needed(arb(100), arb(50), 64) < 60, terms_needed(arb(1) / 2, arb(10) ** -400, 64) < 2
    (True, True)
    """
    shape, place = float(a.mid()), x.mid()
    if not (0 < place < a.mid() and shape < math.inf):
        return math.inf
    far = shape * float((a.mid() / place).log().mid())  # the place itself may be no double
    wanted = 2 * shape * prec * math.log(2)
    return wanted / (far + math.sqrt(far * far + wanted))


def lower_gamma(a: Ball, x: Ball, prec: int) -> Ball:
    """Return P(a, x) for 0 < x < a.

    Parameters
    ----------
    a, x : arb
        Parameter and argument.
    prec : int
        Bits of relative accuracy aimed at.

    Examples
    --------
    >>> from verify.arithmetic.ball import balls
    >>> with balls(64):
    ...     print(lower_gamma(arb(3), arb(1), 64).str(10, radius=False))
    0.08030139707
    """
    total = term = arb(1)
    tiny = arb(2) ** -prec
    k = 0
    while True:
        k += 1
        term = term * x / (a + k)
        total += term
        if k % CHECK_EVERY == 0:
            ratio = x / (a + k + 1)
            rest = term * ratio / (1 - ratio)
            if not rest.is_finite() or rest < total * tiny:
                break
    return x**a * (-x).exp() / (a + 1).gamma() * (total + rest.union(arb(0)))
