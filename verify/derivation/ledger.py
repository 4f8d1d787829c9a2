"""The ledger of a derivation: graded steps, by name."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from enum import Enum

SUPPORT, NONNEGATIVITY, NORMALISATION = "support", "nonnegativity", "normalisation"
FACTORISATION, MONOTONICITY, LAW = "factorisation", "monotonicity", "law"
LAW_OF_THE_SUM = "law of the sum"
CLAIMS = "claims"
"""The steps that judge what a colleague said; nothing that is derived leans on them."""
NUMERICAL_LOOK = "numerical look"
"""A second opinion of the law: it counts when it fails."""


class Grade(Enum):
    """How firmly a step stands, strongest first.

    ``PROVED`` is a symbolic identity or an enclosure valid for all parameter values; ``ENCLOSED`` is ball
    arithmetic over the interval that the step names; ``CHECKED`` is a numerical check to so many digits;
    ``UNDECIDED`` was left open within its budget; ``REFUTED`` comes with a witness.
    """

    PROVED = "proved"
    ENCLOSED = "enclosed"
    CHECKED = "checked numerically"
    UNDECIDED = "undecided"
    REFUTED = "refuted"

    @property
    def rank(self) -> int:
        """Position in the order of strength, 0 for the strongest."""
        return list(Grade).index(self)


def weakest(grades: Iterable[Grade]) -> Grade:
    """Return the weakest of some grades; a chain is as strong as that.

    Examples
    --------
    >>> weakest([Grade.PROVED, Grade.CHECKED]).value
    'checked numerically'
    """
    return max(grades, key=lambda grade: grade.rank, default=Grade.PROVED)


@dataclass(frozen=True)
class Step:
    """One line of the ledger.

    Attributes
    ----------
    name : str
        One of the short fixed names of this module; ``numbers``, the step that a solution adds.
    grade : Grade
        How firmly it stands.
    statement : str
        What was shown, as a sentence with its formula.
    reason : str
        By which argument or rule.
    witness : str
        Numbers that show the failure, when it fails.
    """

    name: str
    grade: Grade
    statement: str
    reason: str = ""
    witness: str = ""

    def __str__(self) -> str:
        text = f"{self.name}: {self.grade.value}. {self.statement}"
        text += f" ({self.reason})" if self.reason else ""
        return text + (f" Witness: {self.witness}" if self.witness else "")
