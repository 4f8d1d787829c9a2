"""The four forms of null, read from text (Lehmann and Romano 2005, Theorems 3.4.1 and 3.7.1, section 4.2)."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from enum import Enum

import sympy

from verify.errors import InputError
from verify.problem.formula import formula_text
from verify.problem.keys import ONE_SIDED, TWO_SIDED
from verify.problem.numbers import Exact, as_exact, as_expr
from verify.problem.order import compare
from verify.problem.relation import Interval, interval_text, read_chain
from verify.problem.scan import plain_signs, require_text, shorten
from verify.problem.space import Space

RIGHT = 'write e.g. "lam <= 8 or lam >= 12", "8 <= lam <= 12", "lam = 8", "lam <= 8" or "lam >= 8"'


class Form(Enum):
    """Which of the four kinds of null."""

    ONE_SIDED = "one-sided"
    OUTSIDE = "outside null"
    INTERVAL = "interval null"
    POINT = "point null"

    @property
    def number_names(self) -> tuple[str, ...]:
        """Names of the cutoffs and fractions that a test of this form has.

        Examples
        --------
        >>> Form.ONE_SIDED.number_names
        ('c', 'gamma')
        """
        return ONE_SIDED if self is Form.ONE_SIDED else TWO_SIDED


@dataclass(frozen=True)
class Hypothesis:
    """A null hypothesis about one parameter; its alternative is the complement.

    Attributes
    ----------
    form : Form
        Which of the four.
    limits : tuple of exact numbers
        One (one-sided, point) or two (outside, interval), ascending.
    null_below : bool
        For the one-sided form: True when the null is t <= t0.
    """

    form: Form
    limits: tuple[Exact, ...]
    null_below: bool = False

    @property
    def null_set(self) -> tuple[Interval, ...]:
        """The null as closed intervals, ascending."""
        ends = [as_expr(limit) for limit in self.limits]
        below, above = Interval(upper=ends[0], upper_closed=True), Interval(lower=ends[-1], lower_closed=True)
        match self.form:
            case Form.ONE_SIDED:
                return (below,) if self.null_below else (above,)
            case Form.OUTSIDE:
                return (below, above)
        return (Interval(ends[0], ends[-1], True, True),)

    @property
    def alternative_set(self) -> tuple[Interval, ...]:
        """The complement as open intervals, ascending."""
        ends = [as_expr(limit) for limit in self.limits]
        match self.form:
            case Form.ONE_SIDED:
                return (Interval(lower=ends[0]),) if self.null_below else (Interval(upper=ends[0]),)
            case Form.OUTSIDE:
                return (Interval(ends[0], ends[-1]),)
        return (Interval(upper=ends[0]), Interval(lower=ends[-1]))

    def holds_at(self, value: Exact) -> bool:
        """Whether an exact number lies in the null, which is closed.

        Raises
        ------
        UndecidedError
            When it cannot be told from a limit.

        Examples
        --------
        >>> from fractions import Fraction
        >>> null = Hypothesis(Form.OUTSIDE, (Fraction(8), Fraction(12)))
        >>> null.holds_at(Fraction(12)), null.holds_at(Fraction(10))
        (True, False)
        """
        return any(compare(part.lower, value) <= 0 <= compare(part.upper, value) for part in self.null_set)

    def text(self, parameter: str) -> str:
        """Write the null, e.g. "lam <= 8 or lam >= 12".

        Examples
        --------
        >>> from fractions import Fraction
        >>> null = Hypothesis(Form.OUTSIDE, (Fraction(8), Fraction(12)))
        >>> null.text("lam"), null.alternative_text("lam")
        ('lam <= 8 or lam >= 12', '8 < lam < 12')
        """
        return " or ".join(interval_text(interval, parameter) for interval in self.null_set)

    def alternative_text(self, parameter: str) -> str:
        """Write the alternative, e.g. "8 < lam < 12"."""
        if self.form is Form.POINT:
            return f"{parameter} != {self.text(parameter).partition('= ')[2]}"
        return " or ".join(interval_text(interval, parameter) for interval in self.alternative_set)


def parse_null(
    text: str, parameter: str, space: Space, symbols: Mapping[str, sympy.Expr], key: str = "problem.null"
) -> Hypothesis:
    """Read a null hypothesis.

    Parameters
    ----------
    text : str
        See ``RIGHT``.
    parameter : str
        Name of the parameter.
    space : Space
        Every limit must lie in it.
    symbols : Mapping
        Values of constants that may stand in the limits.

    Raises
    ------
    InputError
        When the text is not one of the four forms, a limit lies outside the space, or limits are equal or
        exchanged.
    """
    intervals = _read_set(text, parameter, symbols, key)
    for interval in intervals:
        _require_closed(interval, parameter, key)
    if len(intervals) == 2:
        return _outside(intervals, parameter, space, key)
    (interval,) = intervals
    if interval.is_point:
        return Hypothesis(Form.POINT, _limits((interval.lower,), parameter, space, key))
    if -sympy.oo in (interval.lower, interval.upper) or sympy.oo in (interval.lower, interval.upper):
        below = interval.lower == -sympy.oo
        end = interval.upper if below else interval.lower
        return Hypothesis(Form.ONE_SIDED, _limits((end,), parameter, space, key), below)
    return Hypothesis(Form.INTERVAL, _limits((interval.lower, interval.upper), parameter, space, key))


def _read_set(text: str, parameter: str, symbols: Mapping[str, sympy.Expr], key: str) -> list[Interval]:
    plain = plain_signs(require_text(text, key, RIGHT))
    pieces = re.split(r"\bor\b", plain)
    if len(pieces) > 2:
        raise InputError(f"{shorten(text)} has more than two parts", RIGHT, key=key)
    intervals = [read_chain(piece, parameter, symbols, key, RIGHT) for piece in pieces]
    for piece, interval in zip(pieces, intervals, strict=True):
        if interval.is_point and re.search("[<>]", piece):
            raise _equal_limits(interval.lower, parameter, key)
    return intervals


def _equal_limits(limit: sympy.Expr, parameter: str, key: str) -> InputError:
    return InputError("the two limits are equal", f'for one value write "{parameter} = {formula_text(limit)}"', key=key)


def _require_closed(interval: Interval, parameter: str, key: str) -> None:
    for end, closed in ((interval.lower, interval.lower_closed), (interval.upper, interval.upper_closed)):
        if not closed and end.is_infinite is not True:
            whole = Interval(interval.lower, interval.upper, interval.lower != -sympy.oo, interval.upper != sympy.oo)
            raise InputError(
                f"the null {interval_text(interval, parameter)} leaves out its own limit",
                f'a null contains its limits: write "{interval_text(whole, parameter)}"',
                key=key,
            )


def _outside(intervals: list[Interval], parameter: str, space: Space, key: str) -> Hypothesis:
    below = [i for i in intervals if i.lower == -sympy.oo and i.upper != sympy.oo]
    above = [i for i in intervals if i.upper == sympy.oo and i.lower != -sympy.oo]
    if len(below) != 1 or len(above) != 1:
        raise InputError("the two parts of the null are not one below and one above", RIGHT, key=key)
    return Hypothesis(Form.OUTSIDE, _limits((below[0].upper, above[0].lower), parameter, space, key))


def _limits(ends: tuple[sympy.Expr, ...], parameter: str, space: Space, key: str) -> tuple[Exact, ...]:
    limits = tuple(as_exact(end, key) for end in ends)
    for limit, end in zip(limits, ends, strict=True):
        if not space.contains(limit):
            raise InputError(
                f"the limit {end} lies outside the parameter space {space.text}",
                f"{parameter} must lie inside it",
                key=key,
            )
    if len(limits) == 2:
        order = compare(limits[0], limits[1])
        if order == 0:
            raise _equal_limits(ends[0], parameter, key)
        if order > 0:
            raise InputError(
                f"the limits are in the wrong order: {ends[0]} is above {ends[1]}",
                "write the smaller limit first",
                key=key,
            )
    return limits


def check_alternative(
    text: str,
    null: Hypothesis,
    parameter: str,
    symbols: Mapping[str, sympy.Expr],
    key: str = "problem.alternative",
) -> None:
    """Refuse an alternative that is not the complement of the null.

    Raises
    ------
    InputError
        With the complement, as it should be written.
    """
    if not _same_set(_read_alternative(text, parameter, symbols, key), null.alternative_set):
        raise InputError(
            f"{shorten(text)} is not the complement of the null {null.text(parameter)}",
            f'write "{null.alternative_text(parameter)}" or leave it out',
            key=key,
        )


def _read_alternative(text: str, parameter: str, symbols: Mapping[str, sympy.Expr], key: str) -> list[Interval]:
    plain = plain_signs(require_text(text, key, RIGHT))
    if plain.count("!=") == 1 and " or " not in plain:
        (point,) = _read_set(plain.replace("!=", "=="), parameter, symbols, key)
        return [Interval(upper=point.lower), Interval(lower=point.lower)]
    return _read_set(plain, parameter, symbols, key)


def _same_set(read: list[Interval], wanted: tuple[Interval, ...]) -> bool:
    if len(read) != len(wanted):
        return False
    ordered = sorted(read, key=lambda interval: interval.lower != -sympy.oo)
    return all(_same_interval(a, b) for a, b in zip(ordered, wanted, strict=True))


def _same_interval(a: Interval, b: Interval) -> bool:
    closed = (a.lower_closed, a.upper_closed) == (b.lower_closed, b.upper_closed)
    return closed and compare(a.lower, b.lower) == 0 == compare(a.upper, b.upper)
