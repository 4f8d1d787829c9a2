"""Whether a value of the statistic is exactly as likely at two parameter values: it decides ties that no ball decides.

log f(v; t2) - log f(v; t1) = (Q(t2) - Q(t1)) v - n (A(t2) - A(t1)), and this is 0 when its n-th part is.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import sympy as sp

from verify.errors import UndecidedError
from verify.killable.worker import Worker
from verify.problem.numbers import Exact, as_expr

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation

SECONDS = 5.0
DIGITS = 40


def equally_likely(derivation: Derivation, limits: tuple[Exact, Exact], n: int, v: Exact) -> bool:
    """Return whether V = v is shown to be exactly as likely at both limits, within a few seconds.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from verify.derivation.derive import derive
    >>> from verify.problem.density import Density
    >>> coin = derive(Density("p**x*(1-p)**(1-x)", variable="x", support="integers 0..1", parameter="p",
    ...                       space="0 < p < 1"))
    >>> [equally_likely(coin, (Fraction(1, 3), Fraction(2, 3)), 4, Fraction(v)) for v in (1, 2)]
    [False, True]
    """
    if derivation.natural_parameter is None or derivation.log_normaliser is None:
        return False
    t, (low, high) = derivation.density.t, map(as_expr, limits)
    rate, normaliser = (
        part.xreplace({t: high}) - part.xreplace({t: low})
        for part in (derivation.natural_parameter, derivation.log_normaliser)
    )
    with Worker(SECONDS) as worker:
        try:
            return bool(worker.run(_vanishes, as_expr(v) / n * rate - normaliser))
        except UndecidedError:
            return False


def _vanishes(difference: sp.Expr) -> bool:
    """Whether a sum of logarithms of positive numbers is exactly 0."""
    if abs(difference.evalf(DIGITS)) > sp.Float(10) ** -(DIGITS // 2):
        return False
    joined = sp.logcombine(sp.expand_log(difference, force=True), force=True)
    inside = sp.radsimp(sp.simplify(sp.exp(joined)))
    return bool(inside == 1 or sp.simplify(inside - 1) == 0)
