"""Do two functions of one symbol agree up to scale and shift?"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from sympy import Expr, Symbol

from verify.derivation.certain import sign_at
from verify.derivation.zero import is_zero, normal


@dataclass(frozen=True)
class Affine:
    """``claimed = scale * ours + shift``, proved; or a witness that there is no such map; or neither."""

    scale: Expr | None = None
    shift: Expr | None = None
    witness: str = ""


def affine_map(claimed: Expr, ours: Expr, symbol: Symbol, points: Sequence[Expr]) -> Affine:
    """Compare two functions up to scale and shift.

    Parameters
    ----------
    points : sequence of Expr
        At least three exact points, at the first two of which ``ours`` differs.

    Examples
    --------
    >>> import sympy as sp
    >>> t = sp.Symbol("t", positive=True)
    >>> affine_map(3*t + 1, t, t, [sp.Integer(1), sp.Integer(2), sp.Integer(3)])
    Affine(scale=3, shift=1, witness='')
    >>> affine_map(t**2, t, t, [sp.Integer(1), sp.Integer(2), sp.Integer(3)]).witness[:11]
    't = 1, 2, 3'
    """
    first, second = points[0], points[1]
    scale = normal((_at(claimed, symbol, second) - _at(claimed, symbol, first))
                   / (_at(ours, symbol, second) - _at(ours, symbol, first)))
    shift = normal(_at(claimed, symbol, first) - scale * _at(ours, symbol, first))
    rest = claimed - scale * ours - shift
    if scale == 0 or is_zero(scale, thorough=False):
        return Affine(witness=f"the claimed function takes the same value at {symbol} = {first} and {second}")
    for third in points[2:]:
        if sign_at(rest, {symbol: third}):
            return Affine(witness=f"{symbol} = {first}, {second}, {third} do not lie on one line")
    if is_zero(rest):
        return Affine(scale, shift)
    return Affine()


def _at(expr: Expr, symbol: Symbol, point: Expr) -> Expr:
    return expr.subs(symbol, point)
