"""Riemann's zeta function with derivatives that an arithmetic can evaluate."""

from __future__ import annotations

from typing import Any

import sympy as sp
from sympy import Expr


class zeta_derivative(sp.Function):  # type: ignore[misc]  # noqa: N801 (the name in formulas)
    """The k-th derivative of Riemann's zeta function at s: ``zeta_derivative(k, s)``.

    Examples
    --------
    >>> s = sp.Symbol("s")
    >>> sp.diff(zeta_derivative(0, 2*s), s)
    2*zeta_derivative(1, 2*s)
    """

    nargs = 2

    def fdiff(self, argindex: int = 2) -> Expr:
        """Derivative in s."""
        if argindex != 2:
            raise sp.ArgumentIndexError(self, argindex)
        return zeta_derivative(self.args[0] + 1, self.args[1])


def open_zeta(expr: Expr) -> Expr:
    """Write ``zeta(s)`` as ``zeta_derivative(0, s)``, so that derivatives keep a form that can be evaluated.

    Examples
    --------
    >>> s = sp.Symbol("s")
    >>> sp.diff(open_zeta(sp.log(sp.zeta(s))), s)
    zeta_derivative(1, s)/zeta_derivative(0, s)
    """
    return expr.replace(_plain_zeta, lambda node: zeta_derivative(0, node.args[0]))


def _plain_zeta(node: Any) -> bool:
    return isinstance(node, sp.zeta) and len(node.args) == 1
