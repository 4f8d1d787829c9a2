"""From a formula tree to boxes: what stands beside, over, above and below what.

All that is known about notation (Greek letters, brackets, how a function is written) is here; the printers of
MathML, typst and plain text know only the six kinds of box.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from verify.errors import SidecheckError
from verify.report.formula_tree import (
    Apply,
    Negative,
    Node,
    Number,
    Power,
    Product,
    Quotient,
    Relation,
    Sum,
    Symbol,
)  # fmt: skip


@dataclass(frozen=True)
class Atom:
    """One sign. ``kind``: number, name (italic), word (upright), operator, relation, space."""

    kind: str
    text: str


@dataclass(frozen=True)
class Row:
    """Boxes side by side."""

    parts: tuple[Box, ...]


@dataclass(frozen=True)
class Fence:
    """A body in brackets that grow with it."""

    body: Box
    left: str = "("
    right: str = ")"


@dataclass(frozen=True)
class Over:
    """A fraction; without a rule, the two lines of a binomial coefficient."""

    top: Box
    bottom: Box
    ruled: bool = True


@dataclass(frozen=True)
class Script:
    """A base with something below or above at its right."""

    base: Box
    below: Box | None = None
    above: Box | None = None


@dataclass(frozen=True)
class Root:
    """A square root."""

    body: Box


Box = Atom | Row | Fence | Over | Script | Root

GREEK = dict(
    zip(
        [
            "alpha",
            "beta",
            "gamma",
            "delta",
            "epsilon",
            "zeta",
            "eta",
            "theta",
            "iota",
            "kappa",
            "lambda",
            "mu",
            "nu",
            "xi",
            "omicron",
            "pi",
            "rho",
            "sigma",
            "tau",
            "upsilon",
            "phi",
            "chi",
            "psi",
            "omega",
            "lam",
        ],
        "αβγδεζηθικλμνξοπρστυφχψωλ",
        strict=True,
    )
)
SIGNS = {"<=": "≤", ">=": "≥", "<": "<", ">": ">", "=": "=", "~": "∼"}
THIN = Atom("space", "\u2009")
WIDE = Atom("space", "\u2003")
SUM, PRODUCT, POWER, TOP = 1, 2, 3, 4


def relation(sign: str) -> Atom:
    """Return the sign of a relation."""
    return Atom("relation", SIGNS.get(sign, sign))


def row(*parts: Box) -> Row:
    """Return boxes side by side."""
    return Row(parts)


def symbol(name: str) -> Box:
    """Return a name as it is written: Greek letters, an index after an underscore or in digits, a prime.

    Examples
    --------
    >>> symbol("lam").text, symbol("mu_0").below.text, symbol("rate").kind
    ('λ', '0', 'word')
    """
    if name == "oo":
        return Atom("number", "∞")
    if name.endswith("_prime"):
        return Script(symbol(name.removesuffix("_prime")), above=Atom("operator", "′"))
    head = name.rstrip("0123456789")
    digits = name[len(head) :]
    if "_" in name.strip("_"):
        head, _, digits = name.partition("_")
    if digits and head:
        return Script(_letter(head), below=Atom("number" if digits.isdigit() else "word", digits))
    return _letter(name)


def _letter(name: str) -> Atom:
    lower = GREEK.get(name.lower())
    if lower:
        upper = {"γ": "Γ", "δ": "Δ", "θ": "Θ", "λ": "Λ", "ξ": "Ξ", "π": "Π", "σ": "Σ", "φ": "Φ", "ψ": "Ψ", "ω": "Ω"}
        return Atom("name", lower if name.islower() else upper.get(lower, name))
    return Atom("name" if len(name) == 1 else "word", name)


def boxes(node: Node, *, stacked: bool = False) -> Box:
    """Lay a formula out.

    Parameters
    ----------
    node : Node
        The formula.
    stacked : bool
        Fractions with a rule, for a formula on its own line; else with a slash.

    Raises
    ------
    SidecheckError
        For a node of another kind.

    Examples
    --------
    >>> from verify.report.formula_tree import read_formula
    >>> from verify.report.math_text import plain
    >>> plain(boxes(read_formula("exp(-lam)*lam**x/factorial(x)")))
    'exp(−λ) λ^x/x!'
    """
    maker = _MAKERS.get(type(node))
    if maker is None:
        raise SidecheckError(f"no notation for {type(node).__name__}")
    return maker(node, stacked)


def _level(node: Node, stacked: bool) -> int:
    match node:
        case Sum() | Negative() | Relation():
            return SUM
        case Product():
            return PRODUCT
        case Quotient():
            return POWER if stacked else PRODUCT
        case Power():
            return POWER
        case Apply(name="exp"):
            return POWER
        case Apply(name="Sum" | "Integral", arguments=(_, _, _, _)):
            return SUM
    return TOP


def _within(node: Node, least: int, stacked: bool) -> Box:
    """Lay out, in brackets where the node binds less than ``least``."""
    inner = boxes(node, stacked=stacked)
    return Fence(inner) if _level(node, stacked) < least else inner


def _sum(node: Any, stacked: bool) -> Box:
    parts: list[Box] = []
    for place, term in enumerate(node.terms):
        minus = isinstance(term, Negative)
        if place or minus:
            parts.append(Atom("operator", "−" if minus else "+"))
        parts.append(_within(term.body, PRODUCT, stacked) if minus else _within(term, SUM, stacked))
    return Row(tuple(parts))


def _negative(node: Any, stacked: bool) -> Box:
    return row(Atom("operator", "−"), _within(node.body, PRODUCT, stacked))


def _product(node: Any, stacked: bool) -> Box:
    parts: list[Box] = []
    for before, factor in zip((None, *node.factors), node.factors, strict=False):
        if before is not None:
            parts.append(_between(before, factor))
        parts.append(_within(factor, POWER, stacked))
    return Row(tuple(parts))


def _between(left: Node, right: Node) -> Box:
    """A dot before a number, else a thin space."""
    first = right
    while isinstance(first, Power | Quotient):
        first = first.base if isinstance(first, Power) else first.top
    return Atom("operator", "·") if isinstance(first, Number) else THIN


def _quotient(node: Any, stacked: bool) -> Box:
    """The parts of a fraction are themselves set with a slash."""
    if stacked:
        return Over(boxes(node.top), boxes(node.bottom))
    return row(_within(node.top, PRODUCT, False), Atom("operator", "/"), _within(node.bottom, POWER, False))


def _power(node: Any, stacked: bool) -> Box:
    base = node.base
    if isinstance(base, Apply) and base.name not in _SPECIAL and len(base.arguments) == 1:
        return Row((Script(_name(base.name), above=boxes(node.exponent)), _arguments(base, stacked)))
    inner = boxes(base, stacked=stacked)
    return Script(inner if _level(base, stacked) == TOP else Fence(inner), above=boxes(node.exponent))


def _relation(node: Any, stacked: bool) -> Box:
    parts = [boxes(node.sides[0], stacked=stacked)]
    for sign, side in zip(node.signs, node.sides[1:], strict=True):
        parts += [relation(sign), boxes(side, stacked=stacked)]
    return Row(tuple(parts))


def _apply(node: Any, stacked: bool) -> Box:
    special = _SPECIAL.get(node.name)
    if special is not None and special[0] == len(node.arguments):
        return special[1](node.arguments, stacked)
    return row(_name(node.name), _arguments(node, stacked))


def _name(name: str) -> Box:
    if name in _LETTERS:
        return Atom("word", _LETTERS[name])
    return symbol(name) if len(name) < 3 or name.endswith("_prime") else Atom("word", name)


def _arguments(node: Any, stacked: bool) -> Fence:
    parts: list[Box] = []
    for place, argument in enumerate(node.arguments):
        parts += [Atom("operator", ","), THIN] if place else []
        parts.append(boxes(argument, stacked=stacked))
    return Fence(Row(tuple(parts)))


def _exp(arguments: tuple[Node, ...], stacked: bool) -> Box:
    return row(Atom("word", "exp"), Fence(boxes(arguments[0], stacked=stacked)))


def _factorial(arguments: tuple[Node, ...], stacked: bool) -> Box:
    return row(_within(arguments[0], TOP, stacked), Atom("number", "!"))


def _summed(sign: str) -> Callable[[tuple[Node, ...], bool], Box]:
    """A sum or an integral: its body, the variable and both ends."""

    def lay_out(arguments: tuple[Node, ...], stacked: bool) -> Box:
        body, variable, low, high = arguments
        below = row(boxes(variable), relation("="), boxes(low))
        return row(
            Script(Atom("operator", sign), below=below, above=boxes(high)), THIN, _within(body, PRODUCT, stacked)
        )

    return lay_out


def _index(letter: str) -> Callable[[tuple[Node, ...], bool], Box]:
    return lambda arguments, stacked: row(
        Script(Atom("name", letter), below=boxes(arguments[0])), Fence(boxes(arguments[1], stacked=stacked))
    )


_LETTERS = {"gamma": "Γ", "zeta": "ζ", "beta": "B", "ln": "log"}
_SPECIAL: dict[str, tuple[int, Callable[[tuple[Node, ...], bool], Box]]] = {
    "exp": (1, _exp),
    "sqrt": (1, lambda a, stacked: Root(boxes(a[0], stacked=stacked))),
    "abs": (1, lambda a, stacked: Fence(boxes(a[0], stacked=stacked), "|", "|")),
    "Abs": (1, lambda a, stacked: Fence(boxes(a[0], stacked=stacked), "|", "|")),
    "factorial": (1, _factorial),
    "binomial": (2, lambda a, stacked: Fence(Over(boxes(a[0]), boxes(a[1]), ruled=False))),
    "loggamma": (1, lambda a, stacked: row(Atom("word", "log"), THIN, Atom("word", "Γ"), Fence(boxes(a[0])))),
    "Sum": (4, _summed("∑")),
    "Integral": (4, _summed("∫")),
    "besseli": (2, _index("I")),
    "besselj": (2, _index("J")),
    "besselk": (2, _index("K")),
    "bessely": (2, _index("Y")),
}
_MAKERS: dict[type, Callable[[Any, bool], Box]] = {
    Number: lambda node, stacked: Atom("number", node.text),
    Symbol: lambda node, stacked: symbol(node.name),
    Negative: _negative,
    Sum: _sum,
    Product: _product,
    Quotient: _quotient,
    Power: _power,
    Apply: _apply,
    Relation: _relation,
}
