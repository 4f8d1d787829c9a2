"""A witness that a density is not of one-parameter exponential form: numbers with a certain difference."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import combinations
from typing import Any

from sympy import Expr, Symbol

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.evaluate import evaluate
from verify.derivation.certain import sign_of_ball

PRECISION = 192


def rank_witness(expr: Expr, x: Symbol, t: Symbol, xs: Sequence[Expr], ts: Sequence[Expr]) -> str:
    """Return a text with x, x1, t, t1 at which ``D(x,t) D(x1,t1)`` and ``D(x1,t) D(x,t1)`` certainly
    differ, or "".

    Parameters
    ----------
    expr : Expr
        The density f; D is made of log f relative to the first point of ``xs`` and of ``ts``.
    xs, ts : sequence of Expr
        Exact points of the support and of the parameter space, at least three of each.

    Examples
    --------
    >>> import sympy as sp
    >>> x, t = sp.symbols("x t", real=True)
    >>> cauchy = 1/(sp.pi*(1 + (x - t)**2))
    >>> points = [sp.Integer(0), sp.Integer(1), sp.Integer(2)]
    >>> rank_witness(cauchy, x, t, points, points)[:21]
    'x = 1, x1 = 2, t = 1,'
    """
    with balls(PRECISION) as A:
        table = [[_log_at(expr, A, {x.name: A.real(a), t.name: A.real(b)}) for b in ts] for a in xs]
        d = [[table[i][j] - table[0][j] - table[i][0] + table[0][0] for j in range(len(ts))] for i in range(len(xs))]
        for i, i1 in combinations(range(1, len(xs)), 2):
            for j, j1 in combinations(range(1, len(ts)), 2):
                left, right = d[i][j] * d[i1][j1], d[i1][j] * d[i][j1]
                if sign_of_ball(left - right):
                    return (
                        f"x = {xs[i]}, x1 = {xs[i1]}, t = {ts[j]}, t1 = {ts[j1]} "
                        f"(with x0 = {xs[0]}, t0 = {ts[0]}): "
                        f"D(x,t) D(x1,t1) = {_text(left)} but D(x1,t) D(x,t1) = {_text(right)}"
                    )
    return ""


def _log_at(expr: Expr, A: Any, values: dict[str, Any]) -> Any:
    return A.log(evaluate(expr, A, values))


def _text(ball: Any) -> str:
    return to_enclosure(ball).text(8)
