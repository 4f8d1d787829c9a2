"""Kernels: densities known up to their normaliser on a finite support, where the normaliser is the sum.

The logarithm of the normaliser then is ``A(t) = B(t) + log(sum of kernel)`` when kernel = h(x) exp(Q T - B).
"""

from __future__ import annotations

from dataclasses import replace

import sympy as sp
from sympy import Expr

from verify.derivation.factorisation import Factorisation
from verify.derivation.ledger import Grade, Step
from verify.derivation.points import domain_of, support_points
from verify.derivation.signs import sign_of
from verify.derivation.zero import normal
from verify.problem.density import Density

WRITTEN_OUT = 40
"""Up to so many points the sum is written out; beyond, it stays a symbolic sum."""


def with_normaliser(density: Density, found: Factorisation | None) -> tuple[Step, Factorisation | None]:
    """Return the step ``normalisation`` of a kernel and its factorisation with the sum in the log normaliser."""
    support, t = density.parsed_support, density.t
    if support.kind != "integers" or not (support.lower.is_Integer and support.upper.is_Integer):
        statement = f"the support {support.text} of the kernel is not finite"
        return Step("normalisation", Grade.REFUTED, statement, "a kernel is summed over a finite support"), None
    count = int(support.upper - support.lower) + 1
    if not _somewhere_positive(density, count):
        statement = f"whether the sum of the kernel is positive for every {t} stayed open"
        return Step("normalisation", Grade.UNDECIDED, statement), None
    statement = f"the normaliser is the sum of the kernel over {count} points, finite and positive for every {t}"
    step = Step("normalisation", Grade.PROVED, statement, "a finite sum of non-negative terms, one of them positive")
    if found is None:
        return step, None
    total = sp.log(_total(density, count))
    return step, replace(found, log_normaliser=found.log_normaliser + total)


def _somewhere_positive(density: Density, count: int) -> bool:
    domain = domain_of(density)
    points = support_points(density.parsed_support, count)
    return any(sign_of(density.expr.subs(density.x, point), domain) == 1 for point in points)


def _total(density: Density, count: int) -> Expr:
    support, x = density.parsed_support, density.x
    if count > WRITTEN_OUT:
        return sp.Sum(density.expr, (x, support.lower, support.upper))
    total = sp.Add(*(density.expr.subs(x, point) for point in support_points(support, count)))
    return sp.factor(normal(total))
