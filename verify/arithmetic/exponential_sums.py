"""Sums of w exp(2 pi i k x) over many points x, for k = 0, 1, 2, ..., in blocks of k."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any

from flint import acb, acb_mat, arb

Ball = Any
BLOCK = 32


@dataclass(frozen=True, eq=False)
class ExponentialSums:
    """The sums for fixed points and weights.

    Attributes
    ----------
    places, weights : sequences of balls
        The points and their weights.

    Examples
    --------
    >>> from verify.arithmetic.ball import balls
    >>> with balls(64):
    ...     sums = ExponentialSums([arb(0), arb(1) / 2], [arb(3), arb(1)])
    ...     print(sums.at(0).real.str(5), sums.at(65).real.str(5))
    4.0000 2.0000
    """

    places: Sequence[Ball]
    weights: Sequence[Ball]
    kept: list[Any] = field(default_factory=list, repr=False)

    def at(self, k: int) -> Any:
        """Return the sum for k; those of a block are computed together."""
        while len(self.kept) <= k:
            column = [[w * _turned(x, len(self.kept))] for x, w in zip(self.places, self.weights, strict=True)]
            self.kept.extend((self._within * acb_mat(column)).entries())
        return self.kept[k]

    @cached_property
    def _within(self) -> Any:
        return acb_mat([[_turned(x, k) for x in self.places] for k in range(BLOCK)])


def _turned(x: Ball, k: int) -> Any:
    """exp(2 pi i k x)."""
    return acb(2 * k * arb(x)).exp_pi_i()
