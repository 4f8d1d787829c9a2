"""What a page is made of: runs of text and mathematics in blocks, blocks in sections. HTML and PDF print the
same page.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from verify.report.math_boxes import Box


@dataclass(frozen=True)
class Text:
    """Words."""

    text: str
    strong: bool = False


@dataclass(frozen=True)
class Code:
    """Something to be typed, or a digest."""

    text: str


@dataclass(frozen=True)
class Digits:
    """A decimal number, shown in groups of digits that may be wrapped."""

    text: str


@dataclass(frozen=True)
class Math:
    """An inline formula."""

    box: Box


@dataclass(frozen=True)
class Link:
    """A file beside the page."""

    text: str
    target: str


@dataclass(frozen=True)
class Break:
    """A new line in a cell."""


Run = Text | Code | Digits | Math | Link | Break
Runs = tuple[Run, ...]


@dataclass(frozen=True)
class Paragraph:
    """A paragraph; ``kind``: "", "lead" (the certified sentence), "intro" (stays with what follows), "small" or
    "caution".
    """

    runs: Runs
    kind: str = ""


@dataclass(frozen=True)
class Equation:
    """A formula on its own line."""

    box: Box


@dataclass(frozen=True)
class Table:
    """A table.

    Attributes
    ----------
    head : sequence of Runs
        Column headings.
    rows : sequence of rows of Runs
        Cells; the first of a row is its heading.
    widths : sequence of int
        Relative widths of the columns; 0 for as wide as its content.
    """

    head: Sequence[Runs]
    rows: Sequence[Sequence[Runs]]
    widths: Sequence[int]
    caption: str = ""


@dataclass(frozen=True)
class Figure:
    """A picture, with its description in words."""

    svg: str
    alt: str
    caption: str


@dataclass(frozen=True)
class Commands:
    """Lines to be typed."""

    lines: tuple[str, ...]


@dataclass(frozen=True)
class Items:
    """A list; numbered when the order matters."""

    items: Sequence[Runs]
    numbered: bool = False


@dataclass(frozen=True)
class Signatures:
    """Lines to be signed, one for each role."""

    roles: tuple[str, ...]


Block = Paragraph | Equation | Table | Figure | Commands | Items | Signatures


@dataclass(frozen=True)
class Section:
    """A heading and its blocks."""

    title: str
    blocks: Sequence[Block]


@dataclass(frozen=True)
class Page:
    """A document.

    Attributes
    ----------
    title, subtitle : str
        Its heading.
    facts : sequence of (str, Runs)
        The table at its head.
    digest : str
        SHA-256 of the certificate; its first 16 characters stand at the foot of every page.
    issued : str
        Date of issue, as the user gave it.
    """

    title: str
    subtitle: str
    facts: Sequence[tuple[str, Runs]]
    sections: Sequence[Section] = field(default_factory=tuple)
    digest: str = ""
    issued: str = ""


def words(text: str) -> Runs:
    """Return plain words as runs."""
    return (Text(text),)
