"""The support of one observation: integers or reals between two ends."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

import sympy

from verify.errors import InputError
from verify.problem.numbers import Exact
from verify.problem.order import compare
from verify.problem.relation import Interval, read_bound, read_brackets, read_chain
from verify.problem.scan import plain_signs, require_text, shorten

RIGHT = 'write "integers >= 0", "integers 0..10", "integers", "reals", "reals > 0" or "reals in (0, 1)"'
_SYNONYMS = (
    (r"(the )?(non-?negative|natural) (integers|numbers)( with 0)?", "integers >= 0"),
    (r"(the )?positive integers", "integers > 0"),
    (r"(the )?positive reals", "reals > 0"),
    (r"(the )?non-?negative reals", "reals >= 0"),
    (r"(the )?negative reals", "reals < 0"),
)


@dataclass(frozen=True)
class Support:
    """The set in which one observation lies.

    Attributes
    ----------
    kind : {"integers", "reals"}
        Which numbers.
    lower, upper : sympy.Expr
        The ends, -oo and oo where there are none. Finite numeric ends of integers are whole. An end may
        contain the parameter: that is for the derivation to refute.
    lower_closed, upper_closed : bool
        Whether an end belongs to the support.
    text : str
        The text as given.
    """

    kind: Literal["integers", "reals"]
    lower: sympy.Expr
    upper: sympy.Expr
    lower_closed: bool
    upper_closed: bool
    text: str

    @property
    def free_symbols(self) -> set[sympy.Symbol]:
        """The symbols in the ends."""
        return {*self.lower.free_symbols, *self.upper.free_symbols}

    @property
    def is_finite(self) -> bool:
        """Whether it has finitely many points, known without the parameter."""
        ends = (self.lower, self.upper)
        return self.kind == "integers" and all(end.is_Integer for end in ends)

    @property
    def points(self) -> range:
        """The points of a finite support."""
        if not self.is_finite:
            raise ValueError("the support is not finite")
        return range(int(self.lower), int(self.upper) + 1)

    def contains(self, value: Exact) -> bool:
        """Whether an exact number lies in the support (its ends must be numbers)."""
        if self.kind == "integers" and not (isinstance(value, Fraction) and value.denominator == 1):
            return False
        low, high = compare(value, self.lower), compare(value, self.upper)
        return (low > 0 or (low == 0 and self.lower_closed)) and (
            high < 0 or (high == 0 and self.upper_closed)
        )

    def __str__(self) -> str:
        return self.text


def parse_support(text: str, symbols: Mapping[str, sympy.Expr], key: str = "density.support") -> Support:
    """Read a support.

    Parameters
    ----------
    text : str
        See ``RIGHT``; synonyms such as "positive reals" are read too.
    symbols : Mapping
        Names that may stand in the ends: values of constants, and the parameter.

    Examples
    --------
    >>> parse_support("integers > 0", {}).lower
    1
    >>> parse_support("reals in [0, 1)", {}).lower_closed
    True
    """
    plain = re.sub(r"\s+", " ", plain_signs(require_text(text, key, RIGHT))).strip()
    for pattern, meaning in _SYNONYMS:
        plain = re.sub(rf"^{pattern}$", meaning, plain)
    match = re.fullmatch(r"(?:the )?(integers|reals)\b ?(.*)", plain)
    if not match:
        raise InputError(f"{shorten(text)} is not a support", RIGHT, key=key)
    kind, rest = match.groups()
    interval = _read_ends(kind, rest, symbols, key)
    if kind == "integers":
        interval = _whole_ends(interval)
    _require_more_than_a_point(kind, interval, text, key)
    return Support(
        "integers" if kind == "integers" else "reals",
        interval.lower, interval.upper, interval.lower_closed, interval.upper_closed, text.strip(),
    )  # fmt: skip


def _read_ends(kind: str, rest: str, symbols: Mapping[str, sympy.Expr], key: str) -> Interval:
    if not rest:
        return Interval()
    if rest.startswith("in "):
        return read_brackets(rest[3:], symbols, key, RIGHT)
    if ".." in rest and kind == "integers":
        low, _, high = rest.partition("..")
        lower = read_bound(low, symbols, key)
        upper = read_bound(high.lstrip("."), symbols, key) if high.strip() else sympy.oo
        return Interval(lower, upper, lower.is_infinite is not True, upper.is_infinite is not True)
    if rest[0] in "<>":
        return read_chain(f"_{rest}", "_", symbols, key, RIGHT)
    raise InputError(f"{shorten(rest)} after {kind} is not understood", RIGHT, key=key)


def _whole_ends(interval: Interval) -> Interval:
    lower, upper = interval.lower, interval.upper
    lower_closed, upper_closed = interval.lower_closed, interval.upper_closed
    if lower.is_number and lower.is_finite:
        inside = sympy.ceiling(lower)
        lower = inside + 1 if inside == lower and not lower_closed else inside
        lower_closed = True
    if upper.is_number and upper.is_finite:
        inside = sympy.floor(upper)
        upper = inside - 1 if inside == upper and not upper_closed else inside
        upper_closed = True
    return Interval(lower, upper, lower_closed, upper_closed)


def _require_more_than_a_point(kind: str, interval: Interval, text: str, key: str) -> None:
    if not (interval.lower.is_number and interval.upper.is_number):
        return
    order = compare(interval.lower, interval.upper)
    if order > 0:
        raise InputError(f"the support {shorten(text)} is empty", "write the smaller end first", key=key)
    if order == 0:
        raise InputError(
            f"the support {shorten(text)} has at most one point", "a support needs two points", key=key
        )
