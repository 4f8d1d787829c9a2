"""A word that is not known: which one may have been meant?"""

from __future__ import annotations

import difflib
from collections.abc import Iterable

CLOSE = 0.65
"""Least similarity (twice the letters in common over all letters) of a word and the one suggested for it."""
LONGEST = 40


def suggestion(word: str, known: Iterable[str]) -> str:
    """Return a question with the nearest known word, or the list of them where none is near.

    Examples
    --------
    >>> suggestion("alhpa", ["null", "alpha", "n"]), suggestion("foo", ["form", "law"])
    ('did you mean alpha?', 'known: form, law')
    """
    words = list(known)
    close = difflib.get_close_matches(word, words, 1, CLOSE) if len(word) <= LONGEST else []
    return f"did you mean {close[0]}?" if close else f"known: {', '.join(words)}"
