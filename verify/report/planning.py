"""Plans and decisions as text and JSON."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from verify.problem.numbers import exact_text
from verify.report.json_form import enclosure_json
from verify.report.layout import field, heading, wrapped
from verify.report.solution_text import cutoff_lines
from verify.report.text import CAUTION

if TYPE_CHECKING:
    from verify.planning import Decision, SampleSize, ScanResult
    from verify.problem.casefile import Case
    from verify.solution.solve import Solution

SHOWN_DIGITS = 10


def plan_text(case: Case, size: SampleSize, scan: ScanResult | None) -> str:
    """Return a plan as text: the smallest n, the powers that prove it, and the scan without randomisation."""
    parameter = case.density.parameter
    lines = [
        case.title or case.name,
        "",
        heading(1, "Planned", "proved"),
        field("Wanted", f"power {exact_text(size.wanted)} at {parameter} = {exact_text(size.at)}"),
        field("Enough", f"n = {size.n}: power {size.power.text(SHOWN_DIGITS)}"),
    ]
    if size.power_before is not None:
        lines.append(field("Too few", f"n = {size.n - 1}: power {size.power_before.text(SHOWN_DIGITS)}"))
    lines.append(field("Because", "one observation more never lowers the power of the best test: it may be ignored"))
    if scan is not None:
        lines += ["", *_scan_lines(scan)]
    return "\n".join([*lines, "", wrapped(CAUTION)])


def _scan_lines(scan: ScanResult) -> list[str]:
    found = "never" if scan.first is None else f"first at n = {scan.first}"
    stays = "it does not stay there" if scan.stays is None else f"from n = {scan.stays} on it stays there"
    return [
        heading(2, "Without randomisation", "proved"),
        field("Test", "the same cutoffs, but never rejecting at them"),
        field("Reached", f"{found}; {stays}, up to n = {scan.last} (nothing is claimed beyond)"),
    ]


def plan_json(case: Case, size: SampleSize, scan: ScanResult | None) -> dict[str, Any]:
    """Return a plan as JSON (``plan.schema.json``)."""
    digits = SHOWN_DIGITS * 2
    return {
        "title": case.title,
        "at": exact_text(size.at),
        "power_wanted": exact_text(size.wanted),
        "n": size.n,
        "power": enclosure_json(size.power, digits),
        "power_before": None if size.power_before is None else enclosure_json(size.power_before, digits),
        "without_randomisation": None
        if scan is None
        else {"first": scan.first, "stays": scan.stays, "looked_up_to": scan.last},
    }


def decision_text(case: Case, solution: Solution, decision: Decision) -> str:
    """Return a decision as text, with the test that it follows from."""
    says = {"reject": "reject the null", "do not reject": "do not reject the null"}
    spoken = says.get(decision.says, "reject the null with probability phi(V)")
    lines = [
        case.title or case.name,
        "",
        heading(1, "Decided", solution.grade.value),
        field("Null", solution.problem.hypothesis.text(case.density.parameter)),
        *cutoff_lines(solution),
        "",
        field("Observed", f"V = {exact_text(decision.statistic)}"),
        field("phi(V)", decision.phi.text(solution.digits)),
        field("The test", spoken),
    ]
    if decision.after is not None:
        lines.append(field("With U", says[decision.after]))
    return "\n".join([*lines, "", wrapped(CAUTION)])


def decision_json(solution: Solution, decision: Decision) -> dict[str, Any]:
    """Return a decision as JSON (``decide.schema.json``)."""
    return {
        "statistic": exact_text(decision.statistic),
        "phi": enclosure_json(decision.phi, solution.digits),
        "says": decision.says,
        "after_randomisation": decision.after,
        "grade": solution.grade.value,
    }
