"""Printed numbers: the digits count, trailing zeros too; ties round either way; exact writings are exact."""

from decimal import ROUND_FLOOR, ROUND_HALF_EVEN, Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from verify.arithmetic.enclosure import Enclosure
from verify.errors import InputError
from verify.review.printed import Match, read_printed, rounded

TENTH = Enclosure(Fraction(1234490, 10**7), Fraction(1234495, 10**7))


@pytest.mark.parametrize(
    ("text", "match"),
    [
        ("0.1234", Match.SAME),
        ("0.12345", Match.SAME),
        ("0.12344", Match.LAST),
        ("0.1235", Match.LAST),
        ("0.123", Match.SAME),
        ("0.1240", Match.OTHER),
        ("0.124", Match.LAST),
        ("0.1", Match.SAME),
        ("1.234e-1", Match.SAME),
        ("0", Match.SAME),
        ("10/81", Match.OTHER),
    ],
)
def test_matches(text, match) -> None:
    assert read_printed(text).match(TENTH) is match


def test_a_tie_may_be_rounded_either_way() -> None:
    half = Enclosure.of(Fraction(125, 1000))
    assert read_printed("0.12").match(half) is Match.SAME
    assert read_printed("0.13").match(half) is Match.SAME


def test_an_enclosure_too_wide_to_tell_is_open() -> None:
    wide = Enclosure(Fraction(124, 1000), Fraction(126, 1000))
    assert read_printed("0.12").match(wide) is Match.OPEN


def test_exact_writings() -> None:
    assert read_printed("1/3").match(Enclosure.of(Fraction(1, 3))) is Match.SAME
    assert read_printed("1/3").match(Enclosure.of(Fraction(333, 1000))) is Match.OTHER


def test_floats_are_refused() -> None:
    with pytest.raises(InputError):
        read_printed(0.1)  # type: ignore[arg-type]


@given(st.integers(-(10**12), 10**12), st.integers(0, 9))
def test_correct_rounding_is_the_same_and_cutting_is_truncation(value: int, places: int) -> None:
    true = Enclosure.of(Fraction(value, 10**7) + Fraction(1, 3 * 10**9))
    number = Decimal(true.mid.numerator) / Decimal(true.mid.denominator)
    unit = Decimal(1).scaleb(-places)
    assert read_printed(format(number.quantize(unit, ROUND_HALF_EVEN), "f")).match(true) is Match.SAME
    cut = read_printed(format(number.copy_abs().quantize(unit, ROUND_FLOOR).copy_sign(number), "f"))
    assert cut.truncates(true)
    assert cut.match(true) in (Match.SAME, Match.LAST)


@given(st.integers(0, 10**9), st.integers(0, 8))
def test_rounded_writes_what_would_agree(value: int, places: int) -> None:
    true = Enclosure.of(Fraction(value, 10**6))
    like = read_printed("0." + "0" * places if places else "0")
    text = rounded(true, like)
    assert read_printed(text).match(true) is Match.SAME
    assert len(text.partition(".")[2]) == places
