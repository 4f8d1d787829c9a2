"""Boxes as MathML Core, for the page."""

from __future__ import annotations

from collections.abc import Callable
from html import escape
from typing import Any

from verify.errors import SidecheckError
from verify.report.math_boxes import Atom, Box, Fence, Over, Root, Row, Script

_TAGS = {"number": "mn", "name": "mi", "operator": "mo", "relation": "mo"}


def mathml(box: Box, *, block: bool = False, alt: str = "") -> str:
    """Return a ``<math>`` element; every sign in it is escaped.

    Raises
    ------
    SidecheckError
        For a box of another kind.

    Examples
    --------
    >>> mathml(Atom("operator", "<"))
    '<math><mo>&lt;</mo></math>'
    """
    display = ' display="block"' if block else ""
    label = f' aria-label="{escape(alt)}"' if alt else ""
    return f"<math{display}{label}>{_element(box)}</math>"


def _element(box: Box) -> str:
    printer = _PRINTERS.get(type(box))
    if printer is None:
        raise SidecheckError(f"no MathML for {type(box).__name__}")
    return printer(box)


def _atom(box: Any) -> str:
    text = escape(box.text)
    if box.kind == "space":
        return f'<mspace width="{1 if box.text == chr(0x2003) else 0.17}em"></mspace>'
    if box.kind == "word":
        return f"<mtext>{text}</mtext>" if len(box.text) > 1 else f'<mi mathvariant="normal">{text}</mi>'
    if box.kind not in _TAGS:
        raise SidecheckError(f"no MathML for {box.kind}")
    tight = ' lspace="0" rspace="0"' if box.text in ("/", "′", ",") else ""
    return f"<{_TAGS[box.kind]}{tight}>{text}</{_TAGS[box.kind]}>"


def _fence(box: Any) -> str:
    left, right, inner = escape(box.left), escape(box.right), _element(box.body)
    grows = "true" if any(tag in inner for tag in ("<mfrac", "<msqrt", "<msup")) else "false"
    return (
        f'<mrow><mo form="prefix" stretchy="{grows}" lspace="0" rspace="0">{left}</mo>{inner}'
        f'<mo form="postfix" stretchy="{grows}" lspace="0" rspace="0">{right}</mo></mrow>'
    )


def _over(box: Any) -> str:
    rule = "" if box.ruled else ' linethickness="0"'
    return f"<mfrac{rule}>{_grouped(box.top)}{_grouped(box.bottom)}</mfrac>"


def _grouped(box: Box) -> str:
    return f"<mrow>{_element(box)}</mrow>"


PRIME = Atom("operator", "′")


def _script(box: Any) -> str:
    if box.above == PRIME:
        return _element(box.base) + _element(PRIME)
    base = _grouped(box.base)
    if box.below is not None and box.above is not None:
        return f"<msubsup>{base}{_grouped(box.below)}{_grouped(box.above)}</msubsup>"
    if box.below is not None:
        return f"<msub>{base}{_grouped(box.below)}</msub>"
    return f"<msup>{base}{_grouped(box.above)}</msup>"


_PRINTERS: dict[type, Callable[[Any], str]] = {
    Atom: _atom,
    Row: lambda box: "<mrow>" + "".join(map(_element, box.parts)) + "</mrow>",
    Fence: _fence,
    Over: _over,
    Script: _script,
    Root: lambda box: f"<msqrt>{_element(box.body)}</msqrt>",
}
