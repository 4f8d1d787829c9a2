"""How a number stands in a certificate: a fraction where it is exact and short, else decimals rounded outward."""

from __future__ import annotations

from decimal import ROUND_CEILING, ROUND_FLOOR, Context, Decimal
from fractions import Fraction

from verify.arithmetic.enclosure import Enclosure

LONGEST_FRACTION = 60
"""Characters up to which an exact number is written as a fraction."""

Claim = str | dict[str, str]


def claim(value: Enclosure, digits: int) -> Claim:
    """Write a number: the fraction, or ``{"lower": ..., "upper": ...}`` with so many significant digits, rounded
    outward.

    A number on the decimal grid that is not written as a fraction gets one unit on either side, so that the two
    ends differ.

    Examples
    --------
    >>> claim(Enclosure.of(Fraction(73, 225)), 20)
    '73/225'
    >>> claim(Enclosure(Fraction(333333, 10**6), Fraction(333334, 10**6)), 4)
    {'lower': '0.3333', 'upper': '0.3334'}
    """
    if value.exact and len(str(value.lower)) <= LONGEST_FRACTION:
        return str(value.lower)
    lower, upper = rounded(value.lower, digits, up=False), rounded(value.upper, digits, up=True)
    if lower == upper:
        tiny = Fraction(1, 10 ** (digits + 10))
        lower = rounded(value.lower - abs(value.lower) * tiny, digits, up=False)
        upper = rounded(value.upper + abs(value.upper) * tiny, digits, up=True)
    return {"lower": spelled(lower), "upper": spelled(upper)}


def ends(value: Claim) -> tuple[Fraction, Fraction]:
    """Return both ends of a number as it stands in a certificate."""
    if isinstance(value, str):
        return Fraction(value), Fraction(value)
    return Fraction(value["lower"]), Fraction(value["upper"])


def rounded(value: Fraction, digits: int, *, up: bool) -> Decimal:
    """Round to significant digits, up or down."""
    context = Context(prec=digits, rounding=ROUND_CEILING if up else ROUND_FLOOR, Emin=-(10**9), Emax=10**9)
    return context.divide(Decimal(value.numerator), Decimal(value.denominator))


def spelled(number: Decimal) -> str:
    """Spell a decimal number: plainly from 1e-5 to below 1e21, else with an exponent; no zeros at the end.

    Examples
    --------
    >>> spelled(Decimal("0.0500")), spelled(Decimal("1.20E-7")), spelled(Decimal("300"))
    ('0.05', '1.2e-7', '300')
    """
    sign, figures, exponent = number.as_tuple()
    if not isinstance(exponent, int):
        raise ValueError(f"not a finite number: {number}")
    text = "".join(map(str, figures)).lstrip("0")
    if not text:
        return "0"
    minus, lead = "-" if sign else "", exponent + len(text) - 1
    if -5 <= lead <= 20:
        plain = format(number.copy_abs(), "f")
        return minus + (plain.rstrip("0").rstrip(".") if "." in plain else plain)
    text = text.rstrip("0")
    return f"{minus}{text[0]}{'.' + text[1:] if text[1:] else ''}e{lead}"


def fixed(value: Fraction, decimals: int) -> str:
    """Round to nearest (ties away from 0) and spell with a fixed number of decimals.

    Examples
    --------
    >>> fixed(Fraction(1, 8), 2), fixed(Fraction(-1, 3), 3)
    ('0.13', '-0.333')
    """
    units = (abs(value) * 10**decimals * 2 + 1) // 2
    text = str(units).rjust(decimals + 1, "0")
    return ("-" if value < 0 and units else "") + f"{text[:-decimals]}.{text[-decimals:]}"
