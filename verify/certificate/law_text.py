"""The law of one observation's statistic as a certificate states it: a named law, a table of weights, or neither."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.exact import rationals
from verify.errors import NotRational, SidecheckError
from verify.laws import CLOSED_FORMS
from verify.problem.formula import formula_text
from verify.problem.hypothesis import Form
from verify.problem.numbers import as_expr, exact_text

if TYPE_CHECKING:
    from verify.solution.solve import Solution

LONGEST_TABLE = 20_000


def law_text(solution: Solution) -> dict[str, Any]:
    """Return the entry ``law`` of a certificate."""
    family = solution.family
    affine = {"scale": exact_text(family.scale), "shift": exact_text(family.shift)}
    if family.law.name in CLOSED_FORMS:
        texts = {name: formula_text(as_expr(value)) for name, value in family.law.parameters.items()}
        return {"name": family.law.name, "parameters": texts, **affine}
    table = _table(solution) if family.law.name == "lattice sum" else None
    return {**table, **affine} if table else {"name": f"no closed form ({family.law.name})", "parameters": {}, **affine}


def _table(solution: Solution) -> dict[str, Any] | None:
    """Weights w_y with P(Y = y) = w_y base(t)**y / total(t); None where they are not rational or the base is not
    plain.
    """
    one: Any = getattr(solution.family.law, "one", None)
    base = _base(solution)
    limit = solution.problem.hypothesis.limits[0]
    if base is None or one.first is None:
        return None
    at = limit if isinstance(limit, Fraction) else Fraction(1)
    last = one.last if one.last is not None else _reach(solution, one.first)
    try:
        core = replace(one, constant=Fraction(1), cache={}).masses(rationals(), at, one.first, last)
        theta = evaluate(base, rationals(), {one.parameter: at})
    except (NotRational, SidecheckError, ZeroDivisionError):
        return None
    if len(core) < 2 or len(core) > LONGEST_TABLE or not core[0]:
        return None
    weights = [str(mass / core[0] / theta**j) for j, mass in enumerate(core)]
    if max(map(len, weights)) > 4000:
        return None
    parameters = {"base": formula_text(base)}
    if one.last is None:
        parameters |= _normaliser(solution, one, base)
    return {"name": "lattice", "parameters": parameters, "weights": weights, "first": one.first}


def _base(solution: Solution) -> Any:
    """exp(scale * Q(t)) where Q = log(...) and the scale is whole."""
    Q, scale = solution.derivation.natural_parameter, solution.family.scale
    plain = type(Q).__name__ == "log" and isinstance(scale, Fraction) and scale.denominator == 1
    return Q.args[0] ** int(scale) if plain and Q is not None else None


def _reach(solution: Solution, first: int) -> int:
    """The largest value of one Y that takes part in a sum up to the cutoffs."""
    critical, n = solution.critical, solution.problem.n
    top = max(int(critical.c1), int(critical.c2))
    return max(top - (n - 1) * first, first + 1)


def _normaliser(solution: Solution, one: Any, base: Any) -> dict[str, str]:
    mass = one.constant * one.core
    variable = next(symbol for symbol in mass.free_symbols if symbol.name == one.variable)
    here = mass.subs(variable, as_expr(one.origin + one.step * one.first))
    texts = {"total": formula_text(base**one.first / here)}
    if solution.form is Form.POINT:
        texts["mean"] = formula_text(one.mean)
    return texts
