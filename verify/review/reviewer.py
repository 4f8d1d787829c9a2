"""Review rows: one derivation a density, the settings of recent problems kept, one bad row reported and
passed over.
"""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING

from verify.derivation.derive import derive
from verify.derivation.ledger import MONOTONICITY, Grade
from verify.errors import InputError, UndecidedError
from verify.problem.casefile import SUFFIX, Case, read_case
from verify.problem.hypothesis import Form
from verify.problem.keys import NUMBER_NAMES
from verify.problem.problem import Problem
from verify.review.cells import Cell, Kind
from verify.review.judge import Options
from verify.review.mapping import style_from
from verify.review.printed import digits_wanted, read_printed
from verify.review.record import Record, record_of, unusable
from verify.review.review import (
    DERIVATION_KEYS,
    STYLE_KEYS,
    derivation_verdict,
    printed_numbers,
    review_numbers,
)
from verify.review.setting import Cache, Setting

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.problem.numbers import Exact

SETTINGS_KEPT = 512
CASES_KEPT = 64


class Reviewer:
    """Reviews the claims of one case file and the rows of its tables.

    Parameters
    ----------
    case : Case
        The case file, read.
    digits : int
        Significant digits to prove.
    budget : float
        Seconds for each symbolic step.
    folder : Path
        Where the case files lie that a column names.
    """

    def __init__(self, case: Case, *, digits: int, budget: float = 10.0, folder: Path | None = None) -> None:
        self.case, self.digits, self.budget = case, digits, budget
        self.folder = folder or Path(case.path).parent
        self.cases: Cache[str, Case] = Cache(CASES_KEPT)
        self.derivations: Cache[tuple[str, tuple[Exact, ...]], Derivation] = Cache(CASES_KEPT)
        self.settings: Cache[tuple[str, ...], Setting] = Cache(SETTINGS_KEPT)

    def claim(self) -> Record:
        """Review the table ``[claim]`` of the case file."""
        case, claim = self.case, self.case.claim
        if case.problem is None:
            return record_of(derivation_verdict(self.derivation(case), None), digits=self.digits)
        try:
            numbers = printed_numbers({key: claim.get(key) for key in NUMBER_NAMES})
            digits = digits_wanted(numbers.values(), self.digits)
            setting = Setting(case.problem, self.derivation(case, case.problem), digits)
            verdict = review_numbers(setting, numbers, style_from(claim), claim, Options())
        except InputError as error:
            raise error.at(key="claim", file=case.path) from None
        return record_of(verdict, digits=self.digits, name=case.name, case=case.name)

    def row(self, number: int, fields: Mapping[str, Cell], style: Mapping[str, str]) -> Record:
        """Review one row; a row that cannot be used gives a record that says why."""
        name = fields["id"].text if "id" in fields else ""
        case = fields["case"].text if "case" in fields else self.case.name
        try:
            return self._row(number, name, fields, style)
        except (InputError, UndecidedError) as error:
            return unusable(number, name, case, str(error))

    def _row(self, number: int, name: str, fields: Mapping[str, Cell], style: Mapping[str, str]) -> Record:
        words = {key: cell.usable(key) for key, cell in fields.items()}
        case = self.case_named(words.get("case", ""))
        numbers = {
            key: read_printed(words[key], key, binary=fields[key].kind is Kind.BINARY)
            for key in NUMBER_NAMES
            if key in words
        }
        setting = self._setting(case, words, digits_wanted(numbers.values(), self.digits))
        if not numbers:
            raise InputError("no cutoff is printed", "give c1 and c2, or c", key="row")
        how = style_from({**{key: words[key] for key in STYLE_KEYS if key in words}, **style})
        verdict = review_numbers(setting, numbers, how, case.claim, Options(loss=False))
        return record_of(verdict, digits=self.digits, row=number, name=name, case=case.name)

    def case_named(self, name: str) -> Case:
        """Return the case of that name; the main one for no name or its own.

        Raises
        ------
        InputError
            When there is none.
        """
        if not name or name == self.case.name:
            return self.case
        return self.cases.get(name, lambda: read_case(self._case_path(name)))

    def _case_path(self, name: str) -> Path:
        plain = name if name.endswith(SUFFIX) else name + SUFFIX
        places = [self.folder / plain, Path(self.case.path).parent / plain]
        found = next((place for place in places if place.is_file()), None)
        if found is None:
            raise InputError(f"there is no case file {plain[:80]}", f"looked in {self.folder}", key="case")
        return found

    def derivation(self, case: Case, problem: Problem | None = None) -> Derivation:
        """Return the derivation of a case's density, made once; once for each problem where monotonicity is
        shown on its limits only.
        """
        claim = {key: text for key, text in case.claim.items() if key in DERIVATION_KEYS}
        base = problem or case.problem
        limits = case.problem.hypothesis.limits if case.problem else ()

        def make(chosen: tuple[Exact, ...]) -> Derivation:
            n = base.n if base and claim.get("law") else None
            return derive(case.density, limits=chosen, claim=claim, n=n, budget=self.budget)

        found = self.derivations.get((case.path, limits), lambda: make(limits))
        step = found.step(MONOTONICITY)
        if problem is None or problem.hypothesis.limits == limits or step is None or step.grade is Grade.PROVED:
            return found
        wanted = problem.hypothesis.limits
        return self.derivations.get((case.path, wanted), lambda: make(wanted))

    def _setting(self, case: Case, words: Mapping[str, str], digits: int) -> Setting:
        keys = ("null", "lower", "upper", "alpha", "n", "region")
        key = (case.path, str(digits), *(words.get(key, "") for key in keys))

        def make() -> Setting:
            problem = problem_of(case, words)
            return Setting(problem, self.derivation(case, problem), digits)

        return self.settings.get(key, make)


