"""What becomes of the test when its numbers are printed to k decimals: the true expectations and size."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.certificate.claims import Claim, claim, ends, fixed, rounded, spelled
from verify.errors import UndecidedError
from verify.problem.hypothesis import Form
from verify.problem.numbers import Exact, as_exact, as_expr

if TYPE_CHECKING:
    from verify.certificate.expectations import Expectations
    from verify.laws import Law
    from verify.solution.solve import Solution

MOST_DECIMALS = 60


def rounding_table(
    solution: Solution, expectations: Expectations, test: dict[str, Any], tolerance: Fraction, digits: int
) -> dict[str, Any]:
    """Return rows for k = 1, 2, ... up to the first at which every expectation stays within ``tolerance`` of its level.

    The size is the largest expectation at the limits, and left out where that is not shown: where the test rejects
    between two limits, and the power in the middle is not at least that at both.

    Source: the power of these tests is monotone or unimodal in the parameter (variation diminishing: S. Karlin, *Total
    Positivity*, 1968).
    """
    kind = "gamma" if any(key.startswith("gamma") for key in test) else "c"
    names = [key for key in test if key.startswith(kind)]
    middle = _middle(solution, expectations)
    rows: list[dict[str, Any]] = []
    for k in range(1, MOST_DECIMALS + 1):
        texts = {name: _rounded(test[name], k) for name in names}
        values = tuple(Fraction(text) for text in texts.values())
        seen = [expectations.phi(law, values) for law in solution.laws]
        claims = [claim(e, digits) for e in seen]
        row = {"decimals": k, "numbers": texts, "expectations": claims}
        rows.append(row | _size(claims) if _located(solution, expectations, middle, values) else row)
        if all(_within(e, level, tolerance) for e, level in zip(seen, solution.problem.levels, strict=True)):
            return {"tolerance": str(tolerance), "decimals": k, "rows": rows}
    raise UndecidedError(f"{MOST_DECIMALS} decimals do not keep the size within {tolerance}; allow a larger tolerance")


def _rounded(value: Any, decimals: int) -> str:
    low, high = (fixed(end, decimals) for end in ends(value))
    if low != high:
        raise UndecidedError("a number lies on the edge of its rounding; ask for more digits")
    return low


def _middle(solution: Solution, expectations: Expectations) -> Law | None:
    """Return the law halfway between two limits where the test rejects between them."""
    if solution.form is not Form.OUTSIDE:
        return None
    low, high = map(as_expr, solution.problem.hypothesis.limits)
    return expectations.law(as_exact((low + high) / 2))


def _located(solution: Solution, expectations: Expectations, middle: Law | None, values: tuple[Fraction, ...]) -> bool:
    """Whether the power in the middle is shown to be at least that at both limits, so that they have the size."""
    if middle is None:
        return True
    peak = expectations.phi(middle, values, exact=True)
    at_limits = [expectations.phi(law, values, exact=True) for law in solution.laws]
    return all(e.upper <= peak.lower for e in at_limits)


def _size(claims: list[Claim]) -> dict[str, Any]:
    pairs = [ends(value) for value in claims]
    low, high = max(p[0] for p in pairs), max(p[1] for p in pairs)
    best = [value for value, pair in zip(claims, pairs, strict=True) if pair == (low, high)]
    return {"size": best[0] if best else {"lower": _decimal(low), "upper": _decimal(high)}}


def _decimal(value: Fraction) -> str:
    return spelled(rounded(value, 60, up=False))


def _within(seen: Enclosure, level: Exact, tolerance: Fraction) -> bool:
    with balls(512) as A:
        target = to_enclosure(A.real(level))
    return seen.upper - target.lower < tolerance and target.upper - seen.lower < tolerance
