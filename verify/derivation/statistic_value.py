"""The observed value of the sufficient statistic, exactly."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import sympy as sp

from verify.errors import InputError
from verify.problem.numbers import Exact, as_exact, as_expr, exact

if TYPE_CHECKING:
    from verify.problem.density import Density


def statistic_sum(density: Density, statistic: sp.Expr, data: Sequence[str | Exact]) -> Exact:
    """Return T(x1) + ... + T(xn) for observed values.

    Parameters
    ----------
    density : Density
        Its support is checked.
    statistic : sympy.Expr
        T(x).
    data : sequence of str or Exact
        The observations.

    Raises
    ------
    InputError
        For an observation outside the support.

    Examples
    --------
    >>> from verify.problem.density import Density
    >>> d = Density("exp(-t)*t**x/factorial(x)", variable="x", support="integers >= 0", parameter="t", space="t > 0")
    >>> statistic_sum(d, d.x, ["3", "5", "0"])
    Fraction(8, 1)
    """
    total: sp.Expr = sp.Integer(0)
    for number, text in enumerate(data, start=1):
        value = exact(text, key=f"data[{number}]")
        if not density.parsed_support.contains(value):
            raise InputError(
                f"{text} is outside the support", f"observations are {density.support}", key=f"data[{number}]"
            )
        total += statistic.subs(density.x, as_expr(value))
    return as_exact(sp.expand(total))
