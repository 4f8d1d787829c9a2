"""Every one-field change of a certificate: numbers, names, order, keys."""

from __future__ import annotations

import copy
import re
from collections.abc import Iterator
from decimal import Decimal, getcontext
from fractions import Fraction
from typing import Any

getcontext().prec = 400


def mutations(value: Any) -> Iterator[tuple[str, Any]]:
    """Yield (path, changed copy) for every change of one field of a predicate."""
    for path, node in nodes(value, ()):
        for label, new in changes(path, node):
            if new == node:
                continue
            yield f"{'.'.join(map(str, path))} {label}", put(value, path, new)


def nodes(value: Any, path: tuple[Any, ...]) -> Iterator[tuple[tuple[Any, ...], Any]]:
    yield path, value
    items = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    for key, child in items:
        if isinstance(key, int) and 2 <= key < len(value) - 1:
            continue  # of a long list of like things, the first two and the last
        if key != "seal":
            yield from nodes(child, (*path, key))


def put(value: Any, path: tuple[Any, ...], new: Any) -> Any:
    if not path:
        return new
    result = copy.copy(value)
    result[path[0]] = put(value[path[0]], path[1:], new)
    return result


def changes(path: tuple[Any, ...], node: Any) -> Iterator[tuple[str, Any]]:
    if isinstance(node, dict):
        yield from dict_changes(node)
    elif isinstance(node, list):
        yield from list_changes(node)
    elif isinstance(node, bool):
        yield "flipped", not node
    elif isinstance(node, int):
        yield "plus one", node + 1
        yield "minus one", node - 1
        yield "as text", str(node)
    elif isinstance(node, str):
        yield from text_changes(node)


def dict_changes(node: dict[str, Any]) -> Iterator[tuple[str, Any]]:
    yield "with an unknown key", {**node, "zzz": "1"}
    if set(node) == {"lower", "upper"}:
        low, high = node["lower"], node["upper"]
        yield "widened", {"lower": shift(low, -1), "upper": shift(high, 1)}
        yield "shrunk to a point", {"lower": low, "upper": low}
        yield "exchanged", {"lower": high, "upper": low}
        yield "wide", {"lower": shift(low, -1000), "upper": shift(high, 1000)}
        yield "as a point", low
    for key in node:
        if key != "seal":
            yield f"without {key}", {k: v for k, v in node.items() if k != key}


def list_changes(node: list[Any]) -> Iterator[tuple[str, Any]]:
    if len(node) > 1 and node[0] != node[1]:
        yield "in another order", [node[1], node[0], *node[2:]]
    if node:
        yield "without the last", node[:-1]
        yield "with the last twice", [*node, node[-1]]


def text_changes(node: str) -> Iterator[tuple[str, Any]]:
    if re.fullmatch(r"-?\d+(\.\d+)?(e-?\d+)?", node):
        yield "one unit up", shift(node, 1)
        yield "one unit down", shift(node, -1)
        yield "spelled otherwise", node + ("0" if "." in node and "e" not in node else ".0")
    elif re.fullmatch(r"-?\d+/\d+", node):
        yield "another fraction", str(Fraction(node) + Fraction(1, 10**12))
        yield "not in lowest terms", f"{2 * int(node.split('/')[0])}/{2 * int(node.split('/')[1])}"
    else:
        yield "with a letter more", node + "x"
        if re.search(r"\d", node):
            yield "with another digit", re.sub(r"\d", lambda m: str((int(m.group()) + 1) % 10), node, count=1)
        yield "times something", f"({node})*1001/1000"
    yield "empty", ""


def shift(text: str, units: int) -> str:
    """Move a decimal by units of its last place."""
    x = Decimal(text)
    exponent = x.as_tuple().exponent
    assert isinstance(exponent, int)
    moved = x + units * Decimal(10) ** exponent
    sign, figures, e = moved.as_tuple()
    digits = "".join(map(str, figures)).lstrip("0") or "0"
    if moved == 0:
        return "0"
    lead = int(e) + len(digits) - 1
    if -5 <= lead <= 20:
        plain = format(moved.copy_abs(), "f")
        return ("-" if sign else "") + (plain.rstrip("0").rstrip(".") if "." in plain else plain)
    digits = digits.rstrip("0")
    return ("-" if sign else "") + digits[0] + ("." + digits[1:] if digits[1:] else "") + f"e{lead}"
