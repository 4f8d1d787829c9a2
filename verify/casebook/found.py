"""What a run of one case finds: the facts that ``[expect]`` can name."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import lru_cache
from typing import TYPE_CHECKING

from verify.derivation.derive import derive
from verify.derivation.ledger import Grade, weakest
from verify.errors import InputError, UndecidedError
from verify.memory import solver
from verify.problem.casefile import Case, CaseText
from verify.problem.keys import NUMBER_NAMES
from verify.review.judge import Options
from verify.review.mapping import style_from
from verify.review.printed import read_printed
from verify.review.review import DERIVATION_KEYS, review_numbers
from verify.review.setting import Setting

if TYPE_CHECKING:
    from verify.arithmetic.enclosure import Enclosure
    from verify.derivation.derive import Derivation
    from verify.derivation.ledger import Step
    from verify.problem.density import Density
    from verify.problem.numbers import Exact
    from verify.solution.solve import Solution

DIGITS = 30
SPARE = 5
"""Digits proved beyond the longest number that a case prints."""
UNUSABLE = "unusable"
STATUS = {"differs": 1, "refuted": 1, UNUSABLE: 2, "undecided": 3}
"""Exit status that goes with a verdict; 0 for the others."""


@dataclass(frozen=True)
class Found:
    """The facts of one run.

    Attributes
    ----------
    verdict : str
        ``proved``, ``enclosed`` or ``checked numerically`` where no claim is judged; ``agrees``, ``last digit`` or
        ``differs`` for a claim; ``refuted``, ``undecided``, ``unusable`` for both.
    grade : str
        The weakest grade of the derivation and the solution, the claims aside.
    form, law, law_text, natural_parameter, statistic : str
        As derived; empty where it did not come so far.
    weak : tuple of (str, str)
        The steps that are refuted or open, each with its witness or reason.
    numbers : dict
        The proven cutoffs and fractions.
    slips, flags : tuple of str
        Names of the slips that reproduce the claim, and kinds of the warnings about double precision.
    notes : tuple of str
        Why it is refuted, open or unusable, and other remarks.
    error, key : str
        The complaint about an input that cannot be used, and the key it is about.
    """

    verdict: str
    grade: str = ""
    form: str = ""
    law: str = ""
    law_text: str = ""
    natural_parameter: str = ""
    statistic: str = ""
    weak: tuple[tuple[str, str], ...] = ()
    numbers: Mapping[str, Enclosure] = field(default_factory=dict)
    slips: tuple[str, ...] = ()
    flags: tuple[str, ...] = ()
    notes: tuple[str, ...] = ()
    error: str = ""
    key: str = ""

    @property
    def status(self) -> int:
        """The exit status that goes with the verdict."""
        return STATUS.get(self.verdict, 0)


def find(text: CaseText, *, digits: int = DIGITS, budget: float = 10.0, cache: str | None = None) -> Found:
    """Run one case as far as it goes: derive, solve (with a memory in the directory ``cache``), review the claim.

    Double precision is asked only where ``[expect]`` names flags. An input that cannot be used, and a question
    left open, are facts like any other.
    """
    try:
        case = text.read()
        return _found(case, max(digits, _longest(case) + SPARE), budget, cache)
    except InputError as error:
        line = str(error.at(file=text.path))
        return Found(UNUSABLE, error=line, key=error.key, notes=(line,))
    except UndecidedError as error:
        return Found("undecided", grade="undecided", notes=(str(error),))


def _longest(case: Case) -> int:
    """Most digits that a number of ``[claim]`` or ``[expect]`` prints."""
    texts = [str(table[key]) for table in (case.claim, case.expect) for key in NUMBER_NAMES if key in table]
    return max((sum(letter.isdigit() for letter in text) for text in texts if "/" not in text), default=0)


def _found(case: Case, digits: int, budget: float, cache: str | None) -> Found:
    derivation = derivation_of(case, budget)
    facts = _derived_facts(derivation)
    if case.problem is None or not derivation.carries_numbers:
        return _derivation_alone(case, derivation, facts)
    solution = solver(cache)(case.problem, digits, derivation)
    grade = weakest([derivation.footing, solution.numbers_grade])
    facts = replace(
        facts,
        verdict=grade.value,
        grade=grade.value,
        form=solution.form.value,
        numbers=solution.numbers,
        flags=_flags(solution) if "flags" in case.expect else (),
    )
    claimed = any(key in case.claim for key in (*NUMBER_NAMES, *DERIVATION_KEYS))
    if not claimed:
        return facts
    return _reviewed(case, setting_of(solution), facts)


def setting_of(solution: Solution) -> Setting:
    """Return the setting in which claims about a solved problem are judged."""
    return Setting(solution.problem, solution.derivation, solution.digits, {"right": solution.critical})


def _derived_facts(derivation: Derivation) -> Found:
    family = derivation.family
    return Found(
        "",
        law="" if family is None else family.law.name,
        law_text=derivation.law,
        natural_parameter=_text(derivation.natural_parameter),
        statistic=_text(derivation.statistic),
        weak=tuple((step.name, step.witness or step.reason or step.statement) for step in _weak(derivation)),
    )


def _derivation_alone(case: Case, derivation: Derivation, facts: Found) -> Found:
    """A case without numbers: it asks for none, or the derivation carries none."""
    grade = derivation.footing
    if derivation.family is None and grade is not Grade.REFUTED:
        grade = Grade.UNDECIDED
    whole = weakest([grade, derivation.grade])
    firm = whole not in (Grade.REFUTED, Grade.UNDECIDED)
    verdict = "agrees" if firm and case.claim else whole.value
    return replace(facts, verdict=verdict, grade=grade.value, notes=tuple(map(str, _weak(derivation))))


def _reviewed(case: Case, setting: Setting, facts: Found) -> Found:
    """Judge the claim, leaning on the solution that is proved already."""
    numbers = {key: read_printed(case.claim[key], key) for key in NUMBER_NAMES if key in case.claim}
    try:
        verdict = review_numbers(setting, numbers, style_from(case.claim), case.claim, Options(loss=False))
    except InputError as error:
        raise error.at(key="claim", file=case.path) from None
    right, said = verdict.correct_printed, verdict.claim.numbers if verdict.claim else {}
    off = (f"{name} is printed as {said[name].text}, right is {right[name]}" for name in verdict.off if name in right)
    notes = (*off, *(slip.sentence[:-1] for slip in verdict.slips), *verdict.notes)
    return replace(facts, verdict=verdict.verdict, slips=tuple(slip.name for slip in verdict.slips), notes=notes)


def _weak(derivation: Derivation) -> list[Step]:
    return [step for step in derivation.steps if step.grade in (Grade.REFUTED, Grade.UNDECIDED)]


def _flags(solution: Solution) -> tuple[str, ...]:
    from verify.comparison.compare import compare

    return tuple(dict.fromkeys(flag.kind for flag in compare(solution).flags))


def _text(expr: object) -> str:
    return "" if expr is None else str(expr)


def derivation_of(case: Case, budget: float) -> Derivation:
    """Return the derivation of a case; cases with the same density, limits and claim share one."""
    problem = case.problem
    claim = tuple(sorted((key, case.claim[key]) for key in DERIVATION_KEYS if key in case.claim))
    limits = problem.hypothesis.limits if problem else ()
    return _derived(case.density, limits, claim, problem.n if problem and claim else None, budget)


@lru_cache(maxsize=128)
def _derived(
    density: Density, limits: tuple[Exact, ...], claim: tuple[tuple[str, str], ...], n: int | None, budget: float
) -> Derivation:
    return derive(density, limits=limits, claim=dict(claim), n=n, budget=budget)
