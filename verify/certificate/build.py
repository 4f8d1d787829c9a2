"""From a solution to the predicate of a certificate: everything a reader, a page and the rechecker need, and
nothing else.
"""

from __future__ import annotations

import hashlib
import json
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.enclosure import Enclosure
from verify.certificate.assumptions import assumptions
from verify.certificate.claims import Claim, claim, ends
from verify.certificate.expectations import Expectations
from verify.certificate.identification import versions
from verify.certificate.law_text import law_text
from verify.certificate.opinions import double_precision
from verify.certificate.question_text import density_text, levels_text
from verify.certificate.rounding import rounding_table
from verify.derivation.ledger import CLAIMS, Grade, Step
from verify.errors import UndecidedError
from verify.problem.formula import formula_text
from verify.problem.hypothesis import Form
from verify.problem.numbers import as_expr

if TYPE_CHECKING:
    from verify.comparison.compare import Comparison
    from verify.solution.solve import Solution

STATEMENT = "https://in-toto.io/Statement/v1"
PREDICATE = "tag:sidecheck.invalid,2026:certificate/v1"
GUARD_DIGITS = 10
"""Digits by which a solution must be better than what is printed."""


@dataclass(frozen=True)
class Subject:
    """The case file that a certificate is about.

    Attributes
    ----------
    name, sha256 : str
        File name and digest of its bytes.
    title, source : str
        Its own words.
    """

    name: str = "problem"
    sha256: str = hashlib.sha256(b"").hexdigest()
    title: str = ""
    source: str = ""


def canonical(value: Any) -> bytes:
    """Return RFC 8785 bytes, for text, counts, truth values, lists and objects with ASCII keys.

    Examples
    --------
    >>> canonical({"b": 1, "a": ["x"]})
    b'{"a":["x"],"b":1}'
    """
    return json.dumps(value, sort_keys=True, separators=(",", ":"), ensure_ascii=False).encode()


def build_statement(
    solution: Solution,
    comparison: Comparison,
    subject: Subject,
    *,
    digits: int,
    tolerance: Fraction,
    issued: str = "",
) -> dict[str, Any]:
    """Return the in-toto Statement for a solution.

    Parameters
    ----------
    solution : Solution
        With ``GUARD_DIGITS`` more digits than ``digits``.
    comparison : Comparison
        The double-precision opinions.
    subject : Subject
        What it is about.
    digits : int
        Significant digits of the numbers printed.
    tolerance : Fraction
        How far the expectations may move when the numbers are rounded.
    issued : str
        In the user's words; nothing is taken from the clock.

    Raises
    ------
    UndecidedError
        When a step of the derivation is refuted or open.
    """
    steps = _steps(solution)
    test = _test(solution, digits)
    law = law_text(solution)
    expectations = Expectations(solution, solution.prec + 4 * digits + 256)
    predicate: dict[str, Any] = {
        "problem": _problem(solution, subject, digits),
        "derivation": _derivation(solution, steps),
        "law": law,
        "test": test,
        "side_conditions": _conditions(solution, expectations, test, digits),
        "rounding": rounding_table(solution, expectations, test, tolerance, min(digits, 15)),
        "double_precision": double_precision(comparison, test),
        "versions": versions(),
        "issued": issued,
    }
    predicate["assumptions"] = assumptions(solution.problem, steps, law)
    statement = {
        "_type": STATEMENT,
        "subject": [{"name": subject.name, "digest": {"sha256": subject.sha256}}],
        "predicateType": PREDICATE,
        "predicate": predicate,
    }
    predicate["seal"] = hashlib.sha256(canonical(statement)).hexdigest()
    return statement


def _problem(solution: Solution, subject: Subject, digits: int) -> dict[str, Any]:
    problem = solution.problem
    parameter, hypothesis = problem.density.parameter, problem.hypothesis
    return {
        "title": subject.title,
        "source": subject.source,
        "density": density_text(problem.density),
        "null": hypothesis.text(parameter),
        "alternative": hypothesis.alternative_text(parameter),
        "alpha": levels_text(problem),
        "n": problem.n,
        "digits": digits,
    }