def problem_of(case: Case, words: Mapping[str, str]) -> Problem:
    """Return the problem of a row: the case's own, with what the row says put in its place."""
    if not {"null", "lower", "upper", "alpha", "n"} & words.keys():
        return case.require_problem()
    own = case.problem
    null = words.get("null") or _null_of_limits(case, words) or (own.null if own else "")
    alpha = _levels(words["alpha"]) if "alpha" in words else (own.alpha if own else "")
    n = words.get("n") or (own.n if own else "")
    for key, value in (("null", null), ("alpha", alpha), ("n", n)):
        if value == "":
            raise InputError(
                f"{key} is given neither in the row nor in [problem]",
                f"add a column or [problem] {key}",
                key=key,
            )
    return Problem(case.density, null, alpha, n)  # type: ignore[arg-type]


def _levels(text: str) -> str | tuple[str, ...]:
    parts = tuple(part.strip() for part in text.replace(" and ", ";").split(";"))
    return parts if len(parts) > 1 else text


def _null_of_limits(case: Case, words: Mapping[str, str]) -> str:
    """Write the null from the columns of its limits, in the form of the case's own null.

    Without a ``[problem]``, two limits are those of an outside null, or of an interval null where the
    region is accepted inside.
    """
    low, high, t = words.get("lower"), words.get("upper"), case.density.parameter
    if low is None and high is None:
        return ""
    form = case.problem.hypothesis.form if case.problem else None
    if form in (Form.ONE_SIDED, Form.POINT) or low is None or high is None:
        return _one_limit(case, low or high or "", both=low is not None and high is not None and low != high)
    if low == high:
        return f"{t} = {low}"
    interval = form is Form.INTERVAL or (form is None and words.get("region") == "accept inside")
    return f"{low} <= {t} <= {high}" if interval else f"{t} <= {low} or {t} >= {high}"


def _one_limit(case: Case, limit: str, *, both: bool) -> str:
    problem, t = case.problem, case.density.parameter
    if problem is None or problem.hypothesis.form in (Form.OUTSIDE, Form.INTERVAL) or both:
        raise InputError(
            "one limit where the null has two, or two where it has one",
            "write the null out in a column null",
            key="null",
        )
    if problem.hypothesis.form is Form.POINT:
        return f"{t} = {limit}"
    return f"{t} <= {limit}" if problem.hypothesis.null_below else f"{t} >= {limit}"
