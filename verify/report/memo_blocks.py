"""The blocks a memo is made of, and how each is written in Markdown and in HTML; every text is escaped."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from html import escape


@dataclass(frozen=True)
class Heading:
    """A heading of level 1, 2 or 3."""

    level: int
    text: str


@dataclass(frozen=True)
class Paragraph:
    """A paragraph."""

    text: str
    strong: bool = False


@dataclass(frozen=True)
class Items:
    """A list of points."""

    texts: Sequence[str]


@dataclass(frozen=True)
class Rows:
    """A table."""

    header: Sequence[str]
    rows: Sequence[Sequence[str]]


Block = Heading | Paragraph | Items | Rows

_SPECIAL = re.compile(r"([\\`*_{}\[\]<>|#~])")


def markdown_text(text: str) -> str:
    r"""Escape a text for Markdown.

    Examples
    --------
    >>> print(markdown_text("a*b|c"))
    a\*b\|c
    """
    return _SPECIAL.sub(r"\\\1", " ".join(text.split()))


def markdown(blocks: Iterable[Block]) -> Iterator[str]:
    """Yield the memo in Markdown, piece by piece."""
    for block in blocks:
        match block:
            case Heading(level, text):
                yield f"{'#' * level} {markdown_text(text)}\n\n"
            case Paragraph(text, strong):
                body = markdown_text(text)
                yield f"**{body}**\n\n" if strong else f"{body}\n\n"
            case Items(texts):
                yield "".join(f"- {markdown_text(text)}\n" for text in texts) + "\n"
            case Rows(header, rows):
                lines = [header, ["---"] * len(header), *rows]
                plain = [cells if index == 1 else map(markdown_text, cells) for index, cells in enumerate(lines)]
                yield "".join(f"| {' | '.join(cells)} |\n" for cells in plain) + "\n"


STYLE = """
body { font: 16px/1.5 Georgia, "Times New Roman", serif; color: #1a1a1a; max-width: 46rem; margin: 3rem
auto; padding: 0 1.5rem; }
h1 { font-size: 1.6rem; line-height: 1.25; border-bottom: 2px solid #1a1a1a; padding-bottom: .4rem; }
h2 { font-size: 1.25rem; margin-top: 2.4rem; border-bottom: 1px solid #bbb; }
h3 { font-size: 1.05rem; margin-top: 1.8rem; }
table { border-collapse: collapse; width: 100%; font-size: .88rem; margin: .8rem 0; }
th, td { text-align: left; vertical-align: top; padding: .25rem .6rem; border-bottom: 1px solid #ddd;
overflow-wrap: anywhere; }
th { border-bottom: 1px solid #1a1a1a; }
td:first-child { white-space: nowrap; }
td { font-variant-numeric: tabular-nums; }
p.strong { font-weight: bold; }
@media print { body { margin: 0; max-width: none; font-size: 11pt; } h2, h3 { break-after: avoid; } tr {
break-inside: avoid; } }
"""


def html(blocks: Iterable[Block], title: str) -> Iterator[str]:
    """Yield the memo as one self-contained HTML page, piece by piece."""
    yield f'<!doctype html>\n<html lang="en"><head><meta charset="utf-8"><title>{escape(title)}</title>'
    yield '<meta name="viewport" content="width=device-width, initial-scale=1">'
    yield f"<style>{STYLE}</style></head><body>\n"
    for block in blocks:
        yield _html_block(block)
    yield "</body></html>\n"


def _html_block(block: Block) -> str:
    match block:
        case Heading(level, text):
            return f"<h{level}>{escape(text)}</h{level}>\n"
        case Paragraph(text, strong):
            return _paragraph(text, strong)
        case Items(texts):
            return "<ul>" + "".join(f"<li>{escape(text)}</li>" for text in texts) + "</ul>\n"
        case Rows(header, rows):
            head = "".join(f"<th>{escape(cell)}</th>" for cell in header)
            body = "".join("<tr>" + "".join(f"<td>{escape(cell)}</td>" for cell in row) + "</tr>\n" for row in rows)
            return f"<table><thead><tr>{head}</tr></thead><tbody>\n{body}</tbody></table>\n"


def _paragraph(text: str, strong: bool) -> str:
    return f'<p class="strong">{escape(text)}</p>\n' if strong else f"<p>{escape(text)}</p>\n"
