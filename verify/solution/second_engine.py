"""The side conditions solved once more, at full precision, in mpmath.

The laws' formulas are the same; the engine that evaluates them shares no code with the balls. It proves
nothing: it is the second pair of eyes on a proven number. On a lattice it solves the 2 x 2 system at the
proven pair of cutoffs; for a continuous law it runs Newton's method from the doubles nearest to the proven
cutoffs.

Source: F. Johansson et al., mpmath: a Python library for arbitrary-precision floating-point arithmetic
(version 1.3, 2023).
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from verify.arithmetic.agreement import digits_on_scale
from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.high import High
from verify.errors import UndecidedError
from verify.laws import CLOSED_FORMS
from verify.problem.hypothesis import Form
from verify.solution.conditions import Conditions, end_fractions
from verify.solution.one_sided import TailProblem
from verify.solution.solve import Solution
from verify.solution.window import rough_laws

GUARD_DIGITS = 20
NEWTON_STEPS = 60
DIGITS_PER_BIT = 0.302


def second_engine(solution: Solution) -> dict[str, int]:
    """Return, for each cutoff or fraction that is not a lattice point, how many significant digits mpmath reproduces.

    Parameters
    ----------
    solution : Solution
        A proven test of a law with a closed form.

    Returns
    -------
    dict of str to int
        Digits that agree, at most the digits asked for.

    Raises
    ------
    UndecidedError
        For a law without a closed form, or when Newton's method does not settle.
    """
    if solution.laws[0].name not in CLOSED_FORMS:
        raise UndecidedError("only laws with a closed form are evaluated in mpmath")
    A = High(max(solution.digits, int(solution.prec * DIGITS_PER_BIT)) + GUARD_DIGITS)
    names = ("gamma",) if solution.laws[0].lattice else ("c",)
    proven = {
        name: value
        for base in names
        for name in (base, f"{base}1", f"{base}2")
        if (value := getattr(solution, name)) is not None
    }
    found = _tail(solution, A) if solution.form is Form.ONE_SIDED else _window(solution, A)
    spread = abs(A.real(solution.family.scale)) * A.mp.mpf(rough_laws(solution.laws)[0][0].spread)
    ordered = found[::-1] if solution.flipped else found
    return {
        name: _agreeing_digits(A.rational(value), enclosure, solution.digits, A.rational(spread))
        for (name, enclosure), value in zip(proven.items(), ordered, strict=True)
    }


def _agreeing_digits(value: Fraction, enclosure: Enclosure, most: int, whole: Fraction) -> int:
    """Significant digits to which a number agrees with an enclosure; digits of ``whole`` where that holds 0."""
    size = whole if enclosure.contains(0) else min(abs(enclosure.lower), abs(enclosure.upper))
    return digits_on_scale(value, enclosure, size, most)


def _conditions(solution: Solution) -> Conditions:
    rough, _, _ = rough_laws(solution.laws)
    outside = solution.critical.region == "outside"
    return Conditions(solution.laws, solution.problem.levels, outside, tuple(law.mean for law in rough))


def _window(solution: Solution, A: High) -> tuple[Any, ...]:
    """Return the two fractions (lattice), or the two cutoffs on the scale of V (continuous)."""
    conditions, critical = _conditions(solution), solution.critical
    if conditions.lattice:
        if critical.c1 == critical.c2:
            share = (A.real(solution.problem.levels[0]) - _outside_atom(conditions, A, critical.c1)) / (
                conditions.laws[0].density(A, critical.c1)
            )
            return share, share
        return end_fractions(conditions, A, critical.c1, critical.c2)
    sign = -1 if conditions.outside else 1
    width = abs(A.real(critical.c2.mid) - A.real(critical.c1.mid))
    c1, c2 = (_start(A, end, width) for end in (critical.c1, critical.c2))
    for _ in range(NEWTON_STEPS):
        left, right = end_fractions(conditions, A, c1, c2)
        c1, c2 = c1 - sign * left, c2 + sign * right
        if max(abs(left), abs(right)) <= abs(c2 - c1) * A.mp.mpf(10) ** (-solution.digits - GUARD_DIGITS // 2):
            return _on_scale(solution, A, c1), _on_scale(solution, A, c2)
    raise UndecidedError("Newton's method in mpmath did not settle")


def _outside_atom(conditions: Conditions, A: High, c: int) -> Any:
    """Probability of rejecting away from a single atom: 0 when the test rejects inside."""
    law = conditions.laws[0]
    return law.cdf(A, c - 1) + law.sf(A, c) if conditions.outside else A.real(0)


def _tail(solution: Solution, A: High) -> tuple[Any, ...]:
    rough, _, _ = rough_laws(solution.laws)
    above, c = solution.critical.region == "above", solution.critical.c1
    problem = TailProblem(solution.laws[0], solution.problem.levels[0], above, rough[0], solution.prec)
    level = A.real(problem.level)
    if problem.law.lattice:
        return ((level - problem.beyond(A, c)) / problem.law.density(A, c),)
    place = _start(A, c)
    for _ in range(NEWTON_STEPS):
        step = problem.outward * (level - problem.beyond(A, place)) / problem.law.density(A, place)
        place -= step
        if abs(step) <= abs(place) * A.mp.mpf(10) ** (-solution.digits - GUARD_DIGITS // 2):
            return (_on_scale(solution, A, place),)
    raise UndecidedError("Newton's method in mpmath did not settle")


def _start(A: High, end: Enclosure, width: Any = None) -> Any:
    """The proven cutoff cut to 15 digits (of the window's width, where that is less): where a double would stand."""
    place = A.real(end.mid)
    extra = 0 if not width or abs(place) <= width else int(A.mp.log10(abs(place) / width)) + 1
    return A.mp.mpf(A.mp.nstr(place, 15 + extra))


def _on_scale(solution: Solution, A: High, c: Any) -> Any:
    return A.real(solution.family.scale) * c + solution.problem.n * A.real(solution.family.shift)
