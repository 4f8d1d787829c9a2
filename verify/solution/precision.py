"""How many bits hold so many decimal digits."""

from __future__ import annotations

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


def accuracy_for(digits: int) -> int:
    """Bits of relative accuracy that guarantee so many decimal digits.

    Examples
    --------
    >>> accuracy_for(50)
    171
    """
    return int(digits * BITS_PER_DIGIT) + 1 + 4
