"""Kernels: densities known up to their normaliser on a finite support, where the normaliser is the sum.

The logarithm of the normaliser then is ``A(t) = B(t) + log(sum of kernel)`` when kernel = h(x) exp(Q T - B).
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace
from functools import reduce
from operator import add
from typing import Any

import sympy as sp
from sympy import Expr

from verify.arithmetic.ball import balls
from verify.arithmetic.evaluate import evaluate
from verify.derivation.certain import sign_of_ball
from verify.derivation.factorisation import Factorisation
from verify.derivation.ledger import NORMALISATION, Grade, Step
from verify.derivation.points import domain_of, mass_at
from verify.derivation.signs import sign_of
from verify.derivation.zero import normal
from verify.errors import SidecheckError
from verify.problem.density import Density

WRITTEN_OUT = 40
"""Up to so many points the sum is written out; beyond, it stays a symbolic sum."""

PRECISION = 256


def with_normaliser(density: Density, found: Factorisation | None) -> tuple[Step, Factorisation | None]:
    """Return the step ``normalisation`` of a kernel, and its factorisation with log(sum) put into A."""
    t, count = density.t, len(density.parsed_support.points)
    if not _somewhere_positive(density):
        statement = f"whether the sum of the kernel is positive for every {t} stayed open"
        return Step(NORMALISATION, Grade.UNDECIDED, statement), None
    statement = f"the normaliser is the sum of the kernel over {count} points, finite and positive for every {t}"
    step = Step(NORMALISATION, Grade.PROVED, statement, "a finite sum of non-negative terms, one of them positive")
    if found is None:
        return step, None
    total = written_out(density) if count <= WRITTEN_OUT else sp.Sum(density.expr, (density.x, *_ends(density)))
    return step, replace(found, log_normaliser=found.log_normaliser + sp.log(total))


def _ends(density: Density) -> tuple[Expr, Expr]:
    return density.parsed_support.lower, density.parsed_support.upper


def _somewhere_positive(density: Density) -> bool:
    domain = domain_of(density)
    return any(sign_of(mass_at(density, sp.Integer(k)), domain) == 1 for k in density.parsed_support.points)


def written_out(density: Density) -> Expr:
    """Return the sum of a kernel over its support, written out and factored."""
    return sp.factor(normal(sp.Add(*(mass_at(density, sp.Integer(k)) for k in density.parsed_support.points))))


def kernel_certainly_another(density: Density, statistic: Expr, points: Sequence[Expr]) -> bool:
    """Tell whether the variance function of a kernel is certainly neither quadratic nor a cube, from its
    moments in balls.

    With central moments as cumulants K2..K5: v2 = (K4 K2 - K3**2)/(2 K2**3), and the cubic coefficient is
    its derivative along the mean divided by 3.
    """
    places = [sp.Integer(k) for k in density.parsed_support.points]
    masses = [mass_at(density, place) for place in places]
    try:
        with balls(PRECISION) as A:
            values = [evaluate(statistic, A, {density.x.name: A.real(place)}) for place in places]
            found = [_coefficients(A, masses, values, density.t.name, A.real(point)) for point in points]
    except (SidecheckError, ArithmeticError):
        return False
    return all(any(sign_of_ball(row[k] - found[0][k]) for row in found[1:]) for k in (0, 1))


def _coefficients(A: Any, masses: list[Expr], values: list[Any], name: str, t: Any) -> tuple[Any, Any]:
    weights = [evaluate(mass, A, {name: t}) for mass in masses]
    total = _sum(weights)
    mean = _sum(w * v for w, v in zip(weights, values, strict=True)) / total
    k2, k3, m4, m5 = (
        _sum(w * A.power(v - mean, k) for w, v in zip(weights, values, strict=True)) / total for k in (2, 3, 4, 5)
    )
    k4, k5 = m4 - 3 * k2 * k2, m5 - 10 * k3 * k2
    v2 = (k4 * k2 - k3 * k3) / (2 * k2 * k2 * k2)
    slope = (k5 * k2 + k4 * k3 - 2 * k3 * k4) / (2 * k2**3) - 3 * k3 * (k4 * k2 - k3 * k3) / (2 * k2**4)
    return v2, slope / (3 * k2)


def _sum(numbers: Iterable[Any]) -> Any:
    return reduce(add, numbers)
