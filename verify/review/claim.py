"""One claim: the numbers a colleague printed, and how they are meant."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Any

from verify.errors import InputError
from verify.problem.hypothesis import Form
from verify.problem.keys import NUMBER_NAMES
from verify.review.printed import Printed, read_printed
from verify.review.style import Style


@dataclass(frozen=True)
class Claim:
    """Printed numbers of one test.

    Attributes
    ----------
    numbers : dict
        Printed numbers by name: ``c1 c2 gamma1 gamma2``, or ``c gamma`` for a one-sided test.
    style : Style
        How they are meant.
    """

    numbers: Mapping[str, Printed]
    style: Style

    @property
    def fractions(self) -> bool:
        """Whether fractions were printed."""
        return any(name.startswith("gamma") for name in self.numbers)

    def without_fractions(self) -> Claim:
        """Return the claim of the cutoffs alone."""
        kept = {name: value for name, value in self.numbers.items() if not name.startswith("gamma")}
        return replace(self, numbers=kept)

    def variants(self, step: Fraction | None, inside: bool) -> Iterator[Mapping[str, Printed]]:
        """Yield the claim and its other writings: an end with fraction 0 is the next point inward with
        fraction 1, and so on.

        Parameters
        ----------
        step : Fraction or None
            Distance of support points on the scale printed; None where the law is continuous or the
            distance irrational. For a one-sided claim it points (by its sign) to the side that is rejected.
        inside : bool
            Whether the window (the side that is rejected) is the part that the fractions count for.

        Examples
        --------
        >>> claim = read_claim({"c": 8, "gamma": 0}, Style(), Form.ONE_SIDED)
        >>> [{name: number.text for name, number in form.items()} for form in claim.variants(Fraction(1), True)]
        [{'c': '8', 'gamma': '0'}, {'c': '9', 'gamma': '1'}]
        """
        yield self.numbers
        if step is None:
            return
        if "c1" not in self.numbers:
            yield from (dict(self.numbers) | moved for moved in _end(self.numbers, "c", "gamma", step, inside) if moved)
            return
        for first in _end(self.numbers, "c1", "gamma1", step, inside):
            for second in _end(self.numbers, "c2", "gamma2", -step, inside):
                merged = dict(self.numbers) | first | second
                if first or second:
                    yield _one_atom(merged, first, second)


def _end(
    numbers: Mapping[str, Printed], c: str, gamma: str, step: Fraction, inside: bool
) -> Iterator[dict[str, Printed]]:
    """Yield the other writings of one end, ``step`` pointing inward; first the one printed (as no change)."""
    yield {}
    fraction = numbers.get(gamma)
    if fraction is None or fraction.value not in (0, 1):
        return
    inward = (fraction.value == 0) == inside
    moved = _shifted(numbers[c], step if inward else -step)
    yield {c: moved, gamma: replace(fraction, value=1 - fraction.value, text=str(1 - fraction.value))}


def _shifted(printed: Printed, by: Fraction) -> Printed:
    value = printed.value + by
    return replace(printed, value=value, text=str(value))


def _one_atom(merged: dict[str, Printed], first: dict[str, Printed], second: dict[str, Printed]) -> dict[str, Printed]:
    """Where both ends met on one atom, its fraction is the one of the end that did not move."""
    if merged["c1"].value != merged["c2"].value:
        return merged
    if first and not second:
        return merged | {"gamma1": merged["gamma2"]}
    return merged | {"gamma2": merged["gamma1"]} if second and not first else merged


def read_claim(given: Mapping[str, Any], style: Style, form: Form) -> Claim:
    """Read the printed numbers of a claim.

    A fraction printed as a bare 0 or 1 is never one rounded to a whole number: it has as many decimals as the other
    fraction beside it (a spreadsheet drops zeros), and is exactly 0 or 1 where that has none either.

    Parameters
    ----------
    given : mapping
        Text, exact numbers or :class:`Printed` by name; absent, None and blank values are the same.
    style : Style
        How they are meant.
    form : Form
        Form of the null, which says what must be there.

    Raises
    ------
    InputError
        For a number that is missing, cannot be read or does not belong to the form.

    Examples
    --------
    >>> claim = read_claim({"c1": "91", "c2": 108}, Style(), Form.OUTSIDE)
    >>> claim.fractions, claim.numbers["c2"].value
    (False, Fraction(108, 1))
    """
    wanted = form.number_names
    present = {name: value for name, value in given.items() if value is not None and str(value).strip() != ""}
    if form is Form.ONE_SIDED and "c" not in present and len({"c1", "c2"} & present.keys()) == 1:
        present = {("c" if name in ("c1", "c2") else "gamma"): value for name, value in present.items()}
    for name in NUMBER_NAMES:
        if name in present and name not in wanted:
            raise InputError(
                f"{name} does not belong to a {form.value} hypothesis", f"give {', '.join(wanted)}", key=name
            )
    for name in wanted[: len(wanted) // 2]:
        if name not in present:
            raise InputError(f"{name} is missing", f"give {', '.join(wanted)}", key=name)
    numbers = {name: _printed(present[name], name) for name in wanted if name in present}
    _check(numbers)
    return Claim(_bare_fractions_read(numbers), style)


def _printed(value: Any, name: str) -> Printed:
    return value if isinstance(value, Printed) else read_printed(value, name)


def _bare_fractions_read(numbers: dict[str, Printed]) -> dict[str, Printed]:
    """The numbers with each bare 0 or 1 among the fractions read as :func:`read_claim` says."""
    fractions = {name: number for name, number in numbers.items() if name.startswith("gamma")}
    bare = {name for name, number in fractions.items() if number.unit is not None and number.unit >= 1}
    unit = next((number.unit for name, number in fractions.items() if name not in bare), None)
    return numbers | {name: replace(fractions[name], unit=unit) for name in bare}


def _check(numbers: dict[str, Printed]) -> None:
    for name, printed in numbers.items():
        if not isinstance(printed.value, Fraction):
            raise InputError(f"{name} is irrational as written", "print it as a decimal", key=name)
        if name.startswith("gamma") and not 0 <= printed.value <= 1:
            raise InputError(
                f"the fraction {printed.text} is not between 0 and 1", "a fraction is a probability", key=name
            )
    if ("gamma1" in numbers) != ("gamma2" in numbers):
        absent, there = ("gamma1", "gamma2") if "gamma2" in numbers else ("gamma2", "gamma1")
        if numbers["c1"].value != numbers["c2"].value:
            raise InputError(
                f"{absent} is missing although {there} is given", "give both fractions or none", key=absent
            )
        numbers[absent] = numbers[there]
