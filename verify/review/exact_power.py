"""The power of a printed test as an exact fraction, where an enclosure straddles the level: ties are decided here."""

from __future__ import annotations

from typing import Any

from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.exact import enclosure_of, quotient, rationals, summed
from verify.errors import NotRational
from verify.laws import Law
from verify.solution.conditions import MOST_EXACT_ATOMS
from verify.solution.critical import CriticalFunction

TIE_BITS = 256


def exact_power(test: CriticalFunction, law: Law) -> Enclosure:
    """Return E phi(V) under a lattice law, every mass of its finite side summed.

    Raises
    ------
    NotRational
        When a mass or a fraction is irrational, both sides are infinite, or the sum is too long.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from verify.laws import Binomial
    >>> one = Enclosure.of(1)
    >>> print(exact_power(CriticalFunction("above", 8, 8, one, one), Binomial(10, Fraction(1, 2))).lower)
    7/128
    """
    if not law.lattice or test.phi1 is None or test.phi2 is None or not (test.phi1.exact and test.phi2.exact):
        raise NotRational("fractions that are not known exactly")
    first, last, rejected = _finite_side(test, law)
    A = rationals()
    total = _mass(law, first, last) if rejected else 1 - _mass(law, first, last)
    ends = [(test.c1, test.phi1)] + ([(test.c2, test.phi2)] if test.c1 != test.c2 else [])
    for c, phi in ends:
        total = total + quotient(phi.lower) * quotient(law.density(A, c))
    return enclosure_of(total, TIE_BITS)


def _finite_side(test: CriticalFunction, law: Law) -> tuple[int, int, bool]:
    """A finite run of points and whether it is what is rejected for certain; if not, all else is."""
    (low, high), c1, c2 = law.support, test.c1, test.c2
    if test.region in ("inside", "outside"):
        return (c1 + 1, c2 - 1, True) if test.region == "inside" else (c1, c2, False)
    above = test.region == "above"
    rejected = (c1 + 1, high, True) if above else (low, c1 - 1, True)
    rest = (low, c1, False) if above else (c1, high, False)
    for first, last, whether in (rejected, rest):
        if first is not None and last is not None:
            return first, last, whether
    raise NotRational("infinitely many masses on both sides of the cutoff")


def _mass(law: Law, first: int, last: int) -> Any:
    """The probability of a run of points."""
    if last - first > MOST_EXACT_ATOMS:
        raise NotRational("a sum of very many masses")
    A = rationals()
    return summed(((law.density(A, y),) for y in range(first, last + 1)), 1)[0]
