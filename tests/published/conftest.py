"""How a printed value is compared: exactly, at the place where its source stopped printing."""

from __future__ import annotations

from fractions import Fraction
from functools import cache

import pytest

import verify
from verify.arithmetic.enclosure import Enclosure


def unit_of(printed: str) -> Fraction:
    """Return one unit in the last printed place."""
    head, _, exponent = printed.lower().partition("e")
    return Fraction(10) ** (int(exponent or 0) - len(head.partition(".")[2]))


@pytest.fixture(scope="session")
def rounds_to():
    """Return a predicate: does the number round to what is printed (or is it cut to it, with ``cut``)?"""

    def predicate(number: Enclosure, printed: str, *, cut: bool = False) -> bool:
        if "/" in printed:
            return number.contains(Fraction(printed)) and number.digits > 20
        room = unit_of(printed) * (1 if cut else Fraction(1, 2))
        return max(abs(number.lower - Fraction(printed)), abs(number.upper - Fraction(printed))) <= room

    return predicate


@pytest.fixture(scope="session")
def within():
    """Return a predicate: does the enclosed number agree with a printed value to a relative error?"""

    def predicate(number: Enclosure, printed: str, relative: Fraction) -> bool:
        value = Fraction(printed)
        return max(abs(number.lower - value), abs(number.upper - value)) <= relative * abs(value)

    return predicate


@cache
def _variance():
    density = verify.Density(
        "exp(-x**2/(2*t)) / sqrt(2*pi*t)", variable="x", support="reals", parameter="t", space="t > 0"
    )
    return density, verify.derive(density)


@pytest.fixture(scope="session")
def variance_test():
    """Return a solver of tests on the variance of nu normal observations with known mean."""

    def solved(null: str, alpha: str, nu: int):
        density, derivation = _variance()
        problem = verify.Problem(density, null=null, alpha=alpha, n=nu)
        return verify.solve(problem, digits=25, derivation=derivation)

    return solved
