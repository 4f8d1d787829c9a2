"""A number as a colleague printed it: its value, and the unit of its last digit."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Context, Decimal
from enum import Enum
from fractions import Fraction

from verify.arithmetic.enclosure import Enclosure
from verify.errors import InputError
from verify.problem.numbers import Exact, exact

_DECIMAL = re.compile(r"[+-]?(?:\d+\.?(\d*)|\.(\d+))(?:[eE]([+-]?\d+))?")


class Match(Enum):
    """How a printed number stands to the true one, best first."""

    SAME = "to the digits printed"
    LAST = "but for the last digit"
    OPEN = "open"
    OTHER = "different"

    @property
    def rank(self) -> int:
        """Position in that order, 0 for the best."""
        return list(Match).index(self)


@dataclass(frozen=True)
class Printed:
    """A printed number.

    Attributes
    ----------
    text : str
        As printed.
    value : Exact
        What it stands for.
    unit : Fraction or None
        One unit of its last digit; None when it is written exactly ("1/3", "sqrt(2)").
    binary : bool
        Whether it came from a binary floating-point cell, whose shortest decimal this is.
    """

    text: str
    value: Exact
    unit: Fraction | None
    binary: bool = False

    @property
    def places(self) -> int | None:
        """Decimal places printed; None when written exactly or with a unit above 1."""
        if self.unit is None or self.unit > 1:
            return None
        return len(str(self.unit.denominator)) - 1

    def match(self, true: Enclosure) -> Match:
        """Compare with the true number, of which an enclosure is known.

        Correct rounding (of a tie: either way) is SAME; less than one unit off, as truncation and rounding up
        leave it, is LAST. A number written exactly must lie in the enclosure.

        Examples
        --------
        >>> third = Enclosure(Fraction(333333, 10**6), Fraction(333334, 10**6))
        >>> [read_printed(text).match(third).name for text in ("0.33", "0.34", "0.4", "0.5")]
        ['SAME', 'LAST', 'LAST', 'OTHER']
        """
        if not isinstance(self.value, Fraction):
            return Match.OPEN
        if self.unit is None:
            return Match.SAME if true.contains(self.value) else Match.OTHER
        below, above = sorted((abs(true.lower - self.value), abs(true.upper - self.value)))
        below = Fraction(0) if true.contains(self.value) else below
        if above <= self.unit / 2:
            return Match.SAME
        if below > self.unit / 2:
            return Match.LAST if above < self.unit else Match.OTHER if below >= self.unit else Match.OPEN
        return Match.OPEN

    def truncates(self, true: Enclosure) -> bool:
        """Whether this is the true number with its further digits cut off."""
        if self.unit is None or not isinstance(self.value, Fraction):
            return self.match(true) is Match.SAME
        if true.lower >= 0:
            return self.value <= true.lower and true.upper < self.value + self.unit
        return true.upper <= 0 and self.value >= true.upper and true.lower > self.value - self.unit


def digits_wanted(numbers: Iterable[Printed], least: int) -> int:
    """Return how many digits to prove so that every printed digit can be judged, at least so many.

    Examples
    --------
    >>> digits_wanted([read_printed("0.25"), read_printed("0." + 30 * "3")], 20)
    36
    """
    return max([least, *(sum(map(str.isdigit, number.text)) + 5 for number in numbers)])


def read_printed(value: str | int | Fraction | Decimal, key: str = "", *, binary: bool = False) -> Printed:
    """Read a printed number; the digits of a decimal are counted, trailing zeros too.

    Raises
    ------
    InputError
        For a float or a text that is no number.

    Examples
    --------
    >>> read_printed("0.320").unit, read_printed(93).unit, read_printed("1/3").unit
    (Fraction(1, 1000), Fraction(1, 1), None)
    """
    number = exact(value, key)
    text = str(value).strip()
    shape = _DECIMAL.fullmatch(text)
    if shape is None:
        return Printed(text, number, None, binary)
    places = len(shape.group(1) or shape.group(2) or "") - int(shape.group(3) or 0)
    if abs(places) > 100_000:
        raise InputError(f"the exponent of {text[:40]} is out of range", "write a decimal number", key=key)
    return Printed(text, number, Fraction(10) ** -places, binary)


def rounded(true: Enclosure, like: Printed | None, digits: int = 12) -> str:
    """Write a true number to as many digits as the printed one has, correctly rounded (of a tie: to even).

    Examples
    --------
    >>> rounded(Enclosure.of(Fraction(2, 3)), read_printed("0.5")), rounded(Enclosure.of(Fraction(2, 3)), None, 4)
    ('0.7', '0.6667')
    """
    if like is None or like.places is None:
        return _significant(true, digits)
    scaled = true.mid / Fraction(10) ** -like.places
    whole = Decimal(round(scaled))
    size = Context(prec=len(whole.as_tuple().digits) + like.places + 2, rounding=ROUND_HALF_EVEN)
    return format(whole.scaleb(-like.places, size), "f")


def _significant(true: Enclosure, digits: int) -> str:
    """A true number rounded to so many significant digits; what is guaranteed of it, where that is less."""
    lower, upper = (
        Context(prec=digits, rounding=ROUND_HALF_EVEN).divide(Decimal(end.numerator), Decimal(end.denominator))
        for end in (true.lower, true.upper)
    )
    if lower != upper or (true.exact and true.lower.denominator == 1):
        return true.text(digits)
    return Enclosure.of(Fraction(lower)).text(digits)
