"""Boxes as data for the typst template, which builds the equation from them; no text becomes markup."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from verify.errors import SidecheckError
from verify.report.math_boxes import Atom, Box, Fence, Over, Root, Row, Script

KINDS = ("number", "name", "word", "operator", "relation", "space")


def typst_math(box: Box) -> dict[str, Any]:
    """Return the box as a dictionary that JSON can carry.

    Raises
    ------
    SidecheckError
        For a box of another kind.

    Examples
    --------
    >>> typst_math(Root(Atom("name", "x")))
    {'is': 'root', 'body': {'is': 'name', 'text': 'x'}}
    """
    printer = _PRINTERS.get(type(box))
    if printer is None:
        raise SidecheckError(f"no typst form for {type(box).__name__}")
    return printer(box)


def _atom(box: Any) -> dict[str, Any]:
    if box.kind not in KINDS:
        raise SidecheckError(f"no typst form for {box.kind}")
    return {"is": box.kind, "text": box.text}


def _maybe(box: Box | None) -> dict[str, Any] | None:
    return None if box is None else typst_math(box)


_PRINTERS: dict[type, Callable[[Any], dict[str, Any]]] = {
    Atom: _atom,
    Row: lambda box: {"is": "row", "parts": [typst_math(part) for part in box.parts]},
    Fence: lambda box: {"is": "fence", "left": box.left, "right": box.right, "body": typst_math(box.body)},
    Over: lambda box: {
        "is": "over" if box.ruled else "choose",
        "top": typst_math(box.top),
        "bottom": typst_math(box.bottom),
    },
    Script: lambda box: {
        "is": "script",
        "base": typst_math(box.base),
        "below": _maybe(box.below),
        "above": _maybe(box.above),
    },
    Root: lambda box: {"is": "root", "body": typst_math(box.body)},
}
