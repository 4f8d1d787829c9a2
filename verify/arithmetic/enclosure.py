"""An enclosure: two exact rationals between which a real number certainly lies."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import ROUND_CEILING, ROUND_FLOOR, Context, Decimal
from fractions import Fraction


def decimal_text(value: Fraction, digits: int, *, up: bool) -> str:
    """Write a rational with so many significant digits, rounded up or down (never to nearest).

    A whole number of at most 40 digits is written out.

    Examples
    --------
    >>> decimal_text(Fraction(1, 3), 5, up=False), decimal_text(Fraction(1, 3), 5, up=True)
    ('0.33333', '0.33334')
    >>> decimal_text(Fraction(1234567), 5, up=True)
    '1234567'
    """
    if value.denominator == 1 and abs(value) < 10**40:
        return str(value.numerator)
    context = Context(prec=max(digits, 1), rounding=ROUND_CEILING if up else ROUND_FLOOR, Emin=-(10**9), Emax=10**9)
    number = context.divide(Decimal(value.numerator), Decimal(value.denominator))
    return _plain_or_scientific(number, digits)


def _plain_or_scientific(number: Decimal, precision: int) -> str:
    """Plain notation where every figure written is one of the digits, else scientific."""
    sign, figures, exponent = number.normalize(
        Context(prec=len(number.as_tuple().digits), Emin=-(10**9), Emax=10**9)
    ).as_tuple()
    if not isinstance(exponent, int):
        raise ValueError(f"not a finite number: {number}")
    lead = exponent + len(figures) - 1
    if -5 <= lead < max(precision, 1) or not number:
        return format(number, "f")
    text = "".join(map(str, figures))
    head = text[0] + ("." + text[1:] if len(text) > 1 else "")
    return f"{'-' if sign else ''}{head}e{lead}"


def _short(bound: Fraction) -> str:
    """A bound with two digits, rounded up, in scientific form."""
    context = Context(prec=2, rounding=ROUND_CEILING, Emin=-(10**9), Emax=10**9)
    number = context.divide(Decimal(bound.numerator), Decimal(bound.denominator))
    figures = "".join(map(str, number.as_tuple().digits)).ljust(2, "0")
    return f"{figures[0]}.{figures[1:]}e{number.adjusted()}"


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
        rough = Context(prec=9, rounding=ROUND_FLOOR, Emin=-(10**9), Emax=10**9)
        return max(rough.divide(Decimal(ratio.numerator), Decimal(ratio.denominator)).adjusted(), 0)

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
        """Return the number with no digit that is not guaranteed.

        The digits that both ends share, cut (never rounded), at most ``digits`` of them; where the ends lie
        on two sides of a short decimal, that decimal and a bound for the distance from it; where they share
        no digit, both ends.

        Examples
        --------
        >>> Enclosure(Fraction(49999, 10**6), Fraction(50001, 10**6)).text()
        '0.05 +- 1.0e-6'
        """
        if self.exact:
            return decimal_text(self.lower, digits or 50, up=False)
        most = min(self.digits + 1, digits or 10_000_000)
        if self.lower * self.upper > 0:
            sign, small, large = (1, self.lower, self.upper) if self.lower > 0 else (-1, -self.upper, -self.lower)
            for k in (most, most - 1, most - 2):
                low = decimal_text(small, k, up=False) if k > 0 else ""
                if low and low == decimal_text(large, k, up=False):
                    return ("-" if sign < 0 else "") + low
        return self._near(most) if self.digits > 2 or self.contains(0) else self._both()

    def _near(self, digits: int) -> str:
        """The decimal in the middle, with a bound for the distance of the number from it."""
        centre = Fraction(0)
        if not self.contains(0):
            near = Context(prec=max(digits - 1, 1), Emin=-(10**9), Emax=10**9)
            centre = Fraction(near.divide(Decimal(self.mid.numerator), Decimal(self.mid.denominator)))
        bound = max(abs(self.upper - centre), abs(self.lower - centre))
        return f"{decimal_text(centre, digits, up=False)} +- {_short(bound)}"

    def _both(self) -> str:
        ends = self.strings(3)
        return f"[{ends['lower']}, {ends['upper']}]"

    def __str__(self) -> str:
        return self.text()
