"""The text of a place: read as it was written, to the last bit, or refused."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from verify.arithmetic.enclosure import Enclosure
from verify.memory.place import MOST_BITS, Place

enclosures = st.tuples(st.fractions(), st.fractions()).map(lambda ends: Enclosure(min(ends), max(ends)))
ends = st.one_of(st.integers(), enclosures)
SIDES = '"sides": [["1/10", "1/f"], ["1/10", "1/f"]]'


@given(st.tuples(ends, ends), st.lists(enclosures, max_size=2), st.integers(1, MOST_BITS))
def test_a_place_is_read_as_it_was_written(
    cutoffs: tuple[int | Enclosure, ...], sides: list[Enclosure], prec: int
) -> None:
    place = Place(cutoffs, tuple(sides), prec)
    assert Place.read(place.text()) == place


def test_numbers_of_any_length_are_written() -> None:
    place = Place((10**6000, 3), (Enclosure.of(Fraction(1, 3**9000)),), 128)
    assert Place.read(place.text()) == place


@pytest.mark.parametrize(
    "text",
    [
        "", "[]", "{}", "null", '{"ends": 3, "sides": [], "prec": 9}',
        '{"ends": ["3", "zz"], ' + SIDES + ', "prec": 128}',
        '{"ends": ["3", "8"], "sides": [["1/10", "1/0"], ["1/10", "1/f"]], "prec": 128}',
        '{"ends": [["1/2", "1/3"], "8"], ' + SIDES + ', "prec": 128}',
        '{"ends": ["3", "8", "9"], ' + SIDES + ', "prec": 128}',
        '{"ends": ["3", "8"], "sides": ["1"], "prec": 128}',
        '{"ends": ["3", "8"], ' + SIDES + ', "prec": 99999999999}',
        '{"ends": ["3", "8"], ' + SIDES + ', "prec": 0}',
        '{"ends": ["3", "8"], ' + SIDES + ', "prec": true}',
    ],
)  # fmt: skip
def test_a_text_that_no_place_has_is_refused(text: str) -> None:
    with pytest.raises(ValueError):  # noqa: PT011 (whichever says so first)
        Place.read(text)
