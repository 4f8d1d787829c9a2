"""How many decimal digits of a number agree with a proven enclosure: the one definition, for every place that counts.

The definition. Let x be the number (a double is taken as the exact rational that it is) and [a, b] the
enclosure. The worst error is e = max(|x - a|, |x - b|): no point of the enclosure is farther from x. Against
a scale s > 0 they agree to k digits when e <= s * 10**-k; the agreement is the largest such whole k, never
below 0 and, for a double, never above ``DOUBLE_DIGITS``, since it carries no more. The scale of *significant* digits
is the smallest |value| in the enclosure.

The enclosure's own width counts against the agreement: what is not proved is not agreed.
"""

from __future__ import annotations

import math
from fractions import Fraction

from verify.arithmetic.enclosure import Enclosure

DOUBLE_DIGITS = 16
"""Significant decimal digits that a double can be said to carry."""


def worst_error(value: float | Fraction, truth: Enclosure) -> Fraction | None:
    """Largest distance from a number to a point of the enclosure; None for nan and infinities.

    Examples
    --------
    >>> worst_error(0.5, Enclosure(Fraction(1, 4), Fraction(1, 3)))
    Fraction(1, 4)
    """
    if isinstance(value, float) and not math.isfinite(value):
        return None
    exact = Fraction(value)
    return max(abs(exact - truth.lower), abs(exact - truth.upper))


def digits_on_scale(value: float | Fraction, truth: Enclosure, scale: Fraction, most: int = DOUBLE_DIGITS) -> int:
    """Decimal digits to which a number agrees with an enclosure, the error measured against ``scale``.

    Parameters
    ----------
    value : float or Fraction
        The number; nan and infinities agree to 0 digits.
    truth : Enclosure
        The proven number.
    scale : Fraction
        What one whole is, positive. For a fraction gamma it is alpha / mass: then the digits are those of the
        expectation which the error in gamma spoils.
    most : int
        Digits that the number carries.

    Examples
    --------
    >>> digits_on_scale(0.3333, Enclosure.of(Fraction(1, 3)), Fraction(1))
    4
    """
    error = worst_error(value, truth)
    if error is None or scale <= 0:
        return 0
    return whole_digits(scale, error, most)


def significant_digits(value: float | Fraction, truth: Enclosure) -> int:
    """Significant decimal digits to which a double (or the rational that it is) agrees with an enclosure.

    An enclosure that holds 0 has no significant digits: there the agreement is full when both are exactly 0,
    else 0.

    Examples
    --------
    >>> significant_digits(9.9955e-91, Enclosure.of(Fraction("9.9955008699100043024e-91")))
    7
    >>> significant_digits(float("-inf"), Enclosure.of(Fraction("-970.24370784624099880")))
    0
    """
    if truth.lower <= 0 <= truth.upper:
        return DOUBLE_DIGITS if truth.exact and value == 0 else 0
    return digits_on_scale(value, truth, min(abs(truth.lower), abs(truth.upper)))


def whole_digits(scale: Fraction, error: Fraction, most: int = DOUBLE_DIGITS) -> int:
    """Largest k with error <= scale * 10**-k, between 0 and ``most``, decided in whole numbers.

    Examples
    --------
    >>> whole_digits(Fraction(1), Fraction(1, 1000)), whole_digits(Fraction(1), Fraction(0))
    (3, 16)
    """
    whole = scale // error if error else 10**most
    return most if whole >= 10**most else max(len(str(whole)) - 1, 0)
