"""The law of T over the whole family: a named law with symbolic parameters, and an affine map."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from sympy import Symbol

from verify.derivation.logarithm import combine_logs
from verify.laws.base import Law
from verify.problem.numbers import Exact, as_exact, as_expr, exact_text


@dataclass(frozen=True)
class LawFamily:
    """``T = scale * Y + shift`` with Y of a named law whose parameters are functions of the family's
    parameter.

    Attributes
    ----------
    law : Law
        Law of Y; its parameters are exact numbers or expressions in ``parameter``.
    scale, shift : Exact
        The affine map, free of the parameter.
    parameter : Symbol
        The family's parameter.

    Examples
    --------
    >>> import sympy
    >>> from fractions import Fraction
    >>> from verify.laws.poisson import Poisson
    >>> t = sympy.Symbol("t", positive=True)
    >>> LawFamily(Poisson(t**2), Fraction(1), Fraction(0), t).at(Fraction(3), 10)
    Poisson(mean=Fraction(90, 1))
    """

    law: Law
    scale: Exact
    shift: Exact
    parameter: Symbol

    def at(self, value: Exact, n: int) -> Law:
        """Return the law of the sum of n copies of Y at one parameter value; V = scale * sum + n * shift."""
        here = as_expr(value)

        def put(parameter: Any) -> Exact:
            return as_exact(as_expr(parameter).subs(self.parameter, here))

        return self.law.map_parameters(put).sum_of(n)

    def text(self, n: Any = 1) -> str:
        """Return the law of V = sum of T over n observations as a line to read."""
        law = str(self.law.sum_of(n))
        scale, shift = as_expr(self.scale), combine_logs(as_expr(self.shift)) * n
        if (scale, shift) == (1, 0):
            return law
        factor = "" if scale == 1 else "-" if scale == -1 else f"{exact_text(self.scale)} * "
        shown = f"({shift})" if shift.is_Add else str(shift)
        negative = shift.could_extract_minus_sign() and not shift.is_Add
        constant = "" if shift == 0 else f" - {-shift}" if negative else f" + {shown}"
        return f"{factor}Y{constant} with Y of law {law}"

    def __str__(self) -> str:
        return self.text()
