"""What a certificate takes on trust, in the closed list of sentences that the rechecker knows."""

from __future__ import annotations

from typing import Any

from verify.derivation.ledger import Step
from verify.laws import CLOSED_FORMS
from verify.problem.hypothesis import Form

BOOK = "Lehmann and Romano 2005"
THEOREMS = {
    Form.ONE_SIDED: f"{BOOK}, Corollary 3.4.1: a one-sided test of this form is uniformly most powerful",
    Form.OUTSIDE: f"{BOOK}, Theorem 3.7.1: a test of this form with these side conditions is uniformly most powerful",
    Form.INTERVAL: f"{BOOK}, section 4.2: a test of this form with these side conditions is "
    "uniformly most powerful unbiased",
    Form.POINT: f"{BOOK}, section 4.2: a test of this form with these side conditions is "
    "uniformly most powerful unbiased",
}
NUMBERS = "the numbers: this law has no closed form here, and its quadrature or inversion is not replayed"


def assumptions(form: Form, steps: tuple[Step, ...], law: dict[str, Any]) -> list[str]:
    """Return the list: the theorem, each step of the derivation with its grade, and what the law leans on."""
    listed = [f"theorem: {THEOREMS[form]}"]
    listed += [f"derivation, step {step.name}: {step.grade.value}" for step in steps]
    if law["name"] == "lattice" and "total" in law["parameters"]:
        listed.append("the table of weights: its normaliser, and its mean where one is stated")
    if law["name"] not in (*CLOSED_FORMS, "lattice"):
        listed.append(NUMBERS)
    listed.append("the double-precision numbers: they are reported by another library and compared here, not computed")
    return listed
