"""The columns of a table of answers.

A proven number is text in decimals, so that no digit is lost on the way into another language: two columns, the ends
of its enclosure rounded outward, equal when the number is exact. A third column, named ``..._double``, is the nearest
double, rounded, for convenience only.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from verify.problem.hypothesis import Form

Kind = Literal["text", "whole", "double"]


@dataclass(frozen=True)
class Column:
    """One column: its name, what it holds, and what that means."""

    name: str
    kind: Kind
    meaning: str


MEANINGS = {
    "c": "cutoff on the scale of V, the sum of T over the observations",
    "gamma": "critical function at c (empty for a continuous law)",
    "c1": "lower cutoff on the scale of V, the sum of T over the observations",
    "c2": "upper cutoff",
    "gamma1": "critical function at c1 (empty for a continuous law)",
    "gamma2": "critical function at c2 (empty for a continuous law)",
}


def columns_of(form: Form) -> tuple[Column, ...]:
    """Return the columns of a table for nulls of one form.

    Examples
    --------
    >>> [column.name for column in columns_of(Form.ONE_SIDED)][:8]
    ['row', 'limit', 'alpha', 'n', 'null', 'status', 'reason', 'rejects']
    """
    two = form in (Form.OUTSIDE, Form.INTERVAL)
    limits = ("lower", "upper") if two else ("limit",)
    levels = ("alpha1", "alpha2") if two else ("alpha",)
    columns = [
        Column("row", "whole", "number of the row, from 1"),
        *(Column(name, "text", "limit of the null, exact") for name in limits),
        *(Column(name, "text", "level at that limit, exact") for name in levels),
        Column("n", "whole", "number of observations"),
        Column("null", "text", "the null hypothesis"),
        Column("status", "text", "weakest grade that the numbers lean on; or undecided, or unusable"),
        Column("reason", "text", "why there are no numbers; else empty"),
        Column("rejects", "text", "inside or outside (c1, c2); above or below c"),
    ]
    for name in form.number_names:
        columns += [
            Column(f"{name}_lower", "text", f"{MEANINGS[name]}: proven lower end, rounded down"),
            Column(f"{name}_upper", "text", f"{MEANINGS[name]}: proven upper end, rounded up"),
            Column(f"{name}_double", "double", f"{MEANINGS[name]}: rounded to a double, for convenience only"),
        ]
    return tuple(columns)
