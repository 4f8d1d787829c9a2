"""How many bits hold so many decimal digits."""

from __future__ import annotations

from math import floor

from verify.arithmetic.enclosure import Enclosure

BITS_PER_DIGIT = 3.3219280948873626
GUARD_BITS = 16

LEAST_GAIN = 8
"""Bits that a round of a proof for a continuous law gains, unless a density jumps or vanishes at a cutoff."""


def bits_for(digits: int) -> int:
    """Bits that hold so many decimal digits, with a guard.

    Examples
    --------
    >>> bits_for(50)
    183
    """
    return int(digits * BITS_PER_DIGIT) + 1 + GUARD_BITS


def accuracy_for(digits: int) -> int:
    """Bits of relative accuracy that guarantee so many decimal digits.

    Examples
    --------
    >>> accuracy_for(50)
    171
    """
    return int(digits * BITS_PER_DIGIT) + 1 + 4


def may_be_decimal(number: Enclosure, digits: int) -> bool:
    """Whether a number enclosed to so many digits may be a short decimal, with half as many places.

    No digits tell such a number from its neighbours, and rounding it may be a tie: where its masses are rational,
    exact fractions say what it is.

    Examples
    --------
    >>> from fractions import Fraction
    >>> third, eighth = (Enclosure(Fraction(1, k) - Fraction(1, 10**60), Fraction(1, k)) for k in (3, 8))
    >>> may_be_decimal(third, 50), may_be_decimal(eighth, 50)
    (False, True)
    """
    grid: int = 10 ** (digits // 2)
    return floor(number.upper * grid) >= number.lower * grid