def _steps(solution: Solution) -> tuple[Step, ...]:
    steps = tuple(step for step in solution.derivation.steps if step.name != CLAIMS)
    for step in steps:
        if step.grade in (Grade.REFUTED, Grade.UNDECIDED):
            raise UndecidedError(f"no certificate: the step {step.name} is {step.grade.value}: {step.statement}")
    return steps


def _derivation(solution: Solution, steps: tuple[Step, ...]) -> dict[str, Any]:
    derivation = solution.derivation
    parts = {
        name: formula_text(getattr(derivation, name)) for name in ("natural_parameter", "statistic", "log_normaliser")
    }
    return {
        "grade": derivation.footing.value,
        **parts,
        "rising": derivation.rising,
        "steps": [
            {"name": step.name, "grade": step.grade.value, "statement": step.statement, "reason": step.reason}
            for step in steps
        ],
    }


def _test(solution: Solution, digits: int) -> dict[str, Any]:
    """Form, side, cutoffs, and on a lattice the fractions and the lattice points of Y."""
    test: dict[str, Any] = {"form": solution.form.value, "rejects": solution.rejects}
    test |= {name: claim(value, digits) for name, value in solution.numbers.items()}
    if solution.laws[0].lattice:
        critical, cutoffs = solution.critical, (name for name in solution.numbers if name.startswith("c"))
        keys = [name.replace("c", "y") for name in cutoffs]
        points = [critical.c1] if len(keys) == 1 else [critical.c1, critical.c2]
        falling = len(points) == 2 and Expectations(solution, 64).flipped
        test |= {key: int(y) for key, y in zip(keys, points[::-1] if falling else points, strict=True)}
    return test


def _conditions(
    solution: Solution, expectations: Expectations, test: dict[str, Any], digits: int
) -> list[dict[str, Any]]:
    """Each side condition with its exact target and the range of the expectation over the numbers as printed."""
    problem = solution.problem
    pairs = zip(problem.hypothesis.limits, problem.levels, solution.laws, strict=True)
    exact = len(corners(test)) == 1  # exact fractions solve the side conditions exactly
    entries = []
    for limit, level, law in pairs:
        target: Claim = claim(Enclosure.of(level), digits) if isinstance(level, Fraction) else _enclosed(level, digits)
        seen = target if exact else claim(span([expectations.phi(law, corner) for corner in corners(test)]), digits)
        entries.append(_entry(limit, "phi", target, seen))
    if solution.form is Form.POINT:
        limit, level, law = problem.hypothesis.limits[0], problem.levels[0], solution.laws[0]
        target = claim(_product(level, expectations.mean(law), digits), digits)
        seen = target if exact else claim(span([expectations.v_phi(law, corner) for corner in corners(test)]), digits)
        entries.append(_entry(limit, "V phi", target, seen))
    return entries


def _entry(limit: Any, of: str, target: Claim, expectation: Claim) -> dict[str, Any]:
    return {"at": formula_text(as_expr(limit)), "of": of, "target": target, "expectation": expectation}


def corners(test: dict[str, Any]) -> list[tuple[Fraction, ...]]:
    """All choices of an end for each printed number on which the expectations depend (fractions, else cutoffs)."""
    kind = "gamma" if any(key.startswith("gamma") for key in test) else "c"
    choices: list[tuple[Fraction, ...]] = [()]
    for key in (key for key in test if key.startswith(kind)):
        choices = [(*chosen, end) for chosen in choices for end in dict.fromkeys(ends(test[key]))]
    return choices


def span(values: list[Enclosure]) -> Enclosure:
    """Return the smallest enclosure of several numbers."""
    return Enclosure(min(v.lower for v in values), max(v.upper for v in values))


def _enclosed(number: Any, digits: int) -> Claim:
    from verify.arithmetic.ball import balls, to_enclosure

    with balls(4 * digits + 128) as A:
        return claim(to_enclosure(A.real(number)), digits)


def _product(level: Any, mean: Enclosure, digits: int) -> Enclosure:
    if isinstance(level, Fraction):
        return Enclosure(*sorted((level * mean.lower, level * mean.upper)))
    from verify.arithmetic.ball import balls, to_enclosure

    with balls(4 * digits + 256) as A:
        return to_enclosure(A.real(level) * A.interval(mean))
