"""Do two functions of one symbol agree up to scale and shift?"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.certain import sign_at
from verify.derivation.zero import is_constant


@dataclass(frozen=True)
class Affine:
    """``claimed = scale * ours + shift``, proved; or a witness that there is no such map; or neither."""

    scale: Expr | None = None
    shift: Expr | None = None
    witness: str = ""


def affine_map(claimed: Expr, ours: Expr, symbol: Symbol, points: Sequence[Expr]) -> Affine:
    """Compare two functions up to scale and shift: their slopes must have a constant ratio.

    Parameters
    ----------
    points : sequence of Expr
        At least three exact points, where a witness is looked for.

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> affine_map(3*t + 1, t, t, [sp.Integer(1), sp.Integer(2), sp.Integer(3)])
    Affine(scale=3, shift=1, witness='')
    >>> affine_map(t**2, t, t, [sp.Integer(1), sp.Integer(2), sp.Integer(3)]).witness
    'the values at t = 1, 2, 3 do not lie on one line'
    """
    scale = is_constant(sp.diff(claimed, symbol) / sp.diff(ours, symbol), symbol)
    if scale is not None and scale != 0:
        return Affine(scale, _plain(_at(claimed, symbol, points[0]) - scale * _at(ours, symbol, points[0])))
    first, second, *others = points
    if scale == 0:
        return Affine(witness=f"the claimed function takes the same value at {symbol} = {first} and {second}")
    claimed_step, our_step = (_at(f, symbol, second) - _at(f, symbol, first) for f in (claimed, ours))
    rest = (claimed - _at(claimed, symbol, first)) * our_step - claimed_step * (ours - _at(ours, symbol, first))
    for third in others:
        if sign_at(rest, {symbol: third}):
            return Affine(witness=f"the values at {symbol} = {first}, {second}, {third} do not lie on one line")
    return Affine()


def _plain(shift: Expr) -> Expr:
    """Write a constant with the logarithms of primes, so that equal ones cancel."""
    return sp.simplify(sp.expand(sp.expand_log(shift, factor=True))) if shift.has(sp.log) else sp.simplify(shift)


def _at(expr: Expr, symbol: Symbol, point: Expr) -> Expr:
    return expr.subs(symbol, point)
