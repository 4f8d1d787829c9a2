"""A place is proved again before it is believed: a forged one is found out, solved afresh, and replaced."""

from dataclasses import replace
from fractions import Fraction

import pytest
from questions import GAP, NULLS, POISSON, ask, derivation, same

from verify.arithmetic.enclosure import Enclosure
from verify.memory.key import key_of
from verify.memory.place import Place


def moved(end: int | Enclosure) -> int | Enclosure:
    if isinstance(end, int):
        return end + 1
    return Enclosure(end.lower + Fraction(1, 10**7), end.upper + Fraction(1, 10**7))


@pytest.mark.parametrize("density", [POISSON, GAP], ids=["lattice", "continuous"])
@pytest.mark.parametrize("null", NULLS)
def test_a_forged_place_is_not_believed(memory, density, null):
    """A text with a right digest but a wrong place: found out by the proof, solved afresh, and replaced."""
    problem, known = ask(density, null), derivation(density)
    first = memory.solve(problem, 20, known)
    key = key_of(problem, 20, known)
    kept = memory.store.get(key)
    place = Place.read(kept)
    memory.store.put(key, replace(place, ends=tuple(map(moved, place.ends))).text())
    assert same(memory.solve(problem, 20, known), first)
    assert (memory.found, memory.store.refused()) == (0, 1)
    assert memory.store.get(key) == kept


@pytest.mark.parametrize("null", [NULLS[0], NULLS[3]])
def test_a_forged_side_condition_is_not_believed(memory, null):
    problem, known = ask(GAP, null), derivation(GAP)
    first = memory.solve(problem, 20, known)
    key = key_of(problem, 20, known)
    place = Place.read(memory.store.get(key))
    wrong = tuple(Enclosure(Fraction(1, 25), Fraction(1, 24)) for _ in place.sides)
    memory.store.put(key, replace(place, sides=wrong).text())
    assert same(memory.solve(problem, 20, known), first)
    assert (memory.found, memory.store.refused()) == (0, 1)
