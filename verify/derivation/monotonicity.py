"""Is the natural parameter strictly monotone on the whole parameter interval?

The sign of Q' is proved symbolically; where that fails, ball arithmetic covers an interval of parameter
values by subdivision (Moore, Kearfott and Cloud 2009, section 5.3); two parameter values at which Q'
certainly has opposite signs refute it.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

import sympy as sp
from sympy import Expr, Symbol

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.evaluate import evaluate
from verify.derivation.certain import sign_at, sign_of_ball
from verify.derivation.ledger import MONOTONICITY, Grade, Step
from verify.derivation.positivity import Domain, Interval
from verify.derivation.signs import factors, sign_of

PIECES = 4096
"""Largest number of pieces of a subdivision."""


def monotonicity_step(
    natural: Expr, t: Symbol, domain: Domain, points: Sequence[Expr], limits: Sequence[Expr]
) -> tuple[Step, bool | None]:
    """Return the step ``monotonicity`` and whether Q increases (None when that is open).

    Parameters
    ----------
    natural : Expr
        Q(t).
    domain : Domain
        The open parameter interval of t.
    points : sequence of Expr
        Exact parameter values to look at.
    limits : sequence of Expr
        The limits of the hypothesis, between which at least the sign is needed.

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> step, rising = monotonicity_step(sp.log(t), t, Domain({t: (sp.Integer(0), sp.oo)}), [], [])
    >>> step.grade.value, rising
    ('proved', True)
    """
    derivative = sp.diff(natural, t)
    sign = _strict_sign(derivative, domain)
    if sign:
        word = "increasing" if sign > 0 else "decreasing"
        lower, upper = domain.ranges[t]
        statement = f"Q({t}) = {natural} is strictly {word} for {lower} < {t} < {upper}"
        return Step(MONOTONICITY, Grade.PROVED, statement, f"sign of Q'({t}) = {_short(derivative)}"), sign > 0
    signs = {point: sign_at(derivative, {t: point}) for point in [*points, *_far_points(domain.ranges[t])]}
    up = next((point for point, s in signs.items() if s > 0), None)
    down = next((point for point, s in signs.items() if s < 0), None)
    if up is not None and down is not None:
        witness = f"Q'({t}) > 0 at {t} = {up} and Q'({t}) < 0 at {t} = {down}"
        statement = f"Q({t}) = {natural} is not monotone"
        return Step(MONOTONICITY, Grade.REFUTED, statement, f"Q'({t}) = {_short(derivative)}", witness), None
    return _by_balls(natural, derivative, t, [*limits] if len(limits) > 1 else [*limits, *points])


def _strict_sign(derivative: Expr, domain: Domain) -> int:
    """Sign of Q' on the domain, isolated zeros allowed (an even power of a polynomial has no others)."""
    known = sign_of(derivative, domain)
    if known:
        return known
    product = 1
    for factor in factors(sp.powsimp(sp.factor_terms(derivative))):
        if isinstance(factor, sp.Pow) and factor.exp.is_even and factor.exp.is_positive and _polynomial(factor.base):
            continue
        product *= sign_of(factor, domain)
    return product


def _far_points(interval: Interval) -> list[Expr]:
    """Points of an open interval far out, or near its ends, where a second sign of Q' may hide."""
    lower, upper = interval
    sizes = [sp.Integer(10) ** k for k in (2, 4, 7, 12)]
    if lower.is_infinite and upper.is_infinite:
        return [sign * size for size in sizes for sign in (1, -1)]
    if upper.is_infinite:
        return [lower + size for size in (*sizes, *(1 / size for size in sizes))]
    if lower.is_infinite:
        return [upper - size for size in (*sizes, *(1 / size for size in sizes))]
    return [end + (upper - lower) * part for size in sizes for end, part in ((lower, 1 / size), (upper, -1 / size))]


def _polynomial(expr: Expr) -> bool:
    return bool(expr.is_polynomial(*expr.free_symbols)) and expr != 0


def _by_balls(natural: Expr, derivative: Expr, t: Symbol, values: Sequence[Expr]) -> tuple[Step, bool | None]:
    with balls(128) as A:
        ends = [to_enclosure(A.real(value)) for value in values]
        lower, upper = min(end.lower for end in ends), max(end.upper for end in ends)
    sign = certain_sign_between(derivative, t, lower, upper) if lower < upper else 0
    if not sign:
        statement = f"whether Q({t}) = {natural} is strictly monotone stayed open"
        reason = f"no proof of the sign of Q'({t}), neither symbolic nor in {PIECES} pieces of [{lower}, {upper}]"
        return Step(MONOTONICITY, Grade.UNDECIDED, statement, reason), None
    word = "increasing" if sign > 0 else "decreasing"
    statement = f"Q({t}) = {natural} is strictly {word} for {lower} <= {t} <= {upper}"
    reason = f"ball arithmetic: the sign of Q'({t}) is certain on this interval; beyond it nothing was shown"
    return Step(MONOTONICITY, Grade.ENCLOSED, statement, reason), sign > 0


def certain_sign_between(expr: Expr, t: Symbol, lower: Fraction, upper: Fraction) -> int:
    """Return the sign that an expression certainly has on all of [lower, upper], by subdivision, else 0.

    Examples
    --------
    >>> t = sp.Symbol("t", real=True)
    >>> certain_sign_between(2 + sp.sin(3*t), t, Fraction(0), Fraction(4))
    1
    """
    waiting, wanted, pieces = [(lower, upper)], 0, 0
    with balls(96) as A:
        while waiting:
            a, b = waiting.pop()
            pieces += 1
            sign = sign_of_ball(evaluate(expr, A, {t.name: A.interval(Enclosure(a, b))}))
            if sign and sign == (wanted or sign):
                wanted = sign
            elif sign or pieces > PIECES:
                return 0
            else:
                middle = (a + b) / 2
                waiting += [(middle, b), (a, middle)]
    return wanted


def _short(expr: Expr) -> str:
    text = str(sp.factor_terms(expr))
    return text if len(text) <= 120 else text[:117] + "..."
