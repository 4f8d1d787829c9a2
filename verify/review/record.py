"""A verdict as plain data: what goes to JSON, to a journal, into tables and into the memo."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from verify.arithmetic.enclosure import Enclosure, decimal_text
from verify.problem.numbers import exact_text
from verify.review.consequences import Consequences
from verify.review.verdict import Outcome, Verdict

Record = dict[str, Any]
DIGITS = 15
"""Significant digits of consequences."""


def record_of(
    verdict: Verdict, *, digits: int = DIGITS, row: int | None = None, name: str = "", case: str = ""
) -> Record:
    """Return the record of a verdict.

    Parameters
    ----------
    verdict : Verdict
        The verdict.
    digits : int
        Significant digits of the right numbers, rounded outward.
    row : int or None
        Number of the row in its table; None for the claim of a case file.
    name, case : str
        How the row is called, and which case it is about.
    """
    problem, claim, right = verdict.problem, verdict.claim, verdict.numbers
    correct = {name: value.strings(digits) for name, value in right.items()}
    reported = {
        name: correct[name] if right.get(name) == value else value.strings(digits)
        for name, value in (verdict.correct or {}).items()
    }
    parameter = problem.density.parameter if problem else ""
    return {
        "row": row,
        "id": name,
        "case": case,
        "verdict": verdict.verdict,
        "null": problem.hypothesis.text(parameter) if problem else None,
        "parameter": parameter,
        "alpha": [exact_text(level) for level in problem.levels] if problem else [],
        "n": problem.n if problem else None,
        "claimed": {name: number.text for name, number in claim.numbers.items()} if claim else {},
        "correct": correct or None,
        "correct_reported": reported,
        "correct_printed": verdict.correct_printed,
        "off": list(verdict.off),
        "consequences": _consequences(verdict.consequences),
        "slips": [slip.name for slip in verdict.slips],
        "because": [slip.sentence for slip in verdict.slips],
        "notes": list(verdict.notes),
        "binary": [name for name, number in claim.numbers.items() if number.binary] if claim else [],
        "error": None,
    }


def _consequences(result: Consequences | None) -> Record | None:
    if result is None:
        return None
    size, loss = result.size, result.loss
    return {
        "expectations": [
            {
                "of": e.of,
                "at": exact_text(e.at),
                "target": exact_text(e.target),
                "expectation": _ends(e.value),
            }
            for e in result.expectations
        ],
        "level_kept": result.level_kept,
        "size": _ends(size.value) if size else None,
        "size_at": size.at if size else None,
        "power_lost": _ends(loss.lost) if loss else None,
        "power_lost_at": exact_text(loss.at) if loss else None,
        "best_power": _ends(loss.best) if loss else None,
    }


def _ends(value: Enclosure) -> dict[str, str]:
    return value.strings(DIGITS)


def unusable(row: int, name: str, case: str, message: str) -> Record:
    """Return the record of a row that could not be used; it is reported and passed over."""
    empty: Record = {
        "null": None,
        "parameter": "",
        "alpha": [],
        "n": None,
        "claimed": {},
        "correct": None,
        "correct_reported": {},
        "correct_printed": {},
        "off": [],
        "consequences": None,
        "slips": [],
        "because": [],
        "notes": [],
        "binary": [],
    }
    start = {"row": row, "id": name, "case": case, "verdict": Outcome.UNDECIDED.value}
    return {**start, **empty, "error": message}


def summary_of(counts: dict[str, int]) -> str:
    """Return one line that counts the verdicts.

    Examples
    --------
    >>> summary_of({"agrees": 3, "differs": 1})
    '4 rows: 3 agree, 1 differs'
    """
    total = sum(counts.values())
    words = {
        "agrees": ("agrees", "agree"),
        "last digit": ("agrees but for the last digit", "agree but for the last digit"),
        "differs": ("differs", "differ"),
        "refuted": ("is refuted", "are refuted"),
        "undecided": ("is undecided", "are undecided"),
        "unusable": ("could not be used", "could not be used"),
    }
    parts = [f"{counts[key]} {forms[counts[key] != 1]}" for key, forms in words.items() if counts.get(key)]
    return f"{total} row{'' if total == 1 else 's'}: {', '.join(parts) or 'nothing'}"


def plain(text: str) -> str:
    """Write an exact number as a short decimal where it is one.

    Examples
    --------
    >>> plain("61/5"), plain("1/3"), plain("sqrt(2)")
    ('12.2', '1/3', 'sqrt(2)')
    """
    try:
        value = Fraction(text)
    except ValueError:
        return text
    rest = value.denominator
    for prime in (2, 5):
        while rest % prime == 0:
            rest //= prime
    return decimal_text(value, 40, up=False) if rest == 1 and len(text) < 30 else text


def kind_of(record: Record) -> str:
    """Return the verdict of a record, or "unusable"."""
    return "unusable" if record["error"] is not None else str(record["verdict"])
