"""What is remembered of a solution, only where to look for it, and its text."""

from __future__ import annotations

import json
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.enclosure import Enclosure

if TYPE_CHECKING:
    from verify.solution.solve import Solution

FORMAT = 2
MOST_BITS = 2**20
"""No search needs more: a place that asks for more was not written by this program."""

End = int | Enclosure | None


@dataclass(frozen=True)
class Place:
    """Where a solution was found.

    Attributes
    ----------
    ends : tuple
        The cutoffs on the scale of Y: whole numbers on a lattice, else enclosures.
    sides : tuple of Enclosure
        The left-hand sides of the side conditions.
    prec : int
        Bits at which the proof succeeded.

    Examples
    --------
    >>> place = Place((3, 7), (Enclosure(Fraction(1, 20), Fraction(1, 16)),), 128)
    >>> Place.read(place.text()) == place
    True
    """

    ends: tuple[End, ...]
    sides: tuple[Enclosure, ...]
    prec: int

    @classmethod
    def of(cls, solution: Solution) -> Place:
        """Return the place of a solution."""
        return cls((solution.critical.c1, solution.critical.c2), solution.expectations, solution.prec)

    def text(self) -> str:
        """Write it, whole numbers in hexadecimal figures: they may be long."""
        parts = {"ends": [*map(_written, self.ends)], "sides": [*map(_written, self.sides)], "prec": self.prec}
        return json.dumps(parts)

    @classmethod
    def read(cls, text: str) -> Place:
        """Read it.

        Raises
        ------
        ValueError
            For a text that no place has.
        """
        try:
            parts = json.loads(text)
            ends, sides, prec = tuple(map(_read, parts["ends"])), tuple(map(_read, parts["sides"])), parts["prec"]
        except (KeyError, TypeError, AttributeError, ArithmeticError) as error:
            raise ValueError(f"not a place: {error}") from None
        if len(ends) != 2 or not all(isinstance(side, Enclosure) for side in sides):
            raise ValueError("not a place")
        if type(prec) is not int or not 0 < prec <= MOST_BITS:
            raise ValueError("a precision that no search has")
        return cls(ends, sides, prec)  # type: ignore[arg-type]


def _written(value: Any) -> Any:
    if isinstance(value, Enclosure):
        return [f"{end.numerator:x}/{end.denominator:x}" for end in (value.lower, value.upper)]
    return None if value is None else f"{value:x}"


def _read(value: Any) -> End:
    if isinstance(value, list):
        lower, upper = value
        return Enclosure(_fraction(lower), _fraction(upper))
    return None if value is None else int(value, 16)


def _fraction(text: str) -> Fraction:
    numerator, _, denominator = text.partition("/")
    return Fraction(int(numerator, 16), int(denominator, 16))
