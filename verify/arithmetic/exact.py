"""The exact arithmetic of rationals, in which ties are decided."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from fractions import Fraction
from math import comb, factorial, prod
from typing import Any

from flint import arb, fmpq

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.errors import NotRational

MOST_WORKED_BITS = 1_000_000
"""Bits of a number that is still worked out exactly."""

MOST_SUMMED_BITS = 50_000_000
"""Bits of all the numbers of a sum that is still worked out exactly."""

MOST_WRITTEN_BITS = 20_000
"""Bits of a fraction that is still handed out exactly; a longer one is enclosed."""


class Rationals:
    """Exact rational arithmetic; every function without a rational value raises :class:`NotRational`.

    Examples
    --------
    >>> Rationals().binomial(10, 3)
    Fraction(120, 1)
    """

    def real(self, x: Any) -> Fraction:
        """Return an exact rational number."""
        if isinstance(x, Fraction | int):
            return Fraction(x)
        raise NotRational(f"{x} is not rational")

    def power(self, x: Fraction, k: Any) -> Fraction:
        """X to a whole power."""
        if not isinstance(k, int):
            k = self.real(k)
            if k.denominator != 1:
                raise NotRational("a power that is not whole")
            k = k.numerator
        _short(abs(k) * (x.numerator.bit_length() + x.denominator.bit_length()))
        result: Fraction = x**k
        return result

    def factorial(self, k: Any) -> Fraction:
        """K! as an exact number."""
        k = self._whole(k)
        _short(k * k.bit_length())
        return Fraction(factorial(k))

    def binomial(self, N: Any, k: Any) -> Fraction:
        """Binomial coefficient, zero outside 0..N."""
        N, k = self._whole(N), self._whole(k)
        _short(min(abs(k), abs(N - k)) * N.bit_length())
        return Fraction(comb(N, k)) if k >= 0 else Fraction(0)

    def rising(self, r: Any, k: Any) -> Fraction:
        """Rising factorial r (r+1) ... (r+k-1)."""
        start, k = self.real(r), self._whole(k)
        p, q = start.numerator, start.denominator
        _short(k * (abs(p) + k * q).bit_length())
        return Fraction(prod(range(p, p + k * q, q)), q**k)

    def function(self, name: str, *args: Any) -> Fraction:
        """Evaluate a named function of a formula, where its value is rational."""
        known: dict[str, Callable[..., Fraction]] = {
            "binomial": self.binomial,
            "RisingFactorial": self.rising,
            "Abs": abs,
        }
        if name not in known:
            raise NotRational(f"{name} has no rational value")
        return known[name](*args)

    def _whole(self, x: Any) -> int:
        value = self.real(x)
        if value.denominator != 1:
            raise NotRational(f"{value} is not whole")
        return value.numerator

    def __getattr__(self, name: str) -> Any:
        if name.startswith("__"):
            raise AttributeError(name)
        raise NotRational(f"{name} has no rational value")


def _short(bits: int) -> None:
    """Refuse a number that would be too long to work with."""
    if bits > MOST_WORKED_BITS:
        raise NotRational("a fraction that would be too long to be worked out")


def rationals() -> Rationals:
    """Return the exact arithmetic."""
    return Rationals()


def quotient(x: Fraction) -> Any:
    """Return a rational in FLINT's type, in which sums of fractions with millions of digits stay quick."""
    return fmpq(x.numerator, x.denominator)


def summed(rows: Iterable[Sequence[Fraction]], width: int) -> list[Any]:
    """Sum rows of rationals, column by column, as quotients.

    Raises
    ------
    NotRational
        When a number is irrational, or the numbers are so many and so long that their sum would take minutes.

    Examples
    --------
    >>> summed([(Fraction(1, 2), Fraction(1)), (Fraction(1, 3), Fraction(2))], 2)
    [5/6, 3]
    """
    sums, bits = [fmpq(0)] * width, 0
    for row in rows:
        numbers = [quotient(x) for x in row]
        bits += sum(int(x.height_bits()) for x in numbers)
        if bits > MOST_SUMMED_BITS:
            raise NotRational("a sum that would be too long to be worked out")
        sums = [total + x for total, x in zip(sums, numbers, strict=True)]
    return sums


def enclosure_of(x: Any, bits: int) -> Enclosure:
    """Return a quotient exactly, or, where it is very long, enclosed to so many bits.

    Examples
    --------
    >>> print(enclosure_of(quotient(Fraction(3, 20)), 64).lower)
    3/20
    """
    if int(x.height_bits()) <= MOST_WRITTEN_BITS:
        return Enclosure.of(Fraction(int(x.p), int(x.q)))
    with balls(bits):
        return to_enclosure(arb(x))
