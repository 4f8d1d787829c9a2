"""One route's numbers, and to how many digits each agrees with the proof."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from fractions import Fraction

from verify.arithmetic.agreement import DOUBLE_DIGITS, digits_on_scale, significant_digits
from verify.arithmetic.enclosure import Enclosure
from verify.comparison.condition import Sensitivity


@dataclass(frozen=True)
class Opinion:
    """What one double-precision route says.

    Attributes
    ----------
    route : str
        ``"SciPy"`` or ``"brute force"``.
    numbers : dict of str to (str or None)
        Each number as its double prints; None where the route has none. ``expectation1``, ``expectation2``
        are the route's evaluation of the side conditions for the *proven* test.
    digits : dict of str to int
        Significant digits that agree with the proof (for an expectation: on the scale of its target).
    level_digits : dict of str to int
        For a fraction gamma: the digits of the level that its error spoils, error * mass / level.
    note : str
        Why a number is missing, what the method is, or where the library is known to be weak.
    failure : str
        Why the route came to no answer, "" when it did or was not attempted.
    claimed : int or None
        Digits that the method itself claims; None for all that a double has.
    """

    route: str
    numbers: dict[str, str | None]
    digits: dict[str, int]
    level_digits: dict[str, int] = field(default_factory=dict)
    note: str = ""
    failure: str = ""
    claimed: int | None = None


@dataclass(frozen=True)
class Truth:
    """The proven numbers with the scales on which doubles are held against them.

    Attributes
    ----------
    numbers : dict of str to Enclosure
        Cutoffs, fractions, expectations.
    scales : dict of str to Fraction
        For an expectation, its target (for the moment condition: level times spread); for a fraction, level
        / mass; for a cutoff that may be 0, the spread of V.
    step : float
        Distance of lattice points of V; 0.0 for a continuous law.
    """

    numbers: dict[str, Enclosure]
    scales: dict[str, Fraction]
    step: float
    sensitivity: Sensitivity


def opinion_of(
    route: str,
    truth: Truth,
    found: dict[str, float],
    note: str = "",
    failure: str = "",
    claimed: int | None = None,
) -> Opinion:
    """Hold a route's doubles against the proof.

    Examples
    --------
    >>> from verify.comparison.condition import Sensitivity
    >>> truth = Truth({"c": Enclosure.of(3)}, {}, 1.0, Sensitivity(None, {}, Fraction(1)))
    >>> opinion_of("SciPy", truth, {"c": 3.0}).digits
    {'c': 16}
    """
    numbers = {name: _text(found[name], truth.step) if name in found else None for name in truth.numbers}
    digits = {name: _digits(name, found[name], truth) for name in truth.numbers if name in found}
    levels = {
        name: digits_on_scale(found[name], truth.numbers[name], truth.scales[name])
        for name in truth.numbers
        if name.startswith("gamma") and name in found and name in truth.scales
    }
    return Opinion(route, numbers, digits, levels, note, failure, claimed)


def _digits(name: str, value: float, truth: Truth) -> int:
    enclosure = truth.numbers[name]
    if name.startswith("expectation"):
        return digits_on_scale(value, enclosure, truth.scales[name])
    if name.startswith("c") and truth.step and math.isfinite(value):
        far = abs(Fraction(value) - enclosure.mid) > Fraction(truth.step) / 4
        same = not far and not (truth.step == 1.0 and value != enclosure.mid)
        return DOUBLE_DIGITS if same else significant_digits(value, enclosure)
    if name.startswith("c") and name in truth.scales:
        return digits_on_scale(value, enclosure, truth.scales[name])
    return significant_digits(value, enclosure)


def _text(value: float, step: float) -> str:
    """A double as it prints; a whole number on a lattice without the point."""
    return str(int(value)) if step and value.is_integer() else repr(value)
