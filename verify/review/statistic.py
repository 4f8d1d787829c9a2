"""A colleague's own statistic: the derived one times a factor plus a constant, which the printed cutoffs
follow.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

from verify.derivation.affine import affine_map
from verify.derivation.points import support_points
from verify.problem.formula import parse_formula
from verify.problem.numbers import as_exact
from verify.review.style import Style

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation


def styled(style: Style, said: Mapping[str, str], derivation: Derivation) -> tuple[Style, str]:
    """Return the style with the scale and shift of the claimed statistic, and a remark where there is one.

    A statistic that is no affine function of the derived one is refuted in the ledger; the numbers are then
    read on the derived scale.
    """
    text = said.get("statistic", "")
    if not text.strip():
        return style, ""
    density = derivation.density
    symbols = {**density.constant_symbols, density.variable: density.x}
    claimed = parse_formula(text, symbols, "claim.statistic")
    found = affine_map(claimed, derivation.statistic, density.x, support_points(density.parsed_support))
    if found.scale is None or found.shift is None:
        return style, "the cutoffs were read on the scale of the derived statistic"
    scale, shift = as_exact(found.scale), as_exact(found.shift)
    if not (isinstance(scale, Fraction) and isinstance(shift, Fraction)):
        return (
            style,
            "the claimed statistic has an irrational scale; the cutoffs were read on that of the derived one",
        )
    if scale == 1 and shift == 0:
        return style, ""
    return replace(
        style, scale=scale, shift=shift
    ), f"the cutoffs were read on the scale of the claimed statistic {text}"
