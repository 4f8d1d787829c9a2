"""An enclosure: two exact rationals between which a real number certainly lies."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import ROUND_CEILING, ROUND_FLOOR, Context, Decimal
from fractions import Fraction


def decimal_text(value: Fraction, digits: int, *, up: bool) -> str:
    """Write a rational with so many significant digits, rounded up or down (never to nearest).

    Examples
    --------
    >>> decimal_text(Fraction(1, 3), 5, up=False), decimal_text(Fraction(1, 3), 5, up=True)
    ('0.33333', '0.33334')
    >>> decimal_text(Fraction(91), 5, up=True)
    '91'
    """
    context = Context(prec=max(digits, 1), rounding=ROUND_CEILING if up else ROUND_FLOOR, Emin=-10**9, Emax=10**9)
    number = context.divide(Decimal(value.numerator), Decimal(value.denominator))
    if number == number.to_integral_value() and abs(number) < Decimal(10) ** (digits + 3):
        return str(number.to_integral_value())
    return _plain_or_scientific(number)


def _plain_or_scientific(number: Decimal) -> str:
    sign, figures, exponent = number.normalize(Context(prec=len(number.as_tuple().digits), Emin=-10**9, Emax=10**9)).as_tuple()
    if not isinstance(exponent, int):
        raise ValueError(f"not a finite number: {number}")
    lead = exponent + len(figures) - 1
    if -5 <= lead <= 20:
        return format(number, "f")
    text = "".join(map(str, figures))
    head = text[0] + ("." + text[1:] if len(text) > 1 else "")
    return f"{'-' if sign else ''}{head}e{lead}"


@dataclass(frozen=True)
class Enclosure:
    """A closed interval with rational ends that contains one real number.

    Attributes
    ----------
    lower, upper : Fraction
        The ends. Equal when the number is known exactly.

    Examples
    --------
    >>> e = Enclosure(Fraction(333333, 10**6), Fraction(333334, 10**6))
    >>> e.digits, str(e)
    (5, '0.33333')
    """

    lower: Fraction
    upper: Fraction

    def __post_init__(self) -> None:
        if self.lower > self.upper:
            raise ValueError("the ends of an enclosure are in the wrong order")

    @classmethod
    def of(cls, value: Fraction | int) -> Enclosure:
        """Return the enclosure of an exactly known rational."""
        return cls(Fraction(value), Fraction(value))

    @property
    def exact(self) -> bool:
        """Whether the number is known exactly."""
        return self.lower == self.upper

    @property
    def mid(self) -> Fraction:
        """Midpoint."""
        return (self.lower + self.upper) / 2

    @property
    def radius(self) -> Fraction:
        """Half the width."""
        return (self.upper - self.lower) / 2

    @property
    def digits(self) -> int:
        """Significant decimal digits that the enclosure guarantees (10 000 000 when exact)."""
        if self.exact:
            return 10_000_000
        size = max(abs(self.lower), abs(self.upper))
        width = self.upper - self.lower
        if self.lower <= 0 <= self.upper:
            return 0
        ratio = size / width
        digits = len(str(ratio.numerator // ratio.denominator)) - 1
        return max(digits, 0)

    def contains(self, value: Fraction | int) -> bool:
        """Whether a rational lies between the ends."""
        return self.lower <= value <= self.upper

    def strings(self, digits: int) -> dict[str, str]:
        """Return the ends as decimal text rounded outward, ``{"lower": ..., "upper": ...}``."""
        return {
            "lower": decimal_text(self.lower, digits, up=False),
            "upper": decimal_text(self.upper, digits, up=True),
        }

    def text(self, digits: int | None = None) -> str:
        """Return the guaranteed digits: the number cut (never rounded) to the digits both ends share.

        Where the ends share no digit, both ends are printed.
        """
        if self.exact:
            return decimal_text(self.lower, digits or 50, up=False)
        for k in range(min(self.digits + 1, digits or 10_000_000), 0, -1):
            low = decimal_text(abs(self.lower), k, up=False)
            if low == decimal_text(abs(self.upper), k, up=False) and self.lower * self.upper > 0:
                return ("-" if self.lower < 0 else "") + low
        ends = self.strings(3)
        return f"[{ends['lower']}, {ends['upper']}]"

    def __str__(self) -> str:
        return self.text()
