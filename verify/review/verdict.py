"""What came of a claim: a verdict with its evidence. A refuted claim is a result, never an exception."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum
from typing import TYPE_CHECKING

from verify.arithmetic.enclosure import Enclosure
from verify.review.claim import Claim
from verify.review.consequences import Consequences
from verify.review.printed import rounded
from verify.review.style import Report

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.derivation.ledger import Step
    from verify.problem.problem import Problem
    from verify.solution.solve import Solution


class Outcome(Enum):
    """The five verdicts."""

    AGREES = "agrees"
    LAST_DIGIT = "last digit"
    DIFFERS = "differs"
    REFUTED = "refuted"
    UNDECIDED = "undecided"


@dataclass(frozen=True)
class SlipFound:
    """A slip that reproduces every printed number of the row."""

    name: str
    words: str

    @property
    def sentence(self) -> str:
        """One sentence.

        Examples
        --------
        >>> SlipFound("alpha-halved", "half the level").sentence
        'These are the numbers for half the level.'
        """
        return f"These are the numbers for {self.words}."


@dataclass(frozen=True)
class Verdict:
    """Verdict on one claim.

    Attributes
    ----------
    outcome : Outcome
        Which of the five.
    problem : Problem or None
        What the claim is about; None for a claim about a derivation alone.
    claim : Claim or None
        The printed numbers; None when none were printed.
    derivation : Derivation
        The ledger on which everything leans.
    solution : Solution or None
        The right test; None when the derivation carries none.
    correct : dict
        The right numbers in the colleague's own way of reporting, by name.
    off : tuple of str
        Names of the numbers that are not right.
    consequences : Consequences or None
        What follows from the printed test.
    slips : tuple of SlipFound
        Slips that reproduce the printed numbers; empty when none does.
    notes : tuple of str
        Whatever else a reader has to know, and why it is undecided or refuted.
    """

    outcome: Outcome
    problem: Problem | None
    claim: Claim | None
    derivation: Derivation
    solution: Solution | None = None
    correct: Report | None = None
    off: tuple[str, ...] = ()
    consequences: Consequences | None = None
    slips: tuple[SlipFound, ...] = ()
    notes: tuple[str, ...] = ()

    @property
    def verdict(self) -> str:
        """The verdict as one of the five words."""
        return self.outcome.value

    @property
    def correct_printed(self) -> dict[str, str]:
        """The right numbers with as many digits as the colleague printed."""
        printed = self.claim.numbers if self.claim else {}
        return {name: rounded(value, printed.get(name)) for name, value in (self.correct or {}).items()}

    @property
    def refuted_steps(self) -> tuple[Step, ...]:
        """Steps of the derivation that are refuted."""
        return tuple(step for step in self.derivation.steps if step.grade.value == "refuted")

    @property
    def numbers(self) -> dict[str, Enclosure]:
        """The right cutoffs and fractions on the scale of V = sum of T(Xi)."""
        return self.solution.numbers if self.solution else {}

    def __str__(self) -> str:
        lines = [self.verdict]
        if self.claim is not None:
            for name, printed in self.claim.numbers.items():
                right = self.correct_printed.get(name)
                lines.append(f"  {name}: printed {printed.text}" + (f", right {right}" if right is not None else ""))
        lines += [f"  {slip.sentence}" for slip in self.slips]
        return "\n".join([*lines, *(f"  {note}" for note in self.notes)])
