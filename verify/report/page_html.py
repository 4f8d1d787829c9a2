"""A page as one HTML file: no script, no outside reference, everything escaped."""

from __future__ import annotations

from collections.abc import Callable
from functools import cache
from pathlib import Path
from typing import Any

from verify.report.math_text import plain
from verify.report.mathml import mathml
from verify.report.page_blocks import Page
from verify.report.safe_text import visible

TEMPLATES = Path(__file__).resolve().parent / "templates"
GROUP = 10
"""Digits in a group of a long number."""
FOOT = 16
"""Characters of the digest at the foot of every page."""


def page_html(page: Page) -> bytes:
    """Return the file.

    Examples
    --------
    >>> text = page_html(Page("<script>alert(1)</script>", "", ())).decode()
    >>> "<script" in text, "&lt;script&gt;" in text
    (False, True)
    """
    text: str = _environment().get_template("page.html").render(page=page, foot=page.digest[:FOOT])
    return (text.rstrip() + "\n").encode()


@cache
def _environment() -> Any:
    from jinja2 import Environment, FileSystemLoader, StrictUndefined
    from markupsafe import Markup

    environment = Environment(
        loader=FileSystemLoader(TEMPLATES),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    filters: dict[str, Callable[[Any], Any]] = {
        "kind": lambda value: type(value).__name__,
        "inline_math": lambda box: Markup(mathml(box)),
        "block_math": lambda box: Markup(mathml(box, block=True)),
        "plain": plain,
        "groups": groups,
        "visible": visible,
        "svg": lambda figure: Markup(figure.svg),
        "style": lambda name: Markup((TEMPLATES / name).read_text(encoding="utf-8")),
    }
    environment.filters.update(filters)
    return environment


def groups(text: str) -> list[str]:
    """Split the digits after the point of a long number into groups.

    Examples
    --------
    A fraction is not split: a gap beside its stroke would be read as part of the number.

    >>> groups("0.086714664601023"), groups("1953125/7838208")
    (['0.0867146646', '01023'], ['1953125/7838208'])
    """
    if "/" in text:
        return [text]
    head, point, tail = text.partition(".")
    if not point:
        head, tail = "", text
    if len(tail) <= GROUP + 4:
        return [text]
    parts = [tail[at : at + GROUP] for at in range(0, len(tail), GROUP)]
    if len(parts[-1]) < 3:
        parts[-2:] = [parts[-2] + parts[-1]]
    return [head + point + parts[0], *parts[1:]]
