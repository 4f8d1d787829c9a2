"""The side conditions of a solution as equations with their numbers."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure, decimal_text
from verify.derivation.ledger import Grade
from verify.problem.numbers import exact_text
from verify.report.layout import short_exact, wrapped
from verify.solution.conditions import interior

if TYPE_CHECKING:
    from verify.laws.base import Law
    from verify.solution.side_conditions import SideCondition
    from verify.solution.solve import Solution

SHOWN = 8
"""Digits of the numbers in an equation; the closeness of the two sides is stated separately, in full."""

PREC = 192
"""Bits in which the numbers of an equation are enclosed; only digits that are certain are printed."""

LEFT_SIDES = {
    ("inside", True): "P(c1 < V < c2) + gamma1 P(V = c1) + gamma2 P(V = c2)",
    ("outside", True): "P(V < c1) + P(V > c2) + gamma1 P(V = c1) + gamma2 P(V = c2)",
    ("above", True): "P(V > c) + gamma P(V = c)",
    ("below", True): "P(V < c) + gamma P(V = c)",
    ("inside", False): "P(c1 < V < c2)",
    ("outside", False): "P(V < c1) + P(V > c2)",
    ("above", False): "P(V > c)",
    ("below", False): "P(V < c)",
}


def equation_lines(solution: Solution) -> list[str]:
    """Return the lines of the side conditions: the equation, then one paragraph for each limit."""
    lattice = solution.laws[0].lattice
    lines = [
        "  Side conditions" + (f" (of each number, {SHOWN} digits are shown)" if lattice else ""),
        f"    E[phi] = {LEFT_SIDES[solution.rejects, lattice]}",
    ]
    laws = list(solution.laws) * (len(solution.side_conditions) // len(solution.laws))
    for condition, law in zip(solution.side_conditions, laws, strict=True):
        lines += _condition(solution, condition, law)
    return lines


def _condition(solution: Solution, condition: SideCondition, law: Law) -> list[str]:
    """Return where an expectation is taken, its numbers, and how closely it is enclosed."""
    head, rest = f"      E[{condition.of}] = ", " " * 8
    lines = []
    if condition.of == "phi":
        plain = solution.family.scale == 1 and solution.family.shift == 0
        where = f"at {solution.problem.density.parameter} = {exact_text(condition.at)}"
        lines.append(wrapped(f"{where}, {'V' if plain else 'Y'} is {law}:", first="    ", rest="      "))
        if law.lattice:
            lines.append(wrapped(_numbers(solution, law), first=head, rest=rest))
    word = "enclosed" if solution.numbers_grade is Grade.PROVED else Grade.CHECKED.value
    lines.append(wrapped(closeness(condition, word), first=head, rest=rest))
    return lines


def closeness(condition: SideCondition, word: str = "enclosed") -> str:
    """Say what an expectation is and how closely it is enclosed, or checked.

    Examples
    --------
    >>> from types import SimpleNamespace
    >>> near = Enclosure(Fraction(1, 20) - Fraction(1, 10**30), Fraction(1, 20) + Fraction(1, 10**30))
    >>> closeness(SimpleNamespace(target=Fraction(1, 20), expectation=near))
    '1/20, enclosed within 1e-30 of it'
    """
    target, found = condition.target, condition.expectation
    if not isinstance(target, Fraction):
        return f"{short_exact(target)}, {word} with a radius of {decimal_text(found.radius, 2, up=True)}"
    if found.exact and found.lower == target:
        return f"{short_exact(target)} exactly"
    off = max(abs(found.lower - target), abs(found.upper - target))
    if not found.contains(target):
        return f"{found.text(SHOWN)}, which is not {short_exact(target)}"
    return f"{short_exact(target)}, {word} within {decimal_text(off, 2, up=True)} of it"


def _numbers(solution: Solution, law: Law) -> str:
    """Write the sum of a lattice test with its numbers, each cut to the digits shown."""
    critical = solution.critical
    ends = [(critical.c1, critical.phi1), (critical.c2, critical.phi2)]
    if critical.c1 == critical.c2:
        ends = ends[:1]
    if (solution.c1 is not None) and solution.c1 != solution._on_scale(critical.c1):
        ends.reverse()
    with balls(PREC) as A:
        terms = [_shown(value) for value in _certain(solution, law, A)]
        terms += [f"{_short(fraction)} * {_shown(law.density(A, end))}" for end, fraction in ends if fraction]
    return " + ".join(terms)


def _certain(solution: Solution, law: Law, A: Any) -> list[Any]:
    """The probabilities of the points at which phi is 1, in the order of the equation."""
    critical = solution.critical
    if critical.region == "inside":
        centre = float(law.expectation(A).mid())
        return [interior(law, A, critical.c1, critical.c2, centre)] if critical.c1 < critical.c2 else []
    tails = {"below": law.cdf(A, critical.c1 - 1), "above": law.sf(A, critical.c2)}
    wanted = ["below", "above"] if critical.region == "outside" else [critical.region]
    return [tails[side] for side in wanted]


def _shown(value: Any) -> str:
    return _short(to_enclosure(value))


def _short(value: Enclosure) -> str:
    """Return a number as the equation shows it: without its radius, which is far below the digits shown."""
    return value.text(SHOWN).partition(" +- ")[0]
