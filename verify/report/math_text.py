"""Boxes as one line of plain text: the alternative text of an equation."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from verify.errors import SidecheckError
from verify.report.math_boxes import Atom, Box, Fence, Over, Root, Row, Script


def plain(box: Box) -> str:
    """Return the text.

    Raises
    ------
    SidecheckError
        For a box of another kind.

    Examples
    --------
    >>> plain(Script(Atom("name", "x"), above=Atom("number", "2")))
    'x^2'
    """
    printer = _PRINTERS.get(type(box))
    if printer is None:
        raise SidecheckError(f"no plain form for {type(box).__name__}")
    return printer(box)


def _atom(box: Any) -> str:
    if box.kind == "space":
        return " "
    if box.kind == "relation":
        return f" {box.text} "
    return str(box.text)


def _row(box: Any) -> str:
    text = ""
    for place, part in enumerate(box.parts):
        binary = isinstance(part, Atom) and part.kind == "operator" and part.text in "+−" and place > 0
        text += f" {part.text} " if binary and isinstance(part, Atom) else plain(part)
    return text


def _part(box: Box) -> str:
    text = plain(box)
    return text if text.isalnum() else f"({text})"


def _script(box: Any) -> str:
    below = f"_{_part(box.below)}" if box.below is not None else ""
    above = "" if box.above is None else ("′" if box.above == Atom("operator", "′") else f"^{_part(box.above)}")
    return plain(box.base) + below + above


_PRINTERS: dict[type, Callable[[Any], str]] = {
    Atom: _atom,
    Row: _row,
    Fence: lambda box: f"{box.left}{plain(box.body)}{box.right}",
    Over: lambda box: f"{_part(box.top)} {'/' if box.ruled else 'choose'} {_part(box.bottom)}",
    Script: _script,
    Root: lambda box: f"√{_part(box.body)}",
}
