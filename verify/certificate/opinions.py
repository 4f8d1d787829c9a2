"""The double-precision opinions as a certificate reports them."""

from __future__ import annotations

import math
from decimal import Decimal
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.certificate.claims import Claim, ends, spelled

if TYPE_CHECKING:
    from verify.comparison.compare import Comparison

MOST_DIGITS = 17


def double_precision(comparison: Comparison, test: dict[str, Any]) -> dict[str, Any]:
    """Return what each route says about the cutoffs and fractions, and to how many digits it agrees."""
    opinions = []
    for opinion in comparison.opinions:
        said = {name: opinion.numbers[name] for name in opinion.numbers if name in test}
        numbers = {
            name: None if text is None or not math.isfinite(float(text)) else spelled(Decimal(text))
            for name, text in said.items()
        }
        digits = {name: agreement(Fraction(text), test[name]) for name, text in numbers.items() if text is not None}
        note = "; ".join(part for part in (opinion.note, opinion.failure) if part)
        opinions.append({"route": opinion.route, "numbers": numbers, "digits": digits, "note": note})
    flags = [{"kind": flag.kind, "number": flag.number, "text": flag.text} for flag in comparison.flags]
    condition = "" if comparison.condition is None else f"{comparison.condition:.1e}"
    return {"opinions": opinions, "flags": flags, "condition": condition}


def agreement(x: Fraction, value: Claim) -> int:
    """Largest d <= 17 with abs(x - c) <= 10**-d abs(c) / 2 for every c of the claim; 0 when there is none.

    Examples
    --------
    >>> agreement(Fraction("0.333"), "1/3")
    2
    """
    low, high = ends(value)
    worst, size = max(abs(x - low), abs(x - high)), min(abs(low), abs(high))
    return max((d for d in range(MOST_DIGITS + 1) if 2 * worst * 10**d <= size), default=0)
