"""The formula of a certificate as a tree that keeps the shape in which it was written.

The text is read by Python's grammar into a syntax tree that is never compiled or run; nothing is simplified
or reordered, so that the page shows the formula that was certified.
"""

from __future__ import annotations

import ast
import re
import warnings
from dataclasses import dataclass

from verify.errors import InputError

MAX_LENGTH = 20_000
MAX_DEPTH = 200


@dataclass(frozen=True)
class Number:
    """A number as written."""

    text: str


@dataclass(frozen=True)
class Symbol:
    """A name."""

    name: str


@dataclass(frozen=True)
class Negative:
    """Minus something."""

    body: Node


@dataclass(frozen=True)
class Sum:
    """Terms, the negative ones as ``Negative``."""

    terms: tuple[Node, ...]


@dataclass(frozen=True)
class Product:
    """Factors in their order."""

    factors: tuple[Node, ...]


@dataclass(frozen=True)
class Quotient:
    """A fraction."""

    top: Node
    bottom: Node


@dataclass(frozen=True)
class Power:
    """A power."""

    base: Node
    exponent: Node


@dataclass(frozen=True)
class Apply:
    """A function at its arguments."""

    name: str
    arguments: tuple[Node, ...]


@dataclass(frozen=True)
class Relation:
    """Two or more sides with the signs between them: ``<``, ``<=``, ``>``, ``>=`` or ``=``."""

    sides: tuple[Node, ...]
    signs: tuple[str, ...]


Node = Number | Symbol | Negative | Sum | Product | Quotient | Power | Apply | Relation

_SIGN = re.compile(r"(<=|>=|<|>|=)")


def read_formula(text: str) -> Node:
    """Read a formula.

    Raises
    ------
    InputError
        When it is not one.

    Examples
    --------
    >>> read_formula("a*b/2")
    Quotient(top=Product(factors=(Symbol(name='a'), Symbol(name='b'))), bottom=Number(text='2'))
    """
    if len(text) > MAX_LENGTH:
        raise _unreadable(text)
    source = " ".join(text.split())
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            tree = ast.parse(source, mode="eval").body
    except (SyntaxError, ValueError, MemoryError, RecursionError, OverflowError):
        raise _unreadable(text) from None
    return _build(tree, source, 0)


def read_relation(text: str) -> Node:
    """Read a formula, or several with relation signs between them.

    Examples
    --------
    >>> read_relation("8 < lam").signs
    ('<',)
    """
    parts = _SIGN.split(text)
    sides = tuple(read_formula(part) for part in parts[::2])
    return Relation(sides, tuple(parts[1::2])) if len(sides) > 1 else sides[0]


def _unreadable(text: str) -> InputError:
    return InputError(f"{text[:60]!r} is not a formula", "write numbers, names, + - * / ** and functions")


def _build(node: ast.expr, source: str, depth: int) -> Node:
    if depth > MAX_DEPTH:
        raise _unreadable(source)
    match node:
        case ast.Constant(value=int() | float()) if not isinstance(node.value, bool):
            return _number(source.encode()[node.col_offset : node.end_col_offset].decode())
        case ast.Name():
            return Symbol(node.id)
        case ast.UnaryOp(op=ast.USub()):
            return Negative(_build(node.operand, source, depth + 1))
        case ast.UnaryOp(op=ast.UAdd()):
            return _build(node.operand, source, depth + 1)
        case ast.BinOp(op=ast.Add() | ast.Sub()):
            return Sum(_terms(node, source, depth))
        case ast.BinOp(op=ast.Mult() | ast.Div()):
            return _product(node, source, depth)
        case ast.BinOp(op=ast.Pow()):
            return Power(_build(node.left, source, depth + 1), _build(node.right, source, depth + 1))
        case ast.Call(func=ast.Name(id="Sum" | "Integral" as name), args=[body, ast.Tuple(elts=[_, _, _] as span)]):
            return Apply(name, tuple(_build(part, source, depth + 1) for part in (body, *span)))
        case ast.Call(func=ast.Name(id=name), keywords=[]) if node.args:
            return Apply(name, tuple(_build(part, source, depth + 1) for part in node.args))
    raise _unreadable(source)


def _number(text: str) -> Node:
    """Write 2e-7 as 2 times a power of ten."""
    head, _, exponent = text.lower().partition("e")
    if not exponent:
        return Number(text)
    shown = exponent.lstrip("+-").lstrip("0") or "0"
    ten = Power(Number("10"), Negative(Number(shown)) if exponent.startswith("-") else Number(shown))
    return ten if head == "1" else Product((Number(head), ten))


def _terms(node: ast.expr, source: str, depth: int) -> tuple[Node, ...]:
    terms: list[Node] = []
    while isinstance(node, ast.BinOp) and isinstance(node.op, ast.Add | ast.Sub):
        term = _build(node.right, source, depth + 1)
        terms.append(Negative(term) if isinstance(node.op, ast.Sub) else term)
        node = node.left
    terms.append(_build(node, source, depth + 1))
    return tuple(reversed(terms))


def _product(node: ast.expr, source: str, depth: int) -> Node:
    """Read a chain of * and / from the left: a * b / c * d is ((a b) / c) d; a leading minus goes in front of
    the whole.
    """
    chain: list[tuple[bool, Node]] = []
    while isinstance(node, ast.BinOp) and isinstance(node.op, ast.Mult | ast.Div):
        chain.append((isinstance(node.op, ast.Div), _build(node.right, source, depth + 1)))
        node = node.left
    first = _build(node, source, depth + 1)
    result = first.body if isinstance(first, Negative) else first
    for divides, part in reversed(chain):
        result = Quotient(result, part) if divides else Product((*_factors(result), *_factors(part)))
    return Negative(result) if isinstance(first, Negative) else result


def _factors(node: Node) -> tuple[Node, ...]:
    return node.factors if isinstance(node, Product) else (node,)
