"""A grid of designs: a case file with a table ``[grid]`` whose lists vary what ``[problem]`` asks."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from decimal import Context, Decimal
from fractions import Fraction
from itertools import product
from typing import Any

from verify.errors import InputError
from verify.problem.casefile import Case, CaseText
from verify.problem.hypothesis import Hypothesis
from verify.problem.numbers import Exact, exact, exact_text
from verify.problem.order import compare
from verify.problem.problem import Problem

MOST_ROWS = 10_000_000
_RANGE = re.compile(r"\s*(\d{1,18})\s*\.\.\s*(\d{1,18})\s*(?:step\s+(\d{1,18})\s*)?")

Design = dict[str, Any]
"""One row of the grid, in texts: ``limits`` (list), ``levels`` (list), ``n`` (int)."""


@dataclass(frozen=True)
class Grid:
    """Every combination of limits, levels and sizes.

    Attributes
    ----------
    case : Case
        Density and base problem.
    limits : tuple
        Limits to ask for, each a tuple of one or two exact texts.
    levels : tuple
        Levels, each a tuple of as many.
    sizes : sequence of int
        Numbers of observations.
    left_out : int
        Pairs of limits that are not ascending.
    """

    case: Case
    limits: tuple[tuple[str, ...], ...]
    levels: tuple[tuple[str, ...], ...]
    sizes: Sequence[int]
    left_out: int

    def __len__(self) -> int:
        return len(self.limits) * len(self.levels) * len(self.sizes)

    @property
    def problem(self) -> Problem:
        """The base problem."""
        return self.case.require_problem()

    def designs(self) -> Iterator[Design]:
        """Yield the rows in order: limits outermost, then levels, then sizes."""
        for limits, levels, n in product(self.limits, self.levels, self.sizes):
            yield {"limits": list(limits), "levels": list(levels), "n": n}


def read_grid(text: CaseText) -> Grid:
    """Read the grid of a case file; what has no list is as in ``[problem]``.

    Raises
    ------
    InputError
        With the file and the key.
    """
    case, grid = text.read(), text.grid
    problem = case.require_problem()
    try:
        every, limits = _limits(grid, problem)
        levels = _levels(grid, problem, len(problem.hypothesis.limits))
        read = Grid(case, limits, levels, _sizes(grid, problem), len(every) - len(limits))
        if not limits:
            raise InputError("no pair of limits is ascending", "give some lower below some upper", key="grid.lower")
        if len(read) > MOST_ROWS:
            raise InputError(f"the grid has {len(read)} rows", f"at most {MOST_ROWS}", key="grid")
    except InputError as error:
        raise error.at(file=case.path) from None
    return read


def problem_of_design(base: Problem, design: Design) -> Problem:
    """Return the base problem with the limits, levels and size of a row.

    Raises
    ------
    InputError
        When a limit lies outside the parameter space, or a level outside (0, 1).
    """
    asked = base.hypothesis
    limits = tuple(exact(text, "grid") for text in design["limits"])
    null = Hypothesis(asked.form, limits, asked.null_below).text(base.density.parameter)
    levels = tuple(design["levels"])
    return Problem(base.density, null, levels if len(levels) == 2 else levels[0], design["n"])


def plain_text(value: Exact) -> str:
    """Write an exact number as a decimal where it has a short one, which any language reads.

    Examples
    --------
    >>> from fractions import Fraction
    >>> plain_text(Fraction(1, 20)), plain_text(Fraction(1, 3)), plain_text(Fraction(100))
    ('0.05', '1/3', '100')
    """
    if isinstance(value, Fraction):
        near = Context(prec=40).divide(Decimal(value.numerator), Decimal(value.denominator))
        if Fraction(near) == value and abs(near.adjusted()) < 40:
            return format(near, "f")
    return exact_text(value)


def _limits(grid: dict[str, Any], problem: Problem) -> tuple[list[tuple[str, ...]], tuple[tuple[str, ...], ...]]:
    """All pairs (or single limits), and those that are ascending."""
    asked = problem.hypothesis
    names = ("lower", "upper") if len(asked.limits) == 2 else ("limit",)
    for name in ("lower", "upper", "limit"):
        if name in grid and name not in names:
            right = f"the null has {len(names)} limit(s): give {' and '.join(names)}"
            raise InputError(f"{name} does not fit the null", right, key=f"grid.{name}")
    lists = [
        [plain_text(exact(value, f"grid.{name}")) for value in grid[name]] if name in grid else [plain_text(given)]
        for name, given in zip(names, asked.limits, strict=True)
    ]
    every = list(product(*lists))
    rising = (pair for pair in every if len(pair) == 1 or compare(exact(pair[0]), exact(pair[1])) < 0)
    return every, tuple(rising)


def _levels(grid: dict[str, Any], problem: Problem, count: int) -> tuple[tuple[str, ...], ...]:
    if "alpha" not in grid:
        return (tuple(plain_text(level) for level in problem.levels),)
    found = []
    for given in grid["alpha"]:
        pair = given if isinstance(given, list) else [given] * count
        if len(pair) != count:
            raise InputError("two levels for a null with one limit", "give one level each", key="grid.alpha")
        found.append(tuple(plain_text(exact(level, "grid.alpha")) for level in pair))
    return tuple(found)


def _sizes(grid: dict[str, Any], problem: Problem) -> Sequence[int]:
    given = grid.get("n", [problem.n])
    if isinstance(given, list):
        return tuple(given)
    found = _RANGE.fullmatch(given)
    if found is None:
        raise InputError(f"{given[:40]!r} is not a range", 'write e.g. "10..100" or "10..100 step 5"', key="grid.n")
    first, last, step = int(found[1]), int(found[2]), int(found[3] or 1)
    if step == 0 or last < first:
        raise InputError(f"the range {given.strip()} is empty", 'write e.g. "10..100"', key="grid.n")
    return range(first, last + 1, step)
