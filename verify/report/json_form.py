"""The JSON form of a derivation and of a solution; the schemas lie in ``schemas/``."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

from verify.problem.numbers import exact_text

if TYPE_CHECKING:
    from verify.arithmetic.enclosure import Enclosure
    from verify.comparison.compare import Comparison
    from verify.derivation.derive import Derivation
    from verify.derivation.family import LawFamily
    from verify.derivation.ledger import Step
    from verify.problem.density import Density
    from verify.report.pipeline import CaseRun
    from verify.solution.solve import Solution

GUARD = 3
"""Figures written beyond the digits asked for."""


def enclosure_json(value: Enclosure, digits: int) -> dict[str, str]:
    """Write an enclosure as two decimal strings rounded outward, equal when the number is exact.

    Three figures more than the digits asked for are written: rounding outward spoils none of these. A rational
    without a decimal form of that length gets the two neighbouring decimals.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from verify.arithmetic.enclosure import Enclosure
    >>> enclosure_json(Enclosure.of(Fraction(1, 20)), 15), enclosure_json(Enclosure.of(Fraction(1, 3)), 2)
    ({'lower': '0.05', 'upper': '0.05'}, {'lower': '0.33333', 'upper': '0.33334'})
    """
    return value.strings(digits + GUARD)


def step_json(step: Step) -> dict[str, str]:
    """Write a step of the ledger; ``reason`` and ``witness`` only where there is one."""
    form = {"name": step.name, "grade": step.grade.value, "statement": step.statement}
    return form | {key: text for key, text in (("reason", step.reason), ("witness", step.witness)) if text}


def law_json(family: LawFamily | None, n: int | None) -> dict[str, Any] | None:
    """Write the law of Y, where V = scale * Y + shift is the sum over n (or one) observations."""
    if family is None:
        return None
    law = family.law if n is None else family.law.sum_of(n)
    return {
        "name": law.name,
        "parameters": {name: exact_text(value) for name, value in law.parameters.items()},
        "scale": exact_text(family.scale),
        "shift": exact_text(family.shift * (1 if n is None else n)),
    }


def density_json(density: Density) -> dict[str, str]:
    """Write what was asked about one observation."""
    return {"formula": exact_text(density.expr), "variable": density.variable, "support": density.support,
            "parameter": density.parameter, "space": density.space}  # fmt: skip


def derivation_json(derivation: Derivation, n: int | None = None) -> dict[str, Any]:
    """Write a derivation (``derive.schema.json``)."""
    parts = (derivation.natural_parameter, derivation.statistic, derivation.log_normaliser)
    natural, statistic, normaliser = (None if part is None else exact_text(part) for part in parts)
    return {
        "density": density_json(derivation.density),
        "natural_parameter": natural,
        "statistic": statistic,
        "log_normaliser": normaliser,
        "n": n,
        "law": law_json(derivation.family, n),
        "grade": derivation.grade.value,
        "steps": [step_json(step) for step in derivation.steps],
    }


def cutoffs_json(solution: Solution) -> dict[str, dict[str, str]]:
    """Write the cutoffs and fractions that the form of the test has."""
    return {name: enclosure_json(value, solution.digits_of(name)) for name, value in solution.numbers.items()}


def side_conditions_json(solution: Solution) -> list[dict[str, Any]]:
    """Write the equations that the test satisfies, each with its expectation enclosed."""
    return [
        {
            "of": condition.of,
            "at": exact_text(condition.at),
            "target": exact_text(condition.target),
            "expectation": enclosure_json(condition.expectation, solution.digits),
        }
        for condition in solution.side_conditions
    ]


def comparison_json(comparison: Comparison | None) -> dict[str, Any] | None:
    """Write what double precision says about the same numbers; an infinite condition number is null."""
    if comparison is None:
        return None
    form, condition = comparison.as_json(), comparison.condition
    return form | {"condition": condition if condition is not None and math.isfinite(condition) else None}


def run_json(run: CaseRun) -> dict[str, Any]:
    """Write one case through the pipeline (``solve.schema.json``).

    ``cutoffs``, ``side_conditions`` and ``comparison`` are null when the derivation carries no solution.
    """
    problem, solution = run.case.problem, run.solution
    if problem is None:
        raise ValueError("a run without a problem")
    steps = solution.steps if solution else run.derivation.steps
    return {
        "title": run.case.title,
        "form": problem.hypothesis.form.value,
        "null": problem.hypothesis.text(problem.density.parameter),
        "alternative": problem.hypothesis.alternative_text(problem.density.parameter),
        "alpha": [exact_text(level) for level in problem.levels],
        "n": problem.n,
        "law": law_json(run.derivation.family, problem.n),
        "grade": run.grade.value,
        "steps": [step_json(step) for step in steps],
        "digits": solution.digits if solution else None,
        "rejects": solution.rejects if solution else None,
        "cutoffs": cutoffs_json(solution) if solution else None,
        "side_conditions": side_conditions_json(solution) if solution else None,
        "comparison": comparison_json(run.comparison),
    }
