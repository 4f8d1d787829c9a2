"""The double-precision opinions as a certificate reports them."""

from __future__ import annotations

import math
from decimal import Decimal
from typing import TYPE_CHECKING, Any

from verify.arithmetic.agreement import significant_digits
from verify.arithmetic.enclosure import Enclosure
from verify.certificate.claims import Claim, ends, spelled

if TYPE_CHECKING:
    from verify.comparison.compare import Comparison


def double_precision(comparison: Comparison, test: dict[str, Any]) -> dict[str, Any]:
    """Return what each route says about the cutoffs and fractions, and to how many digits it agrees."""
    opinions = []
    for opinion in comparison.opinions:
        said = {name: opinion.numbers[name] for name in opinion.numbers if name in test}
        numbers = {
            name: None if text is None or not math.isfinite(float(text)) else spelled(Decimal(text))
            for name, text in said.items()
        }
        digits = {name: agreement(text, test[name]) for name, text in numbers.items() if text is not None}
        note = "; ".join(part for part in (opinion.note, opinion.failure) if part)
        opinions.append({"route": opinion.route, "numbers": numbers, "digits": digits, "note": note})
    flags = [{"kind": flag.kind, "number": flag.number, "text": flag.text} for flag in comparison.flags]
    condition = "" if comparison.condition is None else f"{comparison.condition:.1e}"
    return {"opinions": opinions, "flags": flags, "condition": condition}


def agreement(text: str, value: Claim) -> int:
    """Return the significant digits to which a double, as it is written, agrees with the number as it is certified.

    Examples
    --------
    >>> agreement("0.333", "1/3")
    3
    """
    return significant_digits(float(text), Enclosure(*ends(value)))
