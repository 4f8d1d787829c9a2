"""Review one claim: the colleague's derivation and printed numbers, confirmed or refuted with the reason."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from decimal import Decimal
from fractions import Fraction
from typing import TYPE_CHECKING

from verify.derivation.ledger import Grade
from verify.review.claim import read_claim
from verify.review.judge import Options, judge
from verify.review.printed import Printed, digits_wanted, read_printed
from verify.review.setting import Setting
from verify.review.statistic import styled
from verify.review.style import Style
from verify.review.verdict import Outcome, Verdict

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.problem.problem import Problem

DERIVATION_KEYS = ("natural_parameter", "statistic", "law")
STYLE_KEYS = ("reported_as", "window", "region", "fractions")
Given = str | int | Fraction | Decimal | None


def review(
    problem: Problem,
    *,
    c1: Given = None,
    c2: Given = None,
    gamma1: Given = None,
    gamma2: Given = None,
    c: Given = None,
    gamma: Given = None,
    style: Style | None = None,
    claim: Mapping[str, str] | None = None,
    derivation: Derivation | None = None,
    digits: int = 50,
    budget: float = 10.0,
) -> Verdict:
    """Judge a claim about a problem.

    Parameters
    ----------
    problem : Problem
        What the claim is about.
    c1, c2, gamma1, gamma2 : text or exact number, optional
        Printed cutoffs and fractions of a two-sided test. The digits printed count: "0.320" claims more
        than "0.32".
    c, gamma : text or exact number, optional
        The same of a one-sided test.
    style : Style, optional
        How the numbers are reported; by default the cutoffs of the sum, with the fractions of rejection
        there.
    claim : mapping, optional
        The colleague's own ``natural_parameter``, ``statistic`` and ``law``.
    derivation : Derivation, optional
        A derivation of the same density with the same claim, when known.
    digits : int
        Significant digits to prove, from 15.
    budget : float
        Seconds for each symbolic step.

    Returns
    -------
    Verdict

    Raises
    ------
    InputError
        When the printed numbers do not describe a test of this form.

    Examples
    --------
    >>> from verify import Density, Problem, review
    >>> density = Density("exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0",
    ...                   parameter="lam", space="lam > 0")
    >>> problem = Problem(density, null="lam <= 8 or lam >= 12", alpha="0.05", n=10)
    >>> verdict = review(problem, c1="94", c2="103", gamma1="0.515", gamma2="0.087")
    >>> verdict.verdict, [slip.name for slip in verdict.slips], verdict.correct_printed["gamma1"]
    ('differs', ['fractions-exchanged'], '0.087')
    """
    said = {key: text for key, text in (claim or {}).items() if key in DERIVATION_KEYS}
    if derivation is None:
        from verify.derivation.derive import derive

        derivation = derive(problem.density, limits=problem.hypothesis.limits, claim=said, n=problem.n, budget=budget)
    given = {"c1": c1, "c2": c2, "gamma1": gamma1, "gamma2": gamma2, "c": c, "gamma": gamma}
    numbers = printed_numbers(given)
    setting = Setting(problem, derivation, digits_wanted(numbers.values(), digits))
    return review_numbers(setting, numbers, style or Style(), said, Options())


def printed_numbers(given: Mapping[str, Given]) -> dict[str, Printed]:
    """Read the numbers that are not blank."""
    present = {name: value for name, value in given.items() if value is not None and str(value).strip() != ""}
    return {name: read_printed(value, name) for name, value in present.items() if value is not None}


def review_numbers(
    setting: Setting, numbers: Mapping[str, Printed], style: Style, said: Mapping[str, str], options: Options
) -> Verdict:
    """Judge printed numbers in a setting; without any, the derivation alone."""
    derivation = setting.derivation
    if not (numbers and derivation.carries_numbers):
        return derivation_verdict(derivation, setting.problem)
    style, remark = styled(style, said, derivation)
    verdict = judge(setting, read_claim(numbers, style, setting.form), options)
    return replace(verdict, notes=(*verdict.notes, remark)) if remark else verdict


def derivation_verdict(derivation: Derivation, problem: Problem | None) -> Verdict:
    """Judge a derivation without numbers."""
    outcome = {Grade.REFUTED: Outcome.REFUTED, Grade.UNDECIDED: Outcome.UNDECIDED}.get(derivation.grade, Outcome.AGREES)
    if outcome is Outcome.AGREES and derivation.family is None:
        outcome = Outcome.UNDECIDED
    weak = [step for step in derivation.steps if step.grade in (Grade.REFUTED, Grade.UNDECIDED)]
    notes = [
        f"{step.name}: {step.statement}" + (f" ({step.witness or step.reason})" if step.witness or step.reason else "")
        for step in weak
    ]
    if outcome is Outcome.AGREES:
        notes.append("no numbers are claimed: the derivation alone was judged")
    return Verdict(outcome, problem, None, derivation, notes=tuple(notes))
