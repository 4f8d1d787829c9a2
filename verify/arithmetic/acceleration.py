"""Sums of slowly falling, turning terms, accelerated: what the first terms say about the whole series.

Neither method bounds what it leaves out. The ball that is returned carries the rounding, and is widened by the change
from an earlier estimate: a number to be checked by another route, not an enclosure.

Source: P. Wynn, *Math. Tables Aids Comput.* 10 (1956) 91-96 (the epsilon algorithm); D. Levin, *Int. J. Comput. Math.*
B 3 (1973) 371-388 (the u transformation). Both from memory.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from itertools import accumulate
from math import comb
from typing import Any

from flint import acb, arb

Complex = Any
Method = Callable[[Sequence[Complex]], Complex]

STEPS_BACK = 2
"""How much earlier the estimate is taken with which the last one is compared."""

SHARES = (0.4, 0.5, 0.6, 0.75, 1.0)
"""Shares of the terms that Levin's transformation is given: with more it converges further and rounds worse."""


def epsilon(terms: Sequence[Complex]) -> Complex:
    """Return the sum of a series by Wynn's epsilon algorithm.

    Examples
    --------
    >>> from verify.arithmetic.ball import balls
    >>> with balls(200):
    ...     print(epsilon([acb((-1) ** k) / (k + 1) for k in range(31)]).real.str(18, radius=False))
    0.693147180559945309
    """
    before, here = [acb(0)] * (len(terms) + 1), list(accumulate(terms))
    latest, best = here[-1], plain(terms)
    while len(here) > 2:
        for _ in range(2):
            before, here = here, [before[k + 1] + 1 / (here[k + 1] - here[k]) for k in range(len(here) - 1)]
        if not here[-1].is_finite():
            break
        best = _narrower(best, _widened(here[-1], here[-1] - latest))
        latest = here[-1]
    return best


def levin(terms: Sequence[Complex]) -> Complex:
    """Return the sum of a series by Levin's u transformation.

    Examples
    --------
    >>> from verify.arithmetic.ball import balls
    >>> with balls(200):
    ...     print(levin([acb((-1) ** k) / (k + 1) for k in range(31)]).real.str(18, radius=False))
    0.693147180559945309
    """
    best = plain(terms)
    for share in SHARES:
        some = terms[: round(len(terms) * share)]
        if len(some) > STEPS_BACK + 1:
            last = _levin(some)
            best = _narrower(best, _widened(last, last - _levin(some[:-STEPS_BACK])))
    return best


def plain(terms: Sequence[Complex]) -> Complex:
    """Return the sum of the terms themselves, widened by the last."""
    return _widened(sum(terms, acb(0)), terms[-1] if terms else acb(0))


def _narrower(first: Complex, second: Complex) -> Complex:
    return second if second.is_finite() and _width(second) < _width(first) else first


def _width(value: Complex) -> Any:
    return arb(value.real.rad()).max(arb(value.imag.rad()))


def _widened(value: Complex, change: Complex) -> Complex:
    reach = arb(0, abs(change).abs_upper())
    return value + acb(reach, reach)


def _levin(terms: Sequence[Complex]) -> Complex:
    """Ratio of two binomial sums over the partial sums, with the remainder taken as (j + 1) times the term."""
    last = len(terms) - 1
    above, below = acb(0), acb(0)
    for j, (total, term) in enumerate(zip(accumulate(terms), terms, strict=True)):
        weight = (-1) ** j * comb(last, j) * (j + 1) ** (last - 2) / (arb(last + 1) ** (last - 1) * term)
        above, below = above + weight * total, below + weight
    return above / below
