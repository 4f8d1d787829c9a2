"""Which pairs of levels a test can have at the two limits.

Among tests with the first level, the expectation at the second limit is smallest and largest for the two
one-sided ones, so two levels can be had together exactly when the second lies between these two.

Source: Lehmann and Romano 2005, Theorem 3.4.1 (the one-sided tests are the extremes).
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure, decimal_text
from verify.errors import InputError
from verify.laws import Law
from verify.solution.critical import CriticalFunction
from verify.solution.one_sided import TailProblem
from verify.solution.start import Rough
from verify.solution.window import search_precision

ENOUGH_DIGITS = 20


def require_attainable(laws: tuple[Law, ...], levels: tuple[Any, ...], rough: tuple[Rough, ...]) -> None:
    """Complain when no test has these two levels.

    Equal levels always can be had (phi = alpha everywhere is such a test).

    Raises
    ------
    InputError
        When the second level is certainly out of reach; says what is within reach.
    """
    if len(laws) == 1 or levels[0] == levels[1]:
        return
    prec = search_precision(rough, levels, 0)
    ends = [_second_expectation(laws, levels[0], rough[0], prec, above=above) for above in (False, True)]
    low, high = sorted(ends, key=lambda end: end.mid)
    with balls(prec) as A:
        wanted = to_enclosure(A.real(levels[1]))
    if wanted.upper < low.lower or wanted.lower > high.upper:
        raise InputError(
            "no test has these two levels",
            f"with the first as it is, the second can lie between {_range(low, high)}",
            key="problem.alpha",
        )


def _range(low: Enclosure, high: Enclosure) -> str:
    """Both ends as plain decimals rounded inward, so that what is written is within reach."""
    for digits in range(6, ENOUGH_DIGITS):
        least, most = decimal_text(low.upper, digits, up=True), decimal_text(high.lower, digits, up=False)
        if Fraction(least) < Fraction(most):
            break
    return f"{least} and {most}"


def _second_expectation(laws: tuple[Law, ...], level: Any, rough: Rough, prec: int, *, above: bool) -> Enclosure:
    """Power at the second limit of the one-sided test of the first level."""
    tail = TailProblem(laws[0], level, above, rough, prec).solve(ENOUGH_DIGITS)
    critical = CriticalFunction("above" if above else "below", tail.c, tail.c, tail.phi, tail.phi)
    return critical.power(laws[1], prec + 128)
