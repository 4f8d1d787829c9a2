"""The slip that explains a developer's numbers, and what follows from them for the level."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from decimal import Context, Decimal
from fractions import Fraction

from verify.arithmetic.agreement import DOUBLE_DIGITS
from verify.arithmetic.enclosure import Enclosure
from verify.casebook.found import setting_of
from verify.errors import InputError, UndecidedError
from verify.problem.numbers import exact_text
from verify.review.consequences import Consequences
from verify.review.judge import Options
from verify.review.printed import read_printed
from verify.review.review import review_numbers
from verify.review.setting import Setting
from verify.review.slip_table import TRUNCATED
from verify.review.style import Style
from verify.review.verdict import Outcome, SlipFound, Verdict
from verify.solution.solve import Solution

ROUNDINGS = (8, 6, 4, 3)
"""Digits to which the numbers are printed when a slip is looked for: a slip seldom explains rounding errors too."""


def printed(value: Fraction, digits: int, *, whole: bool = True) -> str:
    """Write a number with so many significant digits, a whole number in full; a fraction with so many decimals.

    Examples
    --------
    >>> printed(Fraction(0.1), 6), printed(Fraction(95), 3), printed(Fraction(12345678, 100), 3)
    ('0.100000', '95', '123456.78')
    >>> printed(Fraction(0), 3, whole=False)
    '0.000'
    """
    near = round(value)
    if whole and abs(value - near) <= abs(value) / 10**12:
        return str(near)
    size = len(str(abs(int(value)))) if abs(value) >= 1 and whole else 0
    places = max(digits - size, 2 if size else digits)
    scaled = Decimal(round(value * 10**places))
    context = Context(prec=len(scaled.as_tuple().digits) + places + 2)
    return format(scaled.scaleb(-places, context), "f")


def same_test(values: Mapping[str, Fraction], solution: Solution, digits: int) -> bool:
    """Whether the numbers are another way to write the proven test."""
    if not solution.laws[0].lattice:
        return False
    verdict = _verdict(_one_sided_writing(values, solution), setting_of(solution), digits)
    return isinstance(verdict, Verdict) and verdict.outcome in (Outcome.AGREES, Outcome.LAST_DIGIT)


def _one_sided_writing(values: Mapping[str, Fraction], solution: Solution) -> Mapping[str, Fraction]:
    """A cutoff with fraction 0 is the next support point on the rejected side with fraction 1."""
    step = setting_of(solution).step
    if values.get("gamma") != 0 or step is None:
        return values
    return {"c": values["c"] + (step.mid if solution.rejects == "above" else -step.mid), "gamma": Fraction(1)}


def explanation(values: Mapping[str, Fraction], solution: Solution) -> list[str]:
    """Return sentences: the slips that give these numbers, and whether the level is kept."""
    setting = setting_of(solution)
    whole, *rounded = (_verdict(values, setting, digits) for digits in (DOUBLE_DIGITS, *ROUNDINGS))
    judged = [verdict for verdict in (whole, *rounded) if isinstance(verdict, Verdict)]
    if not judged:
        return [f"  They are not the numbers of a test: {whole}"]
    slips = next((found for verdict in judged if (found := _slips(verdict, values))), [])
    said = [f"  {slip.sentence[:-1]} ({slip.name})." for slip in slips]
    return [*(said or ["  No known slip gives them."]), *_level(judged[0].consequences)]


def _slips(verdict: Verdict, values: Mapping[str, Fraction]) -> list[SlipFound]:
    """The slips of a verdict; digits that were cut here, when the numbers were printed, are none."""
    claimed = verdict.claim.numbers if verdict.claim else {}
    as_given = all(abs(claimed[name].value - value) <= abs(value) / 10**15 for name, value in values.items())
    return [slip for slip in verdict.slips if slip.name != TRUNCATED or as_given]


def _verdict(values: Mapping[str, Fraction], setting: Setting, digits: int) -> Verdict | str:
    numbers = {name: read_printed(printed(value, digits, whole=name[0] == "c"), name) for name, value in values.items()}
    try:
        return review_numbers(setting, numbers, Style(), {}, Options(loss=False))
    except (InputError, UndecidedError) as error:
        return str(error)


def _level(result: Consequences | None) -> Iterator[str]:
    if result is None or result.size is None or result.level_kept is not False:
        return
    size = result.size
    level = exact_text(size.level) if not isinstance(size.level, Enclosure) else size.level.text(6)
    yield f"  With them the size is {size.value.text(6)} (at {size.at}) and not {level}: the level is not kept."
