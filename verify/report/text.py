"""A derivation and a solution as text that a statistician can paste into a review."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from verify.derivation.ledger import Grade
from verify.problem.numbers import exact_text
from verify.report.comparison_text import comparison_text
from verify.report.layout import field, heading, short_exact, wrapped
from verify.report.safe_text import visible
from verify.report.solution_text import solution_text

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.derivation.family import LawFamily
    from verify.derivation.ledger import Step
    from verify.problem.casefile import Case
    from verify.problem.density import Density
    from verify.problem.problem import Problem
    from verify.report.pipeline import CaseRun

CAUTION = (
    "Choosing the limits, the level and the design, and interpreting the result, belongs to qualified "
    "statisticians under the guidance that applies. This text shows that the numbers follow from "
    "what was asked."
)


def derivation_text(derivation: Derivation, case: Case) -> str:
    """Return the derivation of a case: what was asked, then the ledger."""
    return "\n\n".join([_title(case), _asked(case), _derived(derivation, case.problem), wrapped(CAUTION)])


def run_text(run: CaseRun) -> str:
    """Return one case through the pipeline: asked, derived, solved, compared."""
    parts = [_title(run.case), _asked(run.case), _derived(run.derivation, run.case.problem)]
    if run.solution is None:
        parts.append(
            heading(3, "Not solved", run.grade.value) + "\n" + field("Because", _obstacle(run.derivation))
        )
    else:
        parts.append(solution_text(run.solution))
    if run.comparison is not None:
        parts.append(comparison_text(run.comparison))
    return "\n\n".join([*parts, wrapped(CAUTION)])


def _title(case: Case) -> str:
    lines = [visible(case.title or case.name)]
    if case.source:
        lines.append(wrapped(visible(case.source), first="Source: ", rest="        "))
    return "\n".join(lines)


def _asked(case: Case) -> str:
    density, problem = case.density, case.problem
    constants = ", ".join(f"{name} = {value}" for name, value in density.constants.items())
    lines = [
        heading(1, "Asked"),
        field("Density", f"f({density.variable}; {density.parameter}) = {_formula(density)}"),
        field("Support", f"{density.variable} in {density.support}"),
        field("Parameter", _space(density) + (f"; known: {constants}" if constants else "")),
    ]
    if problem is not None:
        hypothesis, t = problem.hypothesis, density.parameter
        lines += [
            field("Null", f"{hypothesis.text(t)}   ({hypothesis.form.value})"),
            field("Alternative", hypothesis.alternative_text(t)),
            field("Level", _levels(problem)),
            field(
                "Sample",
                f"n = {problem.n} independent observations" if problem.n > 1 else "n = 1 observation",
            ),
        ]
    return "\n".join(lines)


def _space(density: Density) -> str:
    written_out = re.search(rf"\b{re.escape(density.parameter)}\b", density.space)
    return density.space if written_out else f"{density.parameter} in {density.space}"


def _levels(problem: Problem) -> str:
    if len(set(problem.levels)) == 1:
        return short_exact(problem.levels[0])
    t, pairs = problem.density.parameter, zip(problem.levels, problem.hypothesis.limits, strict=True)
    return ", ".join(f"{short_exact(level)} at {t} = {exact_text(limit)}" for level, limit in pairs)


def _formula(density: Density) -> str:
    if density.formula is not None:
        return density.formula
    if density.weights is not None:
        table = ", ".join(map(str, density.weights))
        return f"h({density.variable}) * {density.parameter}**{density.variable} up to a factor, h = {table}"
    return f"{exact_text(density.expr)} up to a factor" if density.is_kernel else exact_text(density.expr)


def _derived(derivation: Derivation, problem: Problem | None) -> str:
    density, lines = derivation.density, [heading(2, "Derived", derivation.grade.value)]
    x, t = density.variable, density.parameter
    if derivation.natural_parameter is not None:
        direction = {True: ", increasing", False: ", decreasing", None: ""}[derivation.rising]
        lines += [
            field("Form", f"f({x}; {t}) = h({x}) exp(Q({t}) T({x}) - A({t}))"),
            field(f"Q({t})", f"= {exact_text(derivation.natural_parameter)}{direction}"),
            field(f"T({x})", f"= {exact_text(derivation.statistic)}"),
            field(f"A({t})", f"= {exact_text(derivation.log_normaliser)}"),
        ]
    if derivation.family is not None:
        lines.append(field("Law", law_line(derivation.family, problem.n if problem else None)))
    lines += ["", *(_step(step) for step in derivation.steps)]
    return "\n".join(lines)


def law_line(family: LawFamily, n: int | None) -> str:
    """Return the law of V = T(X1) + ... + T(Xn), or of one T(X) when n is not given."""
    if n is None or n == 1:
        return f"V = T(X) is {family.text()}"
    whole = "T(X1) + T(X2)" if n == 2 else f"T(X1) + ... + T(X{n})"
    return f"V = {whole} is {family.text(n=n)}"


def _step(step: Step) -> str:
    lines = [wrapped(f"{step.name}: {step.statement}", first=f"  [{step.grade.value}] ", rest="      ")]
    if step.reason:
        lines.append(wrapped(step.reason, first="      by: ", rest="          "))
    if step.witness:
        lines.append(wrapped(step.witness, first="      witness: ", rest="          "))
    return "\n".join(lines)


def _obstacle(derivation: Derivation) -> str:
    worst = [step.name for step in derivation.steps if step.grade is derivation.grade]
    verb = "is refuted" if derivation.grade is Grade.REFUTED else "is undecided"
    if derivation.grade in (Grade.REFUTED, Grade.UNDECIDED):
        return f"the step {' and '.join(worst)} {verb}; no test can lean on it"
    return "the law of the statistic is not one with a closed form"
