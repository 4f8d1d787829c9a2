"""What a reader has to be warned of: cutoffs that differ, few digits, failures, bad condition."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction

from verify.arithmetic.agreement import DOUBLE_DIGITS
from verify.comparison.opinion import Opinion, Truth

ENOUGH = 10
"""Digits below which a double-precision number is flagged."""
ENOUGH_FRACTION = 6
"""A fraction gamma may agree to fewer, as long as the level it spends is right to ``ENOUGH`` digits."""
NEARLY = 2
"""Digits that rounding in mpmath may cost before it is worth a warning."""
ILL = 1e6
"""Condition from which more than six of a double's sixteen digits are lost, whatever the solver."""

TIE = "tie: the proved fraction there is 0 or 1 to double precision, so rounding decides between neighbouring points"
UNSEEN = "the mass there is too small beside the level for double precision to see"


@dataclass(frozen=True)
class Flag:
    """One warning.

    Attributes
    ----------
    kind : str
        ``"cutoffs differ"``, ``"few digits"``, ``"solver failed"`` or ``"ill-conditioned"``.
    number : str
        The number it is about; "all" for the whole route or problem.
    text : str
        The sentence, naming which route is off.
    route : str
        The route that is off, "" for the problem itself.
    """

    kind: str
    number: str
    text: str
    route: str = ""


def engine_flags(digits: dict[str, int], wanted: int) -> tuple[Flag, ...]:
    """Warn where mpmath does not reproduce a proven number to (nearly) the digits asked for.

    Examples
    --------
    >>> engine_flags({"gamma1": 50, "gamma2": 31}, 50)[0].text
    'mpmath reproduces 31 of 50 digits of gamma2'
    """
    return tuple(
        Flag("few digits", name, f"mpmath reproduces {found} of {wanted} digits of {name}", "mpmath")
        for name, found in digits.items()
        if found < wanted - NEARLY
    )


def flags_of(truth: Truth, opinions: tuple[Opinion, ...]) -> tuple[Flag, ...]:
    """All warnings, the failures first."""
    found = [*_failures(truth, opinions)]
    for opinion in opinions:
        differ = [name for name in truth.numbers if _cutoff_differs(name, opinion, truth)]
        found += [_cutoffs_differ(name, opinion, opinions, truth) for name in differ]
        spoiled = {name.replace("c", "gamma", 1) for name in differ}
        names = [name for name in truth.numbers if name not in differ and name not in spoiled]
        found += [_few_digits(name, opinion, opinions) for name in names if _few(name, opinion)]
    return (*found, *_ill_conditioned(truth))


def _failures(truth: Truth, opinions: tuple[Opinion, ...]) -> list[Flag]:
    found = []
    for opinion in opinions:
        if opinion.failure:
            text = f"{opinion.route}: {opinion.failure}{_hint(opinion)}"
            found.append(Flag("solver failed", "all", text, opinion.route))
        for name, number in opinion.numbers.items():
            if number is not None and not math.isfinite(float(number)):
                text = f"{opinion.route}: {name} came out as {number}"
                found.append(Flag("solver failed", name, text, opinion.route))
    return found


def _finite(opinion: Opinion, name: str) -> float | None:
    text = opinion.numbers.get(name)
    value = float(text) if text is not None else math.nan
    return value if math.isfinite(value) else None


def _cutoff_differs(name: str, opinion: Opinion, truth: Truth) -> bool:
    value = _finite(opinion, name)
    if not name.startswith("c") or not truth.step or value is None:
        return False
    return opinion.digits[name] < 16 and abs(Fraction(value) - truth.numbers[name].mid) > 0


def _cutoffs_differ(name: str, opinion: Opinion, opinions: tuple[Opinion, ...], truth: Truth) -> Flag:
    text = f"{opinion.route}: {name} = {opinion.numbers[name]}, proved {truth.numbers[name]}"
    if _unseen(name, truth):
        text += f"; {UNSEEN}"
    elif is_tie(name, opinion, truth):
        text += f"; {TIE}"
    return Flag("cutoffs differ", name, text + _who(name, opinion, opinions) + _hint(opinion), opinion.route)


def _unseen(name: str, truth: Truth) -> bool:
    """Whether all of the mass at a cutoff, spent or not, changes the level by less than a double's rounding."""
    unit = truth.scales.get(name.replace("c", "gamma", 1))
    return unit is not None and unit > 10**DOUBLE_DIGITS


def is_tie(name: str, opinion: Opinion, truth: Truth) -> bool:
    """Whether the route stands one point beside a cutoff whose fraction is 0 or 1 to double precision."""
    value, gamma = _finite(opinion, name), name.replace("c", "gamma", 1)
    if value is None or gamma not in truth.numbers or gamma not in truth.scales:
        return False
    beside = abs(Fraction(value) - truth.numbers[name].mid) <= Fraction(truth.step) * Fraction(3, 2)
    fraction, unit = truth.numbers[gamma], truth.scales[gamma]
    close = unit * Fraction(1, 10**12)
    return beside and (fraction.upper <= close or 1 - fraction.lower <= close)


def _few(name: str, opinion: Opinion) -> bool:
    if _finite(opinion, name) is None:
        return False
    enough = ENOUGH if opinion.claimed is None else min(ENOUGH, opinion.claimed)
    if name in opinion.level_digits:
        fraction = min(enough, ENOUGH_FRACTION)
        return opinion.level_digits[name] < enough or (opinion.digits[name] < fraction and _visible(name, opinion))
    return opinion.digits[name] < enough


def _visible(name: str, opinion: Opinion) -> bool:
    """A fraction so near 0 that six decimals print it as 0 has no significant digits to lose."""
    value = _finite(opinion, name)
    return value is not None and abs(value) >= 1e-6


def _few_digits(name: str, opinion: Opinion, opinions: tuple[Opinion, ...]) -> Flag:
    text = f"{opinion.route}: {name} = {opinion.numbers[name]} agrees to {_count(opinion.digits[name])}"
    if name in opinion.level_digits:
        text += f" ({_count(opinion.level_digits[name])} of the level)"
    return Flag("few digits", name, text + _who(name, opinion, opinions) + _hint(opinion), opinion.route)


def _count(digits: int) -> str:
    return f"{digits} digit" if digits == 1 else f"{digits} digits"


def _who(name: str, opinion: Opinion, opinions: tuple[Opinion, ...]) -> str:
    """Which of the routes is off."""
    others = [other for other in opinions if other.route != opinion.route and name in other.digits]
    if not others:
        return ""
    other = others[0]
    if other.digits[name] > opinion.digits[name] + 1:
        return f"; {other.route} agrees to {_count(other.digits[name])}, so {opinion.route} is off"
    return f"; {other.route} agrees to {_count(other.digits[name])}"


def _hint(opinion: Opinion) -> str:
    return f"; a possible cause: {opinion.note}" if "inherits the generic" in opinion.note else ""


def _ill_conditioned(truth: Truth) -> list[Flag]:
    condition = truth.sensitivity.condition
    if condition is None or condition < ILL:
        return []
    lost = math.log10(condition)
    most = max(0, int(15.95 - lost))
    kept = f"no more than {_count(most)}" if most else "no digit"
    text = f"condition {condition:.3g}: rounding in double precision may leave {kept} of a number right"
    return [Flag("ill-conditioned", "all", text)]
