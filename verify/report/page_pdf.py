"""A page as PDF/A-2b, set by typst: the page is handed over as data, and the same page gives the same bytes."""

from __future__ import annotations

import json
from collections.abc import Callable
from datetime import date
from functools import cache
from pathlib import Path
from typing import Any

from verify.errors import InputError
from verify.report.math_text import plain
from verify.report.page_blocks import (
    Break,
    Code,
    Commands,
    Digits,
    Equation,
    Figure,
    Items,
    Link,
    Math,
    Page,
    Paragraph,
    Run,
    Runs,
    Signatures,
    Table,
    Text,
)  # fmt: skip
from verify.report.page_html import FOOT, TEMPLATES, groups
from verify.report.safe_text import visible
from verify.report.typst_math import typst_math

PAPERS = {"a4": "a4", "letter": "us-letter"}
CONTENTS_FROM = 5
"""Pages from which there is a list of contents."""
LONGEST_WORD = 24
"""Characters after which a word may be broken anywhere."""
WHOLE_ROW = 2_500
"""Size of the data of a table's row up to which it is kept on one page."""
LONGEST_CODE = 72
"""The same for digests and commands."""


def page_pdf(page: Page, paper: str = "a4") -> bytes:
    """Return the PDF.

    Parameters
    ----------
    page : Page
        What it says.
    paper : str
        "a4" or "letter".

    Raises
    ------
    InputError
        For another paper.
    """
    import typst

    if paper not in PAPERS:
        raise InputError(f"the paper {paper!r} is not known", "use a4 or letter", key="paper")
    inputs = {"page": json.dumps(_page(page), ensure_ascii=False), "paper": PAPERS[paper], "contents": "no"}
    common: dict[str, Any] = {"root": TEMPLATES, "font_paths": [_fonts()], "ignore_system_fonts": True}
    source = TEMPLATES / "page.typ"
    pages = int(json.loads(typst.query(source, "<last>", field="value", one=True, sys_inputs=inputs, **common)))
    if pages >= CONTENTS_FROM:
        inputs["contents"] = "yes"
    made: bytes = typst.compile(
        source, format="pdf", pdf_standards="a-2b", timestamp=_timestamp(page.issued), sys_inputs=inputs, **common
    )
    return made


def _timestamp(issued: str) -> int:
    """Seconds of the date of issue, for the date that PDF/A asks for; 0 when the words of issue are not a date."""
    try:
        day = date.fromisoformat(issued)
    except ValueError:
        return 0
    return (day - date(1970, 1, 1)).days * 86_400


def _fonts() -> Path:
    """The folder of the DejaVu fonts, for letters that the embedded fonts of typst lack."""
    import matplotlib

    return Path(matplotlib.get_data_path()) / "fonts" / "ttf"


@cache
def _letters() -> frozenset[int]:
    """The characters that can be drawn, upright and bold."""
    from matplotlib.ft2font import FT2Font

    maps = [FT2Font(str(_fonts() / name)).get_charmap() for name in ("DejaVuSans.ttf", "DejaVuSans-Bold.ttf")]
    return frozenset(maps[0]) & frozenset(maps[1])


def safe(text: str, longest: int = LONGEST_WORD) -> str:
    """Return text of which every sign can be drawn and every long word be broken."""
    letters = _letters()
    shown = visible(text, lambda sign: ord(sign) in letters)
    return " ".join(_breakable(word, longest) for word in shown.split(" "))


def _breakable(word: str, longest: int) -> str:
    if len(word) <= longest:
        return word
    return "\u200b".join(word[at : at + 8] for at in range(0, len(word), 8))


def _page(page: Page) -> dict[str, Any]:
    return {
        "title": safe(page.title),
        "subtitle": safe(page.subtitle),
        "facts": [[label, _runs(value)] for label, value in page.facts],
        "sections": [
            {"title": part.title, "blocks": [_block(block) for block in part.blocks]} for part in page.sections
        ],
        "foot": page.digest[:FOOT],
    }


def _runs(runs: Runs) -> list[dict[str, Any]]:
    return [_RUNS[type(run)](run) for run in runs]


def _math(box: Any) -> dict[str, Any]:
    return {"is": "math", "tree": typst_math(box), "alt": plain(box).strip() or "formula"}


def _block(block: Any) -> dict[str, Any]:
    return {"is": type(block).__name__.lower(), **_BLOCKS[type(block)](block)}


def _row(row: Any) -> dict[str, Any]:
    """A row; one of usual length stays on one page."""
    cells = [_runs(cell) for cell in row]
    return {"cells": cells, "whole": len(json.dumps(cells)) < WHOLE_ROW}


_RUNS: dict[type[Run], Callable[[Any], dict[str, Any]]] = {
    Text: lambda run: {"is": "strong" if run.strong else "text", "text": safe(run.text)},
    Code: lambda run: {"is": "code", "text": safe(run.text, LONGEST_CODE)},
    Digits: lambda run: {"is": "digits", "groups": groups(run.text)},
    Math: lambda run: _math(run.box),
    Link: lambda run: {"is": "text", "text": safe(run.text)},
    Break: lambda run: {"is": "break"},
}
_BLOCKS: dict[type, Callable[[Any], dict[str, Any]]] = {
    Paragraph: lambda block: {"kind": block.kind, "runs": _runs(block.runs)},
    Equation: lambda block: {"math": _math(block.box)},
    Table: lambda block: {
        "head": [_runs(cell) for cell in block.head],
        "rows": [_row(row) for row in block.rows],
        "widths": list(block.widths),
        "caption": safe(block.caption),
    },
    Figure: lambda block: {"svg": _standalone(block.svg), "alt": safe(block.alt), "caption": safe(block.caption)},
    Commands: lambda block: {"lines": [safe(line, LONGEST_CODE) for line in block.lines]},
    Items: lambda block: {"items": [_runs(item) for item in block.items], "numbered": block.numbered},
    Signatures: lambda block: {"roles": list(block.roles)},
}


def _standalone(svg: str) -> str:
    """Give an inline picture the name space and link prefix that a file of its own needs."""
    return svg.replace(' href="#', ' xlink:href="#').replace(
        "<svg ", '<svg xmlns:xlink="http://www.w3.org/1999/xlink" ', 1
    )
