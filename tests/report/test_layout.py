"""The layout of plain text."""

from hypothesis import given
from hypothesis import strategies as st

from verify.report.layout import WIDTH, field, heading, number, table, wrapped


@given(st.text(alphabet="0123456789", min_size=1, max_size=5000))
def test_a_long_number_keeps_every_digit(digits: str) -> None:
    shown = number("gamma1", "0." + digits, 6)
    assert "".join(shown.split("= ")[1].split()) == "0." + digits
    assert max(map(len, shown.splitlines())) <= WIDTH


@given(st.text(alphabet="ab ()*+/", max_size=400))
def test_nothing_is_wider_than_the_page(text: str) -> None:
    assert all(len(line) <= WIDTH for line in field("Density", text).splitlines())
    assert all(len(line) <= WIDTH for line in wrapped(text, first="  [proved] ", rest="    ").splitlines())


def test_heading_puts_the_remark_at_the_margin() -> None:
    assert len(heading(2, "Derived", "proved")) == WIDTH


def test_table_is_aligned() -> None:
    assert table([["a", "bb"], ["ccc", "d"]]).splitlines() == ["  a    bb", "  ccc  d"]
