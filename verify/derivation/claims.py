"""A colleague's own natural parameter, statistic and law, compared up to the affine freedom."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.affine import Affine, affine_map
from verify.derivation.certain import sign_at
from verify.derivation.family import LawFamily
from verify.derivation.law_of_variance import CLOSED_FORMS
from verify.derivation.ledger import CLAIMS, Grade, Step, weakest
from verify.derivation.named_law import read_law
from verify.derivation.points import parameter_points, support_points
from verify.derivation.zero import is_zero
from verify.laws.base import Law
from verify.laws.binomial import Binomial
from verify.laws.gamma import Gamma
from verify.laws.inverse_gaussian import InverseGaussian
from verify.laws.normal import Normal
from verify.problem.density import Density
from verify.problem.formula import parse_formula
from verify.problem.numbers import as_exact, as_expr

COUNT = sp.Symbol("n", integer=True, positive=True)
"""The number of observations, where none was given."""


@dataclass(frozen=True)
class Derived:
    """What the claims are compared with."""

    density: Density
    statistic: Expr
    natural_parameter: Expr
    family: LawFamily | None
    law_grade: Grade
    n: int | None


def claims_steps(claim: Mapping[str, str], derived: Derived) -> tuple[Step, ...]:
    """Return one step ``claims`` for each of ``natural_parameter``, ``statistic`` and ``law`` that was given.

    Raises
    ------
    InputError
        When a claim cannot be read.
    """
    density, steps, maps = derived.density, [], {}
    for key, symbol, ours, points in (
        ("natural_parameter", density.t, derived.natural_parameter, parameter_points(density)),
        ("statistic", density.x, derived.statistic, support_points(density.parsed_support)),
    ):
        if key in claim:
            claimed = _read(claim[key], derived, symbol, f"claim.{key}")
            maps[key] = affine_map(claimed, ours, symbol, points)
            steps.append(_affine_step(key.replace("_", " "), claim[key], ours, maps[key]))
    if len(maps) == 2:
        steps.extend(_product_step(*maps.values()))
    if "law" in claim:
        steps.append(_law_step(claim["law"], derived, maps.get("statistic", Affine(sp.S.One, sp.S.Zero))))
    return tuple(steps)


def _read(text: str, derived: Derived, symbol: Symbol, key: str) -> Expr:
    """Read a claimed function; n is known in it when the number of observations is."""
    count = {} if derived.n is None else {"n": sp.Integer(derived.n)}
    return parse_formula(text, {**count, **derived.density.constant_symbols, symbol.name: symbol}, key)


def _affine_step(what: str, text: str, ours: Expr, found: Affine) -> Step:
    if found.scale is not None:
        same = found.scale == 1 and found.shift == 0
        how = "is the one derived" if same else f"is {found.scale} times the derived {ours} plus {found.shift}"
        return Step(CLAIMS, Grade.PROVED, f"the claimed {what} {text} {how}", "scale and shift are free")
    if found.witness:
        statement = f"the claimed {what} {text} is no affine function of {ours}"
        return Step(CLAIMS, Grade.REFUTED, statement, "", found.witness)
    return Step(
        CLAIMS,
        Grade.UNDECIDED,
        f"whether the claimed {what} {text} is an affine function of {ours} stayed open",
    )


def _product_step(natural: Affine, statistic: Affine) -> list[Step]:
    """Q and T together must reproduce the density: their scales must cancel."""
    if natural.scale is None or statistic.scale is None:
        return []
    product = natural.scale * statistic.scale
    if is_zero(product - 1):
        return []
    statement = "the claimed natural parameter and statistic do not belong together"
    return [Step(CLAIMS, Grade.REFUTED, statement, "", f"up to shifts their product is {product} times Q T")]


def _law_step(text: str, derived: Derived, statistic: Affine) -> Step:
    density, n = derived.density, derived.n or COUNT
    claimed = read_law(text, {"n": sp.sympify(n), **density.constant_symbols, density.t.name: density.t})
    family = derived.family
    if family is None or not isinstance(family.law, CLOSED_FORMS) or statistic.scale is None:
        open_law = family is None or not isinstance(family.law, CLOSED_FORMS)
        reason = "no law in closed form was derived" if open_law else "the claimed statistic does not agree"
        return Step(CLAIMS, Grade.UNDECIDED, f"the claimed law {text} was not compared", reason)
    ours = absorbed(family, n, statistic.scale, statistic.shift)
    if ours is None or type(ours) is not type(claimed):
        right = str(ours) if ours is not None else moved(family, statistic.scale, statistic.shift).text(n=n)
        return Step(CLAIMS, Grade.REFUTED, f"the law of V is not {text}", "", f"it is {right}")
    return _compare_parameters(text, claimed, ours, derived)


def _compare_parameters(text: str, claimed: Law, ours: Law, derived: Derived) -> Step:
    grade = Grade.PROVED
    for name, mine in ours.parameters.items():
        difference = sp.sympify(claimed.parameters[name]) - sp.sympify(mine)
        if is_zero(difference):
            continue
        t = derived.density.t
        for point in parameter_points(derived.density):
            numbers = {symbol: point if symbol == t else sp.Integer(3) for symbol in difference.free_symbols}
            if sign_at(difference, numbers):
                witness = f"{name} is {mine}, not {claimed.parameters[name]} (at {t} = {point} they differ)"
                return Step(CLAIMS, Grade.REFUTED, f"the law of V is {ours}, not {text}", "", witness)
        grade = Grade.UNDECIDED
    statement = (
        f"the law of V is the claimed {text}"
        if grade is Grade.PROVED
        else f"whether V has the claimed law {text} stayed open"
    )
    return Step(CLAIMS, weakest([grade, derived.law_grade]), statement, f"derived: {ours}")


def moved(family: LawFamily, scale: Expr, shift: Expr | None) -> LawFamily:
    """Return the family of ``scale * T + shift``."""
    new_shift = scale * as_expr(family.shift) + (shift or 0)
    return LawFamily(family.law, as_exact(scale * as_expr(family.scale)), as_exact(new_shift), family.parameter)


def absorbed(family: LawFamily, n: Any, scale: Expr, shift: Expr) -> Law | None:
    """Return the law of ``scale * V + n * shift`` when it has the same name as the law of Y, else None."""
    law = family.law.map_parameters(as_expr).sum_of(n)
    a = sp.simplify(scale * as_expr(family.scale))
    b = sp.simplify(n * (scale * as_expr(family.shift) + shift))
    if isinstance(law, Normal):
        return Normal(a * law.mean + b, a**2 * law.variance)
    if (a, b) == (1, 0):
        return law
    if isinstance(law, Binomial) and a == -1 and is_zero(b - law.trials):
        return Binomial(law.trials, 1 - law.probability)
    if b == 0 and a.is_positive and isinstance(law, Gamma):
        return Gamma(law.shape, law.rate / a)
    if b == 0 and a.is_positive and isinstance(law, InverseGaussian):
        return InverseGaussian(law.mean * a, law.shape * a)
    return None
