"""A problem: a density, a null hypothesis, one level or two, and a number of observations."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from functools import cached_property
from typing import TypeAlias

import sympy

from verify.errors import InputError
from verify.problem.density import Density
from verify.problem.hypothesis import Form, Hypothesis, check_alternative, parse_null
from verify.problem.numbers import Exact, exact
from verify.problem.order import compare
from verify.problem.scan import shorten

Level: TypeAlias = str | int | Fraction | Decimal | sympy.Expr


@dataclass(frozen=True)
class Problem:
    """What is asked: the best test of a null at given levels from n observations.

    Parameters
    ----------
    density : Density
        Of one observation.
    null : str
        One of the four forms, e.g. "lam <= 8 or lam >= 12".
    alpha : str, exact number, or two of them
        The level; two for a two-limit null, one for each limit.
    n : int or str
        Number of observations, a whole number from 1.
    alternative : str, optional
        Must be the complement of the null.

    Raises
    ------
    InputError
        At construction, for anything that cannot be read or does not fit together.

    Examples
    --------
    >>> d = Density("exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0",
    ...             parameter="lam", space="lam > 0")
    >>> p = Problem(d, null="lam <= 8 or lam >= 12", alpha="0.05", n=10)
    >>> p.hypothesis.form.value, p.levels, p.n
    ('outside null', (Fraction(1, 20), Fraction(1, 20)), 10)
    """

    density: Density
    null: str
    alpha: Level | Sequence[Level]
    n: int
    alternative: str | None = None

    def __post_init__(self) -> None:
        if not isinstance(self.density, Density):
            raise InputError("density is not a Density", "give verify.Density(...)", key="problem.density")
        object.__setattr__(self, "n", _whole_number(self.n))
        if isinstance(self.alpha, list):
            object.__setattr__(self, "alpha", tuple(self.alpha))
        hypothesis, _ = self.hypothesis, self.levels
        if self.alternative is not None:
            check_alternative(
                self.alternative, hypothesis, self.density.parameter, self.density.constant_symbols
            )

    @cached_property
    def hypothesis(self) -> Hypothesis:
        """The null, read."""
        density = self.density
        return parse_null(self.null, density.parameter, density.parsed_space, density.constant_symbols)

    @cached_property
    def levels(self) -> tuple[Exact, ...]:
        """One exact level for each limit."""
        key = "problem.alpha"
        two = self.hypothesis.form in (Form.OUTSIDE, Form.INTERVAL)
        if isinstance(self.alpha, tuple):
            if len(self.alpha) != 2 or not two:
                right = "give two levels, one for each limit, or one" if two else "give one level"
                raise InputError(
                    f"{len(self.alpha)} levels for a null with {1 + two} limit(s)", right, key=key
                )
            return tuple(_level(value, key) for value in self.alpha)
        return (_level(self.alpha, key),) * (1 + two)


def _level(value: Level, key: str) -> Exact:
    level = exact(value, key)
    if not compare(Fraction(0), level) < 0 < compare(Fraction(1), level):
        raise InputError(f"a level outside (0, 1): {shorten(str(value))}", 'write e.g. "0.05"', key=key)
    return level


def _whole_number(value: object) -> int:
    key, right = "problem.n", "write a whole number from 1, e.g. 10"
    if isinstance(value, bool) or not isinstance(value, int | str):
        raise InputError(f"the number of observations is not a whole number: {value!r}", right, key=key)
    if isinstance(value, str) and not re.fullmatch(r"\s*\d{1,18}\s*", value, re.ASCII):
        raise InputError(
            f"the number of observations is not a whole number: {shorten(value)}", right, key=key
        )
    number = int(value)
    if number < 1:
        raise InputError(f"the number of observations is {number}, below 1", right, key=key)
    if number >= 10**18:
        raise InputError("the number of observations is too large", "at most 18 digits are read", key=key)
    return number
