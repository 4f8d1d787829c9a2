"""Do a developer's numbers agree with the proven ones, and if not, what explains them?"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from numbers import Rational
from typing import Any

from verify.arithmetic.agreement import whole_digits
from verify.arithmetic.enclosure import Enclosure
from verify.casebook.found import setting_of
from verify.errors import InputError
from verify.oracle.explain import explanation, same_test
from verify.problem.keys import NUMBER_NAMES
from verify.problem.numbers import exact, exact_text
from verify.report.layout import table
from verify.solution.solve import Solution

SHOWN = 12


@dataclass(frozen=True)
class Row:
    """One number against the proven one."""

    name: str
    mine: Fraction | None
    shown: str
    proven: Enclosure
    agrees: bool
    remark: str


def disagreement(mine: Any, solution: Solution, digits: int) -> str:
    """Return why numbers do not agree with a proven solution; empty when they do."""
    given = named(mine, solution)
    rows = [_row(name, given.get(name), true, solution, digits) for name, true in solution.numbers.items()]
    if all(row.agrees for row in rows):
        return ""
    values = {row.name: row.mine for row in rows if row.mine is not None}
    whole = len(values) == len(rows)
    if whole and same_test(values, solution, digits):
        return ""
    return "\n".join([*_head(solution), *_table(rows), *(explanation(values, solution) if whole else ())])


def named(mine: Any, solution: Solution) -> dict[str, Any]:
    """Return a developer's numbers by name.

    Raises
    ------
    InputError
        For names that are not known, or a number of numbers that fits no test of this kind.
    """
    order = list(solution.numbers)
    if isinstance(mine, Mapping):
        unknown = [name for name in mine if name not in NUMBER_NAMES]
        if unknown:
            right = f"the names are {', '.join(NUMBER_NAMES)}"
            raise InputError(f"there is no number {unknown[0]!r}", right, key="mine")
        return dict(mine)
    if isinstance(mine, str | bytes) or not hasattr(mine, "__iter__"):
        raise InputError(f"{type(mine).__name__} has no numbers", f"give {', '.join(order)}", key="mine")
    values = list(mine)
    if len(values) != len(order):
        raise InputError(f"{len(values)} numbers", f"give {', '.join(order)}", key="mine")
    return dict(zip(order, values, strict=True))


def _row(name: str, given: Any, true: Enclosure, solution: Solution, digits: int) -> Row:
    if given is None:
        return Row(name, None, "missing", true, False, "")
    value, shown = number(given, name), str(given)
    if value is None:
        return Row(name, None, shown, true, False, "not a number")
    error = max(abs(value - true.lower), abs(value - true.upper))
    if name.startswith("gamma"):
        right, agreed = error <= Fraction(1, 10**digits), whole_digits(Fraction(1), error)
        return Row(name, value, shown, true, right, f"{agreed} decimal places, {digits} asked for")
    if solution.laws[0].lattice:
        return _lattice_row(name, value, shown, true, _step(solution))
    scale = min(abs(true.lower), abs(true.upper))
    right, agreed = error <= scale / 10**digits, whole_digits(scale, error)
    return Row(name, value, shown, true, right, f"{agreed} significant digits, {digits} asked for")


def _lattice_row(name: str, value: Fraction, shown: str, true: Enclosure, step: Fraction) -> Row:
    """A support point is named by a number within a millionth of a step, or within a double's own rounding error."""
    off = (value - true.mid) / step
    noise = max(Fraction(1, 10**6), abs(true.mid) / step / 10**14)
    if abs(off) <= noise:
        return Row(name, value, shown, true, True, "the right support point")
    steps = round(off)
    if abs(off - steps) > noise:
        return Row(name, value, shown, true, False, f"not a support point, {float(off):+.4g} steps off")
    return Row(name, value, shown, true, False, f"{steps:+d} support point{'' if abs(steps) == 1 else 's'}")


def _step(solution: Solution) -> Fraction:
    """Distance of neighbouring values of V; 1 where they are uneven."""
    step = setting_of(solution).step
    return step.mid if step is not None else Fraction(1)


def number(given: Any, key: str) -> Fraction | None:
    """Return a number exactly as it is, a double as the rational that it is; None for nan and infinities."""
    if isinstance(given, Decimal) and not given.is_finite():
        return None
    if isinstance(given, str | Decimal):
        value = exact(given, key)
        if not isinstance(value, Fraction):
            raise InputError(f"{given} is no rational number", "give its decimals", key=key)
        return value
    try:
        return _binary(given)
    except (TypeError, ValueError):
        what = str(given)[:40] if isinstance(given, str | bytes) else type(given).__name__
        raise InputError(f"{what} is no number", "give a double or an exact number", key=key) from None


def _binary(given: Any) -> Fraction | None:
    """Return a number of Python, NumPy or mpmath without rounding it."""
    if isinstance(given, Rational):
        return Fraction(int(given.numerator), int(given.denominator))
    if not math.isfinite(given):
        return None
    if hasattr(given, "man_exp"):  # mpmath: a whole number, unsigned, and a power of 2
        whole, power = given.man_exp
        return Fraction(-int(whole) if given < 0 else int(whole)) * Fraction(2) ** int(power)
    return Fraction(*(given if hasattr(given, "as_integer_ratio") else float(given)).as_integer_ratio())


def _head(solution: Solution) -> list[str]:
    problem, density = solution.problem, solution.problem.density
    alpha = " and ".join(map(exact_text, problem.levels if len(set(problem.levels)) > 1 else problem.levels[:1]))
    asked = f"{problem.hypothesis.text(density.parameter)}, alpha = {alpha}, n = {problem.n}"
    return [
        "the cutoffs differ from the proven ones",
        f"  {asked}; V = sum of {solution.derivation.statistic}; it rejects {solution.rejects}",
    ]


def _table(rows: Sequence[Row]) -> list[str]:
    cells = [["", "mine", "proven", "agreement"]]
    cells += [[row.name, row.shown, row.proven.text(SHOWN), row.remark] for row in rows]
    return table(cells, indent=4).splitlines()
