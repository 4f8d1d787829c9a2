"""Sentences with formulas in them: which parts are formulas is read from the names that they use."""

from __future__ import annotations

import re
from collections.abc import Iterable

from verify.errors import InputError
from verify.report.formula_tree import Number, Symbol, read_relation
from verify.report.math_boxes import boxes
from verify.report.page_blocks import Math, Run, Runs, Text

_PIECE = re.compile(r"\s+|[A-Za-z_]\w*'?|\d+(?:\.\d+)?(?:[eE][+-]?\d+)?|<=|>=|\*\*|.", re.DOTALL)
_END = re.compile(r"[\w')]$")
_LONGEST = 400
"""Pieces of one formula in a sentence."""

FUNCTIONS = frozenset(
    [
        "exp",
        "log",
        "ln",
        "sqrt",
        "abs",
        "Abs",
        "factorial",
        "binomial",
        "gamma",
        "loggamma",
        "beta",
        "besseli",
        "besselj",
        "besselk",
        "bessely",
        "zeta",
        "erf",
        "erfc",
        "sin",
        "cos",
        "tan",
        "asin",
        "acos",
        "atan",
        "sinh",
        "cosh",
        "tanh",
        "asinh",
        "acosh",
        "atanh",
        "sech",
    ]
)
LETTERS = frozenset(("f", "h", "A", "B", "Q", "Q'", "T", "V", "Y", "n", "oo", "pi"))
"""Names that the ledger uses beside those of the problem."""


def prose(text: str, names: Iterable[str] = ()) -> Runs:
    """Split a sentence into words and formulas.

    Parameters
    ----------
    text : str
        Any text; what cannot be read as a formula stays as it is.
    names : iterable of str
        Names of the problem that may stand in a formula.

    Examples
    --------
    >>> [type(run).__name__ for run in prose("reject for 8 < lam < 12 only", ["lam"])]
    ['Text', 'Math', 'Text']
    """
    known = LETTERS | set(names)
    pieces = _PIECE.findall(text)
    runs: list[Run] = []
    words, at = "", 0
    while at < len(pieces):
        end, found = _formula(pieces, at, words, known)
        if found is None:
            words += pieces[at]
            at += 1
            continue
        if words:
            runs.append(Text(_signs(words)))
        runs.append(found)
        words, at = "", end
    return tuple([*runs, Text(_signs(words))] if words else runs)


def formula(text: str, names: Iterable[str] = ()) -> Runs:
    """Return a text as one formula where it is one, else as a sentence."""
    try:
        return (Math(boxes(read_relation(text))),)
    except InputError:
        return prose(text, names)


def _formula(pieces: list[str], at: int, before: str, known: frozenset[str]) -> tuple[int, Math | None]:
    """The longest formula that starts at a piece, and where it ends."""
    if not _may_start(pieces, at, before, known):
        return at, None
    end, depth = at, 0
    while end < len(pieces) and end - at < _LONGEST and _belongs(pieces[end], depth, known):
        depth += (pieces[end] == "(") - (pieces[end] == ")")
        end += 1
        if depth < 0:
            end -= 1
            break
    while end > at:
        node = _read("".join(pieces[at:end])) if _may_end(pieces, end) else None
        if node is not None:
            return end, node
        end -= 1
    return at, None


def _may_start(pieces: list[str], at: int, before: str, known: frozenset[str]) -> bool:
    piece = pieces[at]
    if before and (before[-1].isalnum() or before[-1] in "-./_"):
        return False
    return piece in known or piece in FUNCTIONS or piece in "-(" or piece[0].isdigit()


def _belongs(piece: str, depth: int, known: frozenset[str]) -> bool:
    if piece[0].isdigit() or piece.isspace() or piece in known:
        return True
    return piece in FUNCTIONS or piece in ("<=", ">=", "**", *"+-*/()<>=") or (piece == "," and depth > 0)


def _may_end(pieces: list[str], end: int) -> bool:
    if not _END.search(pieces[end - 1]):
        return False
    after = pieces[end] if end < len(pieces) else " "
    further = pieces[end + 1] if end + 1 < len(pieces) else " "
    joined = after in "-./'" and further[0].isalnum()
    return not (after[0].isalnum() or after == "(" or joined)


def _read(text: str) -> Math | None:
    try:
        node = read_relation(text.replace("'", "_prime"))
    except InputError:
        return None
    if isinstance(node, Number) or (isinstance(node, Symbol) and node.name in FUNCTIONS):
        return None
    return Math(boxes(node))


def _signs(text: str) -> str:
    """Write relation signs and infinity as signs."""
    return re.sub(r"\boo\b", "∞", text.replace("<=", "≤").replace(">=", "≥"))
