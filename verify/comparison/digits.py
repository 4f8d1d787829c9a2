"""How many decimal digits of a double-precision number agree with a proven enclosure.

The definition. Let x be the number (a double, taken as the exact rational that it is) and [a, b] the
enclosure. The worst error is e = max(|x - a|, |x - b|): no point of the enclosure is farther from x. Against
a scale s > 0 they agree to k digits when e <= s * 10**-k; the agreement is the largest such whole k, never
below 0 and never above
``DOUBLE_DIGITS``, since a double carries no more. The scale of *significant* digits is the smallest |value|
in the enclosure.

The enclosure's own width counts against the agreement: what is not proved is not agreed.
"""

from __future__ import annotations

import math
from fractions import Fraction
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from verify.arithmetic.enclosure import Enclosure

DOUBLE_DIGITS = 16
"""Significant decimal digits that a double can be said to carry."""


def worst_error(value: float, truth: Enclosure) -> Fraction | None:
    """Largest distance from a double to a point of the enclosure; None for nan and infinities.

    Examples
    --------
    >>> from verify.arithmetic.enclosure import Enclosure
    >>> worst_error(0.5, Enclosure(Fraction(1, 4), Fraction(1, 3)))
    Fraction(1, 4)
    """
    if not math.isfinite(value):
        return None
    exact = Fraction(value)
    return max(abs(exact - truth.lower), abs(exact - truth.upper))


def digits_on_scale(value: float, truth: Enclosure, scale: Fraction) -> int:
    """Decimal digits to which a double agrees with an enclosure, the error measured against ``scale``.

    Parameters
    ----------
    value : float
        The double; nan and infinities agree to 0 digits.
    truth : Enclosure
        The proven number.
    scale : Fraction
        What one whole is, positive. For a fraction gamma it is alpha / mass: then the digits are those of the
        expectation which the error in gamma spoils.

    Examples
    --------
    >>> from verify.arithmetic.enclosure import Enclosure
    >>> digits_on_scale(0.3333, Enclosure.of(Fraction(1, 3)), Fraction(1))
    4
    """
    error = worst_error(value, truth)
    if error is None or scale <= 0:
        return 0
    if error == 0:
        return DOUBLE_DIGITS
    return _whole_digits(scale / error)


def significant_digits(value: float, truth: Enclosure) -> int:
    """Significant decimal digits to which a double agrees with an enclosure.

    An enclosure that holds 0 has no significant digits: there the agreement is full when both are exactly 0,
    else 0.

    Examples
    --------
    >>> from verify.arithmetic.enclosure import Enclosure
    >>> significant_digits(9.9955e-91, Enclosure.of(Fraction("9.9955008699100043024e-91")))
    7
    >>> significant_digits(float("-inf"), Enclosure.of(Fraction("-970.24370784624099880")))
    0
    """
    if truth.lower <= 0 <= truth.upper:
        return DOUBLE_DIGITS if truth.exact and value == 0 else 0
    return digits_on_scale(value, truth, min(abs(truth.lower), abs(truth.upper)))


def _whole_digits(ratio: Fraction) -> int:
    """Largest k with 10**k <= ratio, between 0 and ``DOUBLE_DIGITS``, decided in whole numbers."""
    whole = ratio.numerator // ratio.denominator
    if whole >= 10**DOUBLE_DIGITS:
        return DOUBLE_DIGITS
    return max(len(str(whole)) - 1, 0) if whole else 0
