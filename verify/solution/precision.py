"""The one precision loop: compute, look at the accuracy reached, ask for what is missing, stop at a cap.

Every enclosure that is not sharp enough goes round this loop; what cannot be had within the cap is an
:class:`~verify.errors.UndecidedError`, never a guess.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeVar

from verify.arithmetic.ball import Balls, balls
from verify.errors import UndecidedError

T = TypeVar("T")

BITS_PER_DIGIT = 3.3219280948873626
GUARD_BITS = 16


def bits_for(digits: int) -> int:
    """Bits that hold so many decimal digits, with a guard.

    Examples
    --------
    >>> bits_for(50)
    183
    """
    return int(digits * BITS_PER_DIGIT) + 1 + GUARD_BITS


def refine(
    compute: Callable[[Balls], tuple[T, int]], wanted: int, start: int, *, cap: int = 0, what: str = "a number"
) -> T:
    """Raise the precision until the result has the accuracy wanted.

    Parameters
    ----------
    compute : callable
        Takes the ball arithmetic, returns (result, bits of accuracy reached).
    wanted : int
        Bits of accuracy wanted.
    start : int
        First precision in bits.
    cap : int
        Largest precision; by default 16 times the first one and at least 40 000 bits.
    what : str
        Named in the message when the cap is reached.

    Raises
    ------
    UndecidedError
        At the cap.
    """
    cap = cap or max(16 * start, 40_000)
    prec = start
    while prec <= cap:
        with balls(prec) as A:
            result, reached = compute(A)
        if reached >= wanted:
            return result
        lacking = wanted - max(reached, -prec)
        prec += lacking + GUARD_BITS if reached > 0 else max(prec, lacking + GUARD_BITS)
    raise UndecidedError(f"{what} could not be enclosed to {wanted} bits within {cap} bits of precision")
