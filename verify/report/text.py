"""A derivation and a solution as text that a statistician can paste into a review."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from verify.derivation.ledger import Grade
from verify.problem.numbers import exact_text
from verify.report.equations import equation_lines
from verify.report.layout import field, heading, number, table, wrapped

if TYPE_CHECKING:
    from verify.arithmetic.enclosure import Enclosure
    from verify.comparison.compare import Comparison
    from verify.derivation.derive import Derivation
    from verify.derivation.family import LawFamily
    from verify.derivation.ledger import Step
    from verify.problem.casefile import Case
    from verify.problem.density import Density
    from verify.problem.problem import Problem
    from verify.report.pipeline import CaseRun
    from verify.solution.solve import Solution

CAUTION = (
    "Choosing the limits, the level and the design, and interpreting the result, belongs to qualified "
    "statisticians under the guidance that applies. This text shows that the numbers follow from "
    "what was asked."
)

OPTIMALITY = {
    "one-sided": "uniformly most powerful (Lehmann and Romano 2005, Theorem 3.4.1)",
    "outside null": "uniformly most powerful (Lehmann and Romano 2005, Theorem 3.7.1)",
    "interval null": "uniformly most powerful unbiased (Lehmann and Romano 2005, section 4.2)",
    "point null": "uniformly most powerful unbiased (Lehmann and Romano 2005, section 4.2)",
}
"""In which sense the test of each form is optimal, and by which theorem."""

TWO_LEVELS = (
    "most powerful at every alternative among the tests with these two expectations at the limits "
    "(Lehmann and Romano 2005, Theorem 3.6.1)"
)

REJECTS = {
    "inside": "reject when c1 < V < c2",
    "outside": "reject when V < c1 or V > c2",
    "above": "reject when V > c",
    "below": "reject when V < c",
}


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
        parts.append(_solved(run.solution))
    if run.comparison is not None:
        parts.append(_compared(run.comparison))
    return "\n\n".join([*parts, wrapped(CAUTION)])


def _title(case: Case) -> str:
    lines = [case.title or case.name]
    if case.source:
        lines.append(wrapped(case.source, first="Source: ", rest="        "))
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
            field("Sample", f"n = {problem.n} independent observation{'s' if problem.n > 1 else ''}"),
        ]
    return "\n".join(lines)


def _space(density: Density) -> str:
    written_out = re.search(rf"\b{re.escape(density.parameter)}\b", density.space)
    return density.space if written_out else f"{density.parameter} in {density.space}"


def _levels(problem: Problem) -> str:
    if len(set(problem.levels)) == 1:
        return exact_text(problem.levels[0])
    t, pairs = problem.density.parameter, zip(problem.levels, problem.hypothesis.limits, strict=True)
    return ", ".join(f"{exact_text(level)} at {t} = {exact_text(limit)}" for level, limit in pairs)


def _formula(density: Density) -> str:
    if density.formula is not None:
        return density.formula
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


def _solved(solution: Solution) -> str:
    lines = [
        heading(3, f"Solved to {solution.digits} digits", solution.grade.value),
        field("Optimal", _optimality(solution)),
        field("Test", _rule(solution)),
        "",
    ]
    lines += [number(name, value.text(solution.digits), 6) for name, value in named_numbers(solution)]
    return "\n".join([*lines, "", *equation_lines(solution)])


def _optimality(solution: Solution) -> str:
    if len(set(solution.problem.levels)) > 1:
        return TWO_LEVELS
    return OPTIMALITY[solution.form.value]


def _rule(solution: Solution) -> str:
    """Say when the test rejects."""
    rule = REJECTS[solution.rejects]
    if solution.gamma is not None:
        return f"{rule}; at V = c with probability gamma"
    if solution.gamma1 is None:
        return rule
    if _two_atoms(solution):
        return "reject with probability alpha whatever is observed: V has two values only"
    if solution.c1 == solution.c2:
        other = "never" if solution.rejects == "inside" else "always"
        return f"at V = c1 = c2 reject with probability gamma1 = gamma2; {other} elsewhere"
    return f"{rule}; at V = c1, c2 with probability gamma1, gamma2"


def _two_atoms(solution: Solution) -> bool:
    """Whether V has two values and the levels are equal, which leaves nothing but phi = alpha."""
    low, high = solution.laws[0].support
    few = low is not None and high is not None and high - low == 1
    return solution.laws[0].lattice and few and len(set(solution.problem.levels)) == 1


def named_numbers(solution: Solution) -> list[tuple[str, Enclosure]]:
    """Return the cutoffs and fractions that this form of test has, by name."""
    named = [(name, getattr(solution, name)) for name in ("c", "gamma", "c1", "c2", "gamma1", "gamma2")]
    return [(name, value) for name, value in named if value is not None]


def _compared(comparison: Comparison) -> str:
    opinions = comparison.opinions
    lines = [heading(4, "Compared with double precision"), table(_opinion_rows(comparison))]
    remarks = [(opinion.route, opinion.failure or opinion.note) for opinion in opinions]
    lines += [wrapped(text, first=f"  {route}: ", rest="    ") for route, text in remarks if text]
    if comparison.condition is not None:
        lines.append(
            f"  A relative error e in a tail moves these numbers by up to {comparison.condition:.2g} e."
        )
    if comparison.flags:
        lines += [
            wrapped(f"{flag.kind}: {flag.text}", first="  ! ", rest="    ") for flag in comparison.flags
        ]
    elif all(opinion.numbers for opinion in opinions):
        lines.append("  No flag: here double precision can be trusted to the digits shown.")
    return "\n".join(lines)


def _opinion_rows(comparison: Comparison) -> list[list[str]]:
    """One row a number: what each route says, and how many of its digits are right."""
    names = list(dict.fromkeys(name for opinion in comparison.opinions for name in opinion.numbers))
    rows = [["", *(cell for opinion in comparison.opinions for cell in (opinion.route, "right digits"))]]
    for name in names:
        row = [name]
        for opinion in comparison.opinions:
            value, digits = opinion.numbers.get(name), opinion.digits.get(name)
            row += ["none" if value is None else value, "" if digits is None else str(digits)]
        rows.append(row)
    return rows
