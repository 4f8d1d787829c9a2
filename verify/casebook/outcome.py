"""What came of one case of a casebook, as plain data that can travel between processes."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from enum import Enum
from typing import Any


class Outcome(Enum):
    """How a case ended. Only ``PASS`` is green."""

    PASS = "pass"
    DIFFERS = "differs"
    REFUTED = "refuted"
    UNDECIDED = "undecided"
    UNUSABLE = "unusable"
    INTERNAL = "internal error"


STATUS = {
    Outcome.INTERNAL: 70,
    Outcome.DIFFERS: 1,
    Outcome.REFUTED: 1,
    Outcome.UNUSABLE: 2,
    Outcome.UNDECIDED: 3,
    Outcome.PASS: 0,
}
"""Exit status of each outcome, the one that decides for a whole book first."""


@dataclass(frozen=True)
class Message:
    """One thing that is not as it should be.

    Attributes
    ----------
    key : str
        The key of the case file that it is about, ``expect.gamma1``; empty for the case as a whole.
    text : str
        One sentence that shows what was expected and what was found.
    line : int or None
        The line of the case file where the key stands.
    """

    key: str
    text: str
    line: int | None = None

    def __str__(self) -> str:
        return f"{self.key}: {self.text}" if self.key and self.key not in self.text else self.text


@dataclass(frozen=True)
class Result:
    """What came of one case.

    Attributes
    ----------
    name : str
        The case, ``demo/lot-release``.
    path : str
        Its file, as found.
    outcome : Outcome
        How it ended.
    expected, found : str
        The verdict that the case expects (several words where more than one would do) and the one that came out.
    grade, law : str
        Of the run; empty where it did not come so far.
    numbers : dict
        The proven cutoffs and fractions, ``{"lower": ..., "upper": ...}`` each.
    slips, notes : tuple of str
        From the review of the claim.
    messages : tuple of Message
        Why the case did not pass; empty when it did.
    seconds : float
        How long it took. Not part of what is compared.
    """

    name: str
    path: str
    outcome: Outcome
    expected: str = ""
    found: str = ""
    grade: str = ""
    law: str = ""
    numbers: dict[str, dict[str, str]] = field(default_factory=dict)
    slips: tuple[str, ...] = ()
    notes: tuple[str, ...] = ()
    messages: tuple[Message, ...] = ()
    seconds: float = field(default=0.0, compare=False)

    @property
    def passed(self) -> bool:
        """Whether the case is green."""
        return self.outcome is Outcome.PASS

    def as_json(self) -> dict[str, Any]:
        """Plain data without times: the same case gives the same bytes."""
        return {
            "case": self.name,
            "file": self.path,
            "outcome": self.outcome.value,
            "expected": self.expected,
            "found": self.found,
            "grade": self.grade,
            "law": self.law,
            "cutoffs": self.numbers,
            "slips": list(self.slips),
            "notes": list(self.notes),
            "messages": [{"key": m.key, "text": m.text, "line": m.line} for m in self.messages],
        }


def status_of(results: Iterable[Result]) -> int:
    """Return the exit status of a book: 0 only when every case passed.

    Examples
    --------
    >>> status_of([Result("a", "a", Outcome.PASS), Result("b", "b", Outcome.UNDECIDED)])
    3
    """
    seen = {result.outcome for result in results}
    return next((status for outcome, status in STATUS.items() if outcome in seen), 0)


def counts_of(results: Iterable[Result]) -> dict[str, int]:
    """Return how many cases ended in each way, the ways that did not occur left out.

    Examples
    --------
    >>> counts_of([Result("a", "a", Outcome.PASS), Result("b", "b", Outcome.PASS)])
    {'pass': 2}
    """
    counts = {outcome.value: 0 for outcome in Outcome}
    for result in results:
        counts[result.outcome.value] += 1
    return {word: count for word, count in counts.items() if count}


def summary(results: Iterable[Result], *, left: int = 0) -> str:
    """Return one line that counts the outcomes, with the number of cases that were not run.

    Examples
    --------
    >>> summary([Result("a", "a", Outcome.PASS), Result("b", "b", Outcome.DIFFERS)], left=3)
    '2 cases: 1 pass, 1 differs; 3 not run'
    """
    counts = counts_of(results)
    total = sum(counts.values())
    parts = ", ".join(f"{count} {word}" for word, count in counts.items()) or "none"
    return f"{total} case{'' if total == 1 else 's'}: {parts}" + (f"; {left} not run" if left else "")
