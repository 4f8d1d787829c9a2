"""The step ``factorisation``: cheap separation, then a search for a witness, then the general identity."""

from __future__ import annotations

from verify.derivation.factorisation import (
    Factorisation,
    factorise,
    factorise_by_difference,
    factorise_two_points,
)
from verify.derivation.ledger import FACTORISATION, Grade, Step
from verify.derivation.points import domain_of, mass_at, parameter_points, support_points
from verify.derivation.witness import rank_witness
from verify.errors import SidecheckError
from verify.problem.density import Density

REASON = "log f is parted into a function of x, a function of the parameter, and one product"


def factorisation_step(density: Density) -> tuple[Step, Factorisation | None]:
    """Return the step ``factorisation``, and the parts of ``h(x) exp(Q T - A)`` when that was proved."""
    x, t, domain = density.x, density.t, domain_of(density)
    xs, ts = support_points(density.parsed_support), parameter_points(density)
    if not density.expr.has(t):
        statement = f"the density does not depend on the parameter {t}"
        return Step(FACTORISATION, Grade.REFUTED, statement, "", f"{t} does not occur in {density.expr}"), None
    found = factorise(density.expr, x, t, domain, (xs[0], ts[0]))
    if found is None and density.parsed_support.is_finite and len(density.parsed_support.points) == 2:
        found = factorise_two_points(mass_at(density, xs[0]), mass_at(density, xs[1]), x, t, domain, (xs[0], xs[1]))
        reason = "two points: every family on them is exponential, with Q the log of the ratio of their masses"
        if found is not None:
            return _proved(density, found, reason)
    if found is not None:
        return _proved(density, found)
    try:
        witness = rank_witness(density.expr, x, t, xs, ts)
        searched = "no witness was found at the points tried"
    except (SidecheckError, ArithmeticError) as error:
        witness, searched = "", f"no witness could be looked for: {error}"
    if witness:
        statement = "the density is not a one-parameter exponential family: D(x,t) D(x1,t1) = D(x1,t) D(x,t1) fails"
        return Step(FACTORISATION, Grade.REFUTED, statement, "certain in ball arithmetic", witness), None
    found = factorise_by_difference(density.expr, x, t, domain, (xs[0], ts[0]))
    if found is not None:
        return _proved(density, found)
    statement = "whether the density is a one-parameter exponential family stayed open"
    return Step(
        FACTORISATION, Grade.UNDECIDED, statement, f"no form h(x) exp(Q T - A) was found, and {searched}"
    ), None


def _proved(density: Density, found: Factorisation, reason: str = REASON) -> tuple[Step, Factorisation]:
    t = density.t
    base = found.base if density.table is None else f"the weight of {density.variable}"
    parts = f"T(x) = {found.statistic}, Q({t}) = {found.natural_parameter}, h(x) = {base}"
    if density.is_kernel:
        statement = f"the kernel is h(x) exp(Q T - B) with {parts}, B({t}) = {found.log_normaliser}"
    else:
        statement = f"f = h(x) exp(Q T - A) with {parts}, A({t}) = {found.log_normaliser}"
    return Step(FACTORISATION, Grade.PROVED, statement, reason), found
