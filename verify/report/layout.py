"""Plain text that survives being pasted: fixed width, labels in one column, long numbers wrapped.

The width is fixed and not the terminal's, so that the same case gives the same text everywhere.
"""

from __future__ import annotations

import textwrap
from collections.abc import Iterable
from fractions import Fraction
from typing import TYPE_CHECKING

from verify.arithmetic.enclosure import decimal_text
from verify.problem.numbers import exact_text

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

WIDTH = 88
LABEL = 14
"""Width of the column of labels, indent included."""


def heading(number: int, title: str, remark: str = "") -> str:
    """Return a section heading, with a remark at the right margin.

    Examples
    --------
    >>> heading(1, "Asked")
    '1. Asked'
    """
    left = f"{number}. {title}"
    return left + (remark.rjust(WIDTH - len(left)) if remark else "")


def field(label: str, text: str, indent: int = 2) -> str:
    """Return one labelled value, wrapped under itself; a word longer than the line (a long number) is broken.

    Examples
    --------
    >>> field("Level", "1/20")
    '  Level       1/20'
    """
    head = (" " * indent + label).ljust(LABEL)
    if len(head) > LABEL or head.strip() == head[indent:]:
        head = head.rstrip() + " "
    return wrapped(text, first=head, rest=" " * max(LABEL, 0))


def wrapped(text: str, *, first: str = "", rest: str = "") -> str:
    """Wrap text to the width behind ``first``, further lines behind ``rest``."""
    lines = textwrap.wrap(
        text,
        WIDTH,
        initial_indent=first,
        subsequent_indent=rest,
        break_long_words=True,
        break_on_hyphens=False,
    )
    return "\n".join(lines) if lines else first.rstrip()


def number(name: str, text: str, width: int) -> str:
    """Return ``name = text`` behind an indent, the digits of a long number in lines of equal length.

    Examples
    --------
    >>> number("c1", "91", 6)
    '  c1     = 91'
    """
    head = f"  {name.ljust(width)} = "
    room = max(WIDTH - len(head) - 1, 20) // 10 * 10 + 2  # whole tens of digits after "0."
    parts = [text[start : start + room] for start in range(0, len(text), room)] or [""]
    return ("\n" + " " * len(head)).join([head + parts[0], *parts[1:]])


def table(rows: Iterable[Iterable[str]], indent: int = 2) -> str:
    """Return rows in aligned columns, the first row being the header.

    Examples
    --------
    >>> print(table([["route", "c1"], ["SciPy", "91"]]))
      route  c1
      SciPy  91
    """
    cells = [list(row) for row in rows]
    widths = [max(len(cell) for cell in column) for column in zip(*cells, strict=True)]
    lines = ["  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)) for row in cells]
    return "\n".join((" " * indent + line).rstrip() for line in lines)


def short_exact(value: Exact) -> str:
    """Write an exact number, a rational one as a decimal where that is just as exact and shorter.

    Examples
    --------
    >>> short_exact(Fraction(1, 20)), short_exact(Fraction(1, 10**200)), short_exact(Fraction(1, 3))
    ('1/20', '1e-200', '1/3')
    """
    text = exact_text(value)
    if isinstance(value, Fraction):
        decimal = decimal_text(value, 15, up=False)
        if len(decimal) < len(text) and Fraction(decimal) == value:
            return decimal
    return text
