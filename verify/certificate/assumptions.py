"""What a certificate takes on trust, in the closed list of sentences that the rechecker knows."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING, Any

from verify.derivation.ledger import Step
from verify.laws import CLOSED_FORMS
from verify.problem.hypothesis import Form
from verify.problem.optimality import optimality

if TYPE_CHECKING:
    from verify.problem.problem import Problem

NUMBERS = "the numbers: this law has no closed form here, and its quadrature or inversion is not replayed"


def theorem(form: Form, levels: Iterable[object]) -> str:
    """Return the theorem that makes a test with these levels at the limits the optimal one, in the certificate's words.

    Examples
    --------
    >>> theorem(Form.OUTSIDE, ["1/20", "1/20"]).partition(": ")[0]
    'Lehmann and Romano 2005, Theorem 3.7.1'
    """
    known = optimality(form, levels)
    return f"{known.source}: a test of this form with these side conditions is {known.sense}"


def assumptions(problem: Problem, steps: tuple[Step, ...], law: dict[str, Any]) -> list[str]:
    """Return the list: the theorem, each step of the derivation with its grade, and what the law leans on."""
    listed = [f"theorem: {theorem(problem.hypothesis.form, problem.levels)}"]
    listed += [f"derivation, step {step.name}: {step.grade.value}" for step in steps]
    if law["name"] == "lattice" and "total" in law["parameters"]:
        listed.append("the table of weights: its normaliser, and its mean where one is stated")
    if law["name"] not in (*CLOSED_FORMS, "lattice"):
        listed.append(NUMBERS)
    listed.append("the double-precision numbers: they are reported by another library and compared here, not computed")
    return listed
