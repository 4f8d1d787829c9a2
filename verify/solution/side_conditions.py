"""The equations that a test satisfies."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.errors import UndecidedError
from verify.problem.numbers import Exact


@dataclass(frozen=True)
class SideCondition:
    """One equation that the test satisfies.

    Attributes
    ----------
    at : Exact
        Parameter value under which the expectation is taken.
    target : Exact
        What it must be. For the moment condition of a point null: 0, the target of E[(V - E V) phi].
    expectation : Enclosure
        What it is, enclosed.
    of : {"phi", "(V - E V) phi"}
        Whose expectation.
    """

    at: Exact
    target: Exact
    expectation: Enclosure
    of: Literal["phi", "(V - E V) phi"]


def held(conditions: tuple[SideCondition, ...], prec: int) -> tuple[SideCondition, ...]:
    """Return the side conditions, none of which may exclude its target: what is handed out is looked at once more.

    Raises
    ------
    UndecidedError
        When one does.
    """
    with balls(prec + 64) as A:
        for condition in conditions:
            target, found = to_enclosure(A.real(condition.target)), condition.expectation
            if target.upper < found.lower or found.upper < target.lower:
                wrong = f"E[{condition.of}] = {found.text(15)} at the cutoffs found, which misses {condition.target}"
                raise UndecidedError(f"the proof contradicts itself: {wrong}")
    return conditions
