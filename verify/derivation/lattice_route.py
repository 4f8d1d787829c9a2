"""From a discrete density to the law of its statistic, built from the formula itself."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.cumulants import cumulants
from verify.derivation.factorisation import Factorisation
from verify.derivation.family import LawFamily
from verify.derivation.whole_numbers import Lattice, affine, logarithmic, on_finite_support, polynomial
from verify.derivation.zeta_values import open_zeta
from verify.laws.atoms import Atoms
from verify.laws.base import Law
from verify.laws.lattice import LatticeSum
from verify.laws.multiplicative import MultiplicativeSum
from verify.problem.density import Density
from verify.problem.numbers import as_exact

LARGEST_SUPPORT = 200_000
"""A finite support of more points than this is not listed."""


def lattice_family(density: Density, found: Factorisation) -> tuple[LawFamily, str] | str:
    """Return the family with the reason why its lattice is what it is, or what stands in the way.

    Parameters
    ----------
    density : Density
        A density (or kernel, or table of weights) on whole numbers.
    found : Factorisation
        Its statistic, natural parameter and log normaliser.
    """
    low, high = _ends(density)
    infinite = low is None or high is None
    if density.is_kernel and infinite:
        return (
            "a kernel on an infinite support has no known normaliser: "
            "give the normalised density as a formula"
        )
    x, statistic = density.x, found.statistic
    lattice = affine(statistic, x, low, high)
    if lattice is None and not infinite and high - low < LARGEST_SUPPORT:  # type: ignore[operator]
        lattice = on_finite_support(statistic, x, range(low, high + 1))  # type: ignore[arg-type, operator]
    if lattice is None:
        lattice = polynomial(statistic, x, low, high)
    if lattice is not None:
        return _family(density, found, lattice, LatticeSum), "the statistic takes whole multiples of one span"
    lattice = logarithmic(statistic, x, low, high)
    if lattice is not None:
        return _family(
            density, found, lattice, MultiplicativeSum
        ), "the statistic is the logarithm of a whole number"
    return (
        f"the values of T = {statistic} were not shown to be whole multiples of one span or logarithms of whole "
        "numbers; a statistic that is a polynomial in the variable, or the logarithm of one, would help"
    )


def _ends(density: Density) -> tuple[int | None, int | None]:
    support = density.parsed_support
    low, high = support.lower, support.upper
    first = None if low.is_infinite else int(low) + (0 if support.lower_closed else 1)
    last = None if high.is_infinite else int(high) - (0 if support.upper_closed else 1)
    return first, last


def _family(density: Density, found: Factorisation, lattice: Lattice, kind: type[Any]) -> LawFamily:
    t, x = density.t, density.x
    mass = density.expr if density.table is None else density.t**x
    constant, core = sp.expand_power_exp(mass).as_independent(x, as_Add=False)
    mean = variance = None
    if lattice.first is None or lattice.last is None:
        mean, variance = _moments(found, lattice, t)
    atoms = Atoms(
        constant,
        core,
        x.name,
        t.name,
        lattice.first,
        lattice.last,
        lattice.origin,
        lattice.step,
        lattice.places,
        normalised=not density.is_kernel,
        table=_table(density, lattice),
        space=space_ends(density),
        mean=mean,
        variance=variance,
    )
    law: Law = kind(atoms, t)
    return LawFamily(law, as_exact(lattice.scale), as_exact(lattice.shift), t)


def _table(density: Density, lattice: Lattice) -> dict[int, Fraction] | None:
    if density.table is None:
        return None
    first = int(density.parsed_support.lower)
    if lattice.places is None:
        return {
            int((first + i - lattice.origin) / lattice.step): weight for i, weight in enumerate(density.table)
        }
    return {y: density.table[int(xs[0]) - first] for y, xs in lattice.places.items()}


def _moments(found: Factorisation, lattice: Lattice, t: Symbol) -> tuple[Expr, Expr]:
    mean, variance = cumulants(open_zeta(found.log_normaliser), found.natural_parameter, t)
    return (mean - lattice.shift) / lattice.scale, variance / lattice.scale**2


def space_ends(density: Density) -> tuple[Any, Any]:
    """Return the ends of the parameter interval as exact numbers, None for an infinite one."""
    ends = density.parsed_space.lower, density.parsed_space.upper
    return tuple(None if end.is_infinite else as_exact(end) for end in ends)  # type: ignore[return-value]
