"""The side conditions of a solution as equations with their numbers."""

from __future__ import annotations

from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure, decimal_text
from verify.problem.numbers import as_expr, exact_text
from verify.report.layout import wrapped

if TYPE_CHECKING:
    from verify.laws.base import Law
    from verify.solution.solve import SideCondition, Solution

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
    lines = [f"  Side conditions: E[phi] = {LEFT_SIDES[solution.rejects, lattice]}"]
    if any(condition.of != "phi" for condition in solution.side_conditions):
        lines.append("                   E[V phi] = level * E[V]")
    parameter = solution.problem.density.parameter
    for condition, law in zip(solution.side_conditions, _laws(solution), strict=True):
        lines += _condition(solution, condition, law, parameter)
    return lines


def _laws(solution: Solution) -> list[Law]:
    """The law that belongs to each side condition: a point null has one law and two conditions."""
    laws = list(solution.laws)
    return laws * len(solution.side_conditions) if len(laws) == 1 else laws


def _condition(solution: Solution, condition: SideCondition, law: Law, parameter: str) -> list[str]:
    scale, shift = solution.family.scale, solution.family.shift
    plain = scale == 1 and shift == 0
    where = f"at {parameter} = {exact_text(condition.at)}"
    if condition.of == "phi":
        where += f", {'V' if plain else 'Y'} is {law}"
    symbol = "E[phi]" if condition.of == "phi" else "E[V phi]"
    lines = [wrapped(where + ":", first="    ", rest="      ")]
    if condition.of == "phi" and law.lattice:
        lines.append(wrapped(_numbers(solution, law), first=f"      {symbol} = ", rest="        "))
    lines.append(wrapped(closeness(condition), first=f"      {symbol} = ", rest="        "))
    return lines


def closeness(condition: SideCondition) -> str:
    """Say what an expectation is and how closely it is enclosed.

    Examples
    --------
    >>> from types import SimpleNamespace
    >>> near = Enclosure(Fraction(1, 20) - Fraction(1, 10**30), Fraction(1, 20) + Fraction(1, 10**30))
    >>> closeness(SimpleNamespace(target=Fraction(1, 20), expectation=near))
    '1/20, enclosed within 1e-30 of it'
    """
    target, found = condition.target, condition.expectation
    if not isinstance(target, Fraction):
        return f"{exact_text(target)}, enclosed with a radius of {decimal_text(found.radius, 2, up=True)}"
    if found.exact and found.lower == target:
        return f"{exact_text(target)} exactly"
    off = max(abs(found.lower - target), abs(found.upper - target))
    if not found.contains(target):
        return f"{found.text(SHOWN)}, which is not {exact_text(target)}"
    return f"{exact_text(target)}, enclosed within {decimal_text(off, 2, up=True)} of it"


def _numbers(solution: Solution, law: Law) -> str:
    """Write the sum of a lattice test with its numbers, each cut to the digits shown."""
    with balls(PREC) as A:
        terms = [_shown(value) for value in _whole(solution, law, A)]
        for end, fraction in _ends(solution):
            mass = law.density(A, _of_y(solution, end))
            terms.append(f"{fraction.text(SHOWN)} * {_shown(mass)}")
    return " + ".join(terms)


def _ends(solution: Solution) -> list[tuple[Enclosure, Enclosure]]:
    """The cutoffs with their fractions."""
    pairs = [(solution.c, solution.gamma), (solution.c1, solution.gamma1), (solution.c2, solution.gamma2)]
    found = [(end, fraction) for end, fraction in pairs if end is not None and fraction is not None]
    return found[:1] if solution.c1 is not None and solution.c1 == solution.c2 else found


def _whole(solution: Solution, law: Law, A: Any) -> list[Any]:
    """The probabilities of the points at which phi is 1, in the order of the equation."""
    scale = solution.family.scale
    flipped = _negative(scale)
    points = [_of_y(solution, end) for end, _ in _ends(solution)]
    low, high = min(points), max(points)
    below, above = law.cdf(A, low - 1), law.sf(A, high)
    if solution.rejects == "inside":
        return [1 - below - above - law.density(A, low) - (law.density(A, high) if high > low else 0)]
    if solution.rejects == "outside":
        return [above, below] if flipped else [below, above]
    return [above if (solution.rejects == "above") is not flipped else below]


def _negative(scale: Any) -> bool:
    return bool(scale < 0) if isinstance(scale, Fraction) else bool(as_expr(scale).is_negative)


def _of_y(solution: Solution, end: Enclosure) -> int:
    """Return the lattice point of Y that belongs to a cutoff of V = scale * Y + n * shift."""
    from verify.problem.numbers import as_exact

    family, n = solution.family, solution.problem.n
    y = as_exact((as_expr(end.lower) - n * as_expr(family.shift)) / as_expr(family.scale))
    return round(y)


def _shown(value: Any) -> str:
    return to_enclosure(value).text(SHOWN)
