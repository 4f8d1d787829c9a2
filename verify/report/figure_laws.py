"""The laws of V's lattice coordinate Y that a certificate states, rebuilt from its text for drawing."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import accuracy_bits, balls, to_enclosure
from verify.errors import UndecidedError
from verify.laws import CLOSED_FORMS
from verify.problem.density import Density
from verify.problem.formula import parse_formula
from verify.problem.numbers import as_exact, as_expr, exact

if TYPE_CHECKING:
    from verify.derivation.family import LawFamily
    from verify.laws.base import Law
    from verify.problem.numbers import Exact

LawAt = Callable[["Exact"], "Law"]
BITS = (64, 256, 1024)
"""Precisions tried for a point of a drawing."""
ENOUGH = 20
"""Bits of a number that a drawing shows."""


def law_at(predicate: dict[str, Any], family: LawFamily | None = None) -> LawAt:
    """Return the map from a parameter value to the law of the sum of n Y's.

    Parameters
    ----------
    predicate : dict
        Of a certificate.
    family : LawFamily, optional
        The family derived from the same density; where the law has no closed form it is derived again without it.
    """
    law, n = predicate["law"], int(predicate["problem"]["n"])
    kind = CLOSED_FORMS.get(law["name"])
    if kind is None:
        found = family or _derived(predicate)
        return lambda value: found.at(value, n)
    parameter = predicate["problem"]["density"]["parameter"]
    texts = law["parameters"]

    def at(value: Exact) -> Law:
        known = {parameter: as_expr(value)}
        return kind(**{name: as_exact(parse_formula(text, known)) for name, text in texts.items()}).sum_of(n)

    return at


def density_of(predicate: dict[str, Any]) -> Density:
    """Rebuild the density of a certificate."""
    return Density(**predicate["problem"]["density"])


def limits_of(predicate: dict[str, Any]) -> list[Exact]:
    """Return the limits of the null, ascending."""
    return [exact(text) for text in dict.fromkeys(entry["at"] for entry in predicate["side_conditions"])]


def number(compute: Callable[[Any], Any]) -> float:
    """Evaluate in balls, with as many bits as a drawing needs.

    Raises
    ------
    UndecidedError
        When no precision is enough.

    Examples
    --------
    >>> round(number(lambda A: A.exp(A.real(1))), 6)
    2.718282
    """
    for bits in BITS:
        with balls(bits) as A:
            ball = A.real(compute(A))
            if ball.is_finite() and (accuracy_bits(ball) >= ENOUGH or float(ball.rad()) < 1e-9):
                return float(to_enclosure(ball).mid)
    raise UndecidedError("a number of a drawing stays uncertain")


def _derived(predicate: dict[str, Any]) -> LawFamily:
    from verify.derivation.derive import derive

    found = derive(density_of(predicate), limits=tuple(limits_of(predicate)), n=predicate["problem"]["n"])
    if found.family is None:
        raise UndecidedError("the law of the statistic is not known")
    return found.family


def shown(value: Exact | Fraction) -> float:
    """Return an exact number as a float, for an axis."""
    return float(value) if isinstance(value, Fraction) else number(lambda A: A.real(value))
