"""The problem in canonical texts, which the rechecker reads with its own small grammar."""

from __future__ import annotations

import re
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.problem.formula import formula_text
from verify.problem.numbers import exact_text
from verify.problem.scan import scan_formula

if TYPE_CHECKING:
    from verify.problem.density import Density
    from verify.problem.problem import Problem


def levels_text(problem: Problem) -> list[str]:
    """One level for each limit."""
    return [exact_text(level) for level in problem.levels]


def density_text(density: Density) -> dict[str, Any]:
    """Return the density: the formula as given (in plain signs), the support and the space spelled in one way."""
    entry: dict[str, Any] = {
        "variable": density.variable,
        "parameter": density.parameter,
        "support": _support(density),
        "space": _space(density),
    }
    if density.weights is not None:
        entry["weights"] = [str(Fraction(weight)) for weight in density.table or ()]
    else:
        kind = "formula" if density.formula is not None else "kernel"
        entry[kind] = scan_formula(getattr(density, kind))
    used = set(re.findall(r"[A-Za-z_]\w*", str(entry.get("formula", entry.get("kernel", "")))))
    values = density.constant_values.items()
    entry["constants"] = {name: exact_text(value) for name, value in values if name in used}
    return entry


def _infinite(end: Any) -> bool:
    return bool(end.is_infinite)


def _support(density: Density) -> str:
    support = density.parsed_support
    low, high = formula_text(support.lower), formula_text(support.upper)
    if support.kind == "integers" and not _infinite(support.lower) and not _infinite(support.upper):
        return f"integers {low}..{high}"
    if _infinite(support.lower) and _infinite(support.upper):
        return support.kind
    if not _infinite(support.lower) and not _infinite(support.upper):
        return f"reals in {'[' if support.lower_closed else '('}{low}, {high}{']' if support.upper_closed else ')'}"
    if _infinite(support.upper):
        return f"{support.kind} {'>=' if support.lower_closed else '>'} {low}"
    return f"{support.kind} {'<=' if support.upper_closed else '<'} {high}"


def _space(density: Density) -> str:
    space, t = density.parsed_space, density.parameter
    if _infinite(space.lower) and _infinite(space.upper):
        return "reals"
    if _infinite(space.upper):
        return f"{t} > {formula_text(space.lower)}"
    if _infinite(space.lower):
        return f"{t} < {formula_text(space.upper)}"
    return f"{formula_text(space.lower)} < {t} < {formula_text(space.upper)}"
