"""Chains of inequalities in one name, "8 <= lam <= 12", "12 >= lam", "lam = 8", as exact intervals."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass

import sympy

from verify.errors import InputError
from verify.problem.formula import formula_text, parse_formula
from verify.problem.scan import plain_signs, require_text, shorten

_SIGN = re.compile(r"<=|>=|==|!=|=|<|>")
_INTERVAL = re.compile(r"\s*([(\[])(.*),(.*)([)\]])\s*")


@dataclass(frozen=True)
class Interval:
    """An interval; an infinite end is -oo or oo and open."""

    lower: sympy.Expr = -sympy.oo
    upper: sympy.Expr = sympy.oo
    lower_closed: bool = False
    upper_closed: bool = False

    @property
    def is_point(self) -> bool:
        """Whether both ends are the same expression, closed."""
        return bool(self.lower == self.upper) and self.lower_closed and self.upper_closed


def read_chain(text: str, name: str, symbols: Mapping[str, sympy.Expr], key: str, right: str) -> Interval:
    """Read a chain of one or two inequalities, or an equation, in which ``name`` stands alone in one part.

    Parameters
    ----------
    text : str
        e.g. "8 <= lam <= 12", "lam > 0", "1 > p > 0", "lam = 8".
    name : str
        The name that is bounded.
    symbols : Mapping
        What may stand in the bounds.
    key, right : str
        For messages: where the text came from, what would be right.

    Examples
    --------
    >>> read_chain("12 >= lam >= 8", "lam", {}, "", "")
    Interval(lower=8, upper=12, lower_closed=True, upper_closed=True)
    """
    plain = plain_signs(require_text(text, key, right))
    parts = [part.strip() for part in _SIGN.split(plain)]
    signs = _SIGN.findall(plain)
    if parts.count(name) != 1 or len(signs) not in (1, 2):
        raise InputError(f"{shorten(text)} does not bound {name} by one or two inequalities", right, key=key)
    place = parts.index(name)
    if "!=" in signs or (len(signs) == 2 and (place != 1 or not _same_direction(signs))):
        raise InputError(f"{shorten(text)} is not one interval", right, key=key)
    result = Interval()
    for side, other in enumerate(parts):
        if side != place:
            value = read_bound(other, symbols, key)
            # the sign as it reads with the name on its left
            between = signs[min(side, place)]
            result = _narrow(result, _flip(between) if side < place else between, value)
    return result


def _same_direction(signs: list[str]) -> bool:
    return all("<" in sign for sign in signs) or all(">" in sign for sign in signs)


def _flip(sign: str) -> str:
    return sign.translate(str.maketrans("<>", "><"))


def _narrow(interval: Interval, sign: str, value: sympy.Expr) -> Interval:
    closed = "=" in sign and value.is_infinite is not True
    if sign in ("=", "=="):
        return Interval(value, value, True, True)
    if "<" in sign:
        return Interval(interval.lower, value, interval.lower_closed, closed)
    return Interval(value, interval.upper, closed, interval.upper_closed)


def read_bound(text: str, symbols: Mapping[str, sympy.Expr], key: str) -> sympy.Expr:
    """Read one bound: a formula, or ``oo``/``-oo`` (also ``inf``, ``infinity``).

    Examples
    --------
    >>> read_bound("-oo", {}, ""), read_bound("1/2", {}, "")
    (-oo, 1/2)
    """
    match re.sub(r"\s", "", text).lower():
        case "oo" | "inf" | "infinity" | "+oo" | "+inf":
            return sympy.oo
        case "-oo" | "-inf" | "-infinity":
            return -sympy.oo
    return parse_formula(text, symbols, key)


def read_brackets(text: str, symbols: Mapping[str, sympy.Expr], key: str, right: str) -> Interval:
    """Read an interval written with brackets, e.g. "(0, 1]".

    Examples
    --------
    >>> read_brackets("[0, oo)", {}, "", "")
    Interval(lower=0, upper=oo, lower_closed=True, upper_closed=False)
    """
    match = _INTERVAL.fullmatch(plain_signs(text))
    if not match:
        raise InputError(f"{shorten(text)} is not an interval", right, key=key)
    left, low, high, end = match.groups()
    lower, upper = read_bound(low, symbols, key), read_bound(high, symbols, key)
    return Interval(
        lower,
        upper,
        left == "[" and lower.is_infinite is not True,
        end == "]" and upper.is_infinite is not True,
    )


def interval_text(interval: Interval, name: str) -> str:
    """Write an interval as a chain, e.g. "8 < lam <= 12".

    Examples
    --------
    >>> interval_text(Interval(lower=sympy.Integer(8)), "lam")
    'lam > 8'
    """
    low, high = formula_text(interval.lower), formula_text(interval.upper)
    below, above = ("<=" if closed else "<" for closed in (interval.lower_closed, interval.upper_closed))
    if interval.is_point:
        return f"{name} = {low}"
    if interval.lower == -sympy.oo:
        return f"{name} {above} {high}" if interval.upper != sympy.oo else f"all {name}"
    if interval.upper == sympy.oo:
        return f"{name} {_flip(below)} {low}"
    return f"{low} {below} {name} {above} {high}"
