"""What becomes of the test when its numbers are printed to k decimals: the true expectations and size."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.certificate.claims import claim, ends, fixed, rounded, spelled
from verify.errors import UndecidedError
from verify.problem.numbers import Exact

if TYPE_CHECKING:
    from verify.certificate.expectations import Expectations
    from verify.solution.solve import Solution

MOST_DECIMALS = 60


def rounding_table(
    solution: Solution, expectations: Expectations, test: dict[str, Any], tolerance: Fraction, digits: int
) -> dict[str, Any]:
    """Return rows for k = 1, 2, ... up to the first at which every expectation stays within ``tolerance`` of its level.

    Source: the power of these tests is monotone or unimodal in the parameter (variation diminishing: S. Karlin, *Total
    Positivity*, 1968), so that the size is the largest expectation at the limits.
    """
    kind = "gamma" if any(key.startswith("gamma") for key in test) else "c"
    names = [key for key in test if key.startswith(kind)]
    rows: list[dict[str, Any]] = []
    for k in range(1, MOST_DECIMALS + 1):
        texts = {name: _rounded(test[name], k) for name in names}
        values = tuple(Fraction(text) for text in texts.values())
        seen = [expectations.phi(law, values) for law in solution.laws]
        rows.append({"decimals": k, "numbers": texts, **_sizes(seen, digits)})
        if all(_within(e, level, tolerance) for e, level in zip(seen, solution.problem.levels, strict=True)):
            return {"tolerance": str(tolerance), "decimals": k, "rows": rows}
    raise UndecidedError(f"{MOST_DECIMALS} decimals do not keep the size within {tolerance}; allow a larger tolerance")


def _rounded(value: Any, decimals: int) -> str:
    low, high = (fixed(end, decimals) for end in ends(value))
    if low != high:
        raise UndecidedError("a number lies on the edge of its rounding; ask for more digits")
    return low


def _sizes(seen: list[Enclosure], digits: int) -> dict[str, Any]:
    claims = [claim(e, digits) for e in seen]
    pairs = [ends(value) for value in claims]
    low, high = max(p[0] for p in pairs), max(p[1] for p in pairs)
    best = [value for value, pair in zip(claims, pairs, strict=True) if pair == (low, high)]
    size = best[0] if best else {"lower": _decimal(low), "upper": _decimal(high)}
    return {"expectations": claims, "size": size}


def _decimal(value: Fraction) -> str:
    return spelled(rounded(value, 60, up=False))


def _within(seen: Enclosure, level: Exact, tolerance: Fraction) -> bool:
    with balls(512) as A:
        target = to_enclosure(A.real(level))
    return seen.upper - target.lower < tolerance and target.upper - seen.lower < tolerance
