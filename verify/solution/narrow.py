"""Where a window lies that holds next to nothing: there both ends are sought from one place."""

from __future__ import annotations

from typing import Any

from verify.arithmetic.ball import midpoint
from verify.solution.conditions import Conditions

NARROW = 1e-4
"""Probabilities below this are next to nothing."""


def narrow_contents(conditions: Conditions, A: Any) -> list[Any] | None:
    """Return the probabilities that the window must hold under each law; None where one of them is not narrow."""
    contents = [1 - A.real(level) if conditions.outside else A.real(level) for level in conditions.levels]
    return contents if all(content.mid() < NARROW for content in contents) else None


def even_point(conditions: Conditions, A: Any, contents: list[Any]) -> Any:
    """Return the place where the densities are as the contents; for a point null, the mean.

    The log ratio of the densities is linear in the statistic, so that two places give the third.
    """
    if conditions.point:
        return midpoint(conditions.laws[0].expectation(A))
    first, second = conditions.laws
    a, b = (_place(conditions, law.expectation(A)) for law in (first, second))
    if conditions.lattice and a == b:
        b = first.atom(a + 1, 1)

    def log_ratio(c: Any) -> Any:
        return A.log(second.density(A, c) / first.density(A, c))

    wanted = A.log(contents[1] / contents[0])
    return midpoint(a + (b - a) * (wanted - log_ratio(a)) / (log_ratio(b) - log_ratio(a)))


def _place(conditions: Conditions, mean: Any) -> Any:
    """A mean, or the atom beside it."""
    return conditions.laws[0].atom(int(float(mean)), 1) if conditions.lattice else midpoint(mean)
