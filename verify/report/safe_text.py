"""Foreign text made visible: controls and signs that change the direction of writing are shown, never obeyed."""

from __future__ import annotations

import unicodedata
from collections.abc import Callable

HIDDEN = frozenset(("Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"))
JOINERS = frozenset("\u200c\u200d")


def visible(text: str, drawable: Callable[[str], bool] = lambda sign: True) -> str:
    r"""Return the text with every sign that cannot be seen, or not drawn, written as its code.

    Examples
    --------
    >>> visible("a\u202eb"), visible("zebra \u4e2d", str.isascii)
    ('a[U+202E]b', 'zebra [U+4E2D]')
    """
    return "".join(_shown(sign, drawable) for sign in text)


def _shown(sign: str, drawable: Callable[[str], bool]) -> str:
    if sign in "\t\n\r":
        return " "
    hidden = unicodedata.category(sign) in HIDDEN and sign not in JOINERS
    return f"[U+{ord(sign):04X}]" if hidden or not drawable(sign) else sign
