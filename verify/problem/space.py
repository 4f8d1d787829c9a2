"""The parameter space: an open interval."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass

import sympy

from verify.errors import InputError
from verify.problem.numbers import Exact
from verify.problem.order import compare
from verify.problem.relation import Interval, read_brackets, read_chain
from verify.problem.scan import plain_signs, require_text, shorten

RIGHT = 'write "lam > 0", "0 < p < 1", "t in (0, 1)" or "reals"'


@dataclass(frozen=True)
class Space:
    """An open interval of parameter values.

    A closed end in the text, as in "0 <= p <= 1", is read, but only the interior is used: a law at the end
    itself is a limit that the theory of exponential families does not cover.

    Attributes
    ----------
    lower, upper : sympy.Expr
        The ends, -oo and oo where there are none.
    text : str
        The text as given.
    """

    lower: sympy.Expr
    upper: sympy.Expr
    text: str

    def contains(self, value: Exact) -> bool:
        """Whether an exact number lies in the open interval.

        Examples
        --------
        >>> from fractions import Fraction
        >>> parse_space("0 < p < 1", "p", {}).contains(Fraction(1))
        False
        """
        return compare(self.lower, value) < 0 < compare(self.upper, value)

    def __str__(self) -> str:
        return self.text


def parse_space(
    text: str, parameter: str, symbols: Mapping[str, sympy.Expr], key: str = "density.space"
) -> Space:
    """Read a parameter space.

    Parameters
    ----------
    text : str
        See ``RIGHT``.
    parameter : str
        Name of the parameter.
    symbols : Mapping
        Values of constants that may stand in the ends.

    Examples
    --------
    >>> parse_space("0 < p", "p", {}).upper
    oo
    """
    plain = re.sub(r"\s+", " ", plain_signs(require_text(text, key, RIGHT))).strip()
    interval = _read_interval(plain, parameter, symbols, key)
    if compare(interval.lower, interval.upper) >= 0:
        raise InputError(f"the parameter space {shorten(text)} is empty", RIGHT, key=key)
    return Space(interval.lower, interval.upper, text.strip())


def _read_interval(plain: str, parameter: str, symbols: Mapping[str, sympy.Expr], key: str) -> Interval:
    inside = re.fullmatch(rf"(?:{re.escape(parameter)} in )?(.*)", plain)
    rest = inside.group(1) if inside else plain
    match rest:
        case "reals" | "real" | "all reals" | "the reals":
            return Interval()
        case "positive reals" | "reals > 0":
            return Interval(lower=sympy.S.Zero)
    if rest != plain or (rest[0] in "([" and rest[-1] in ")]" and "," in rest):
        return read_brackets(rest, symbols, key, RIGHT)
    return read_chain(rest, parameter, symbols, key, RIGHT)
