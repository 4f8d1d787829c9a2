"""The review memo: a section for each row that does not agree, and the ledger of the derivation.

It is written as Markdown or HTML by :mod:`verify.report.memo_blocks`.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from itertools import islice
from typing import TYPE_CHECKING, Any

from verify.problem.numbers import exact_text
from verify.report.memo_blocks import Block, Heading, Items, Paragraph, Rows
from verify.report.memo_row import row_section, row_title
from verify.report.review_text import tally
from verify.report.review_words import sentence
from verify.report.text import CAUTION, law_line
from verify.review.record import kind_of, summary_of

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.derivation.ledger import Step
    from verify.problem.casefile import Case

MOST_SECTIONS = 1000
MOST_OVERVIEW = 100
Records = Callable[[], Iterable[dict[str, Any]]]

METHOD = (
    "Every cutoff and fraction was recomputed from the density in exact and ball arithmetic; a right number "
    "is quoted only with digits that are proved. A number agrees when it is the right one, correctly rounded "
    "to the digits printed."
)
READING = (
    "The size is the largest probability of rejection over the whole null, not only at its limits; where it "
    "lies is stated.",
    "Power lost is the power of the best test less that of the printed one, at the parameter value stated. "
    "More power than the best test has is bought by exceeding the level.",
    "A slip is named only when recomputing under it gives every printed number of the row. Several may fit "
    "the same row.",
)


@dataclass(frozen=True)
class Memo:
    """What a memo says.

    Attributes
    ----------
    case : Case
        The case file.
    table : str
        Name of the table; empty for the claim of the case file.
    version : str
        Of this program.
    derivations : list
        The derivations that the rows lean on, with the name of their case.
    """

    case: Case
    table: str
    version: str
    derivations: list[tuple[str, Derivation]] = field(default_factory=list)

    def blocks(self, records: Records) -> Iterable[Block]:
        """Yield the memo; ``records`` is called more than once, so that no row has to be kept."""
        counts, unequal, _ = tally(records(), MOST_OVERVIEW, only_unequal=True)
        yield Heading(1, f"Review memo: {self.case.title or self.case.name}")
        what = f"the table {self.table}" if self.table else f"the claim in {self.case.name}"
        yield Paragraph(f"Under review: {what}. {METHOD}")
        yield Paragraph(f"Result. {summary_of(counts)}.", strong=True)
        if self.table and unequal:
            yield Rows(["row", "verdict", "reason found"], [_overview(record) for record in unequal])
        yield from self._sections(records, counts)
        for name, derivation in self.derivations:
            yield from ledger(name, derivation)
        yield from self._closing()

    def _sections(self, records: Records, counts: Counter[str]) -> Iterable[Block]:
        number = counts.total() - counts["agrees"]
        if number == 0:
            yield Heading(2, "Findings")
            yield Paragraph(
                "Every printed number agrees with the proved one to the digits printed. Nothing needs attention."
            )
            return
        yield Heading(2, "Rows that need attention" if self.table else "The claim")
        unequal = (record for record in records() if kind_of(record) != "agrees")
        for record in islice(unequal, MOST_SECTIONS):
            yield from row_section(record, whole=bool(self.table))
        if number > MOST_SECTIONS:
            yield Paragraph(
                f"Only the first {MOST_SECTIONS} such rows are written out; the annotated table has all of them."
            )

    def _closing(self) -> Iterable[Block]:
        yield Heading(2, "How to read this memo")
        yield Items(READING)
        yield Paragraph(CAUTION.replace("This text", "This memo"))
        yield Paragraph(
            f"Prepared with sidecheck {self.version}; case file {self.case.name}, SHA-256 {self.case.sha256}."
        )
        yield Paragraph("Reviewed by: ____________________    Date: ____________________")


def _overview(record: dict[str, Any]) -> list[str]:
    reason = ", ".join(record["slips"]) or ("passed over" if record["error"] is not None else "no slip found")
    return [row_title(record), kind_of(record), reason]


def ledger(name: str, derivation: Derivation) -> Iterable[Block]:
    """Yield the derivation of one density, step by step with its grade."""
    density = derivation.density
    x, t = density.variable, density.parameter
    yield Heading(2, f"Derivation: {name}" if name else "Derivation")
    given = density.formula or density.kernel or "a table of weights"
    known = ", ".join(f"{key} = {value}" for key, value in density.constants.items())
    yield Paragraph(
        f"Density of one observation: f({x}; {t}) = {given}, {x} in {density.support}; {density.space}"
        + (f"; known: {known}." if known else ".")
    )
    if derivation.natural_parameter is not None:
        law = f" {law_line(derivation.family, None)}." if derivation.family else ""
        yield Paragraph(
            f"Natural parameter Q({t}) = {exact_text(derivation.natural_parameter)}; "
            f"statistic T({x}) = {exact_text(derivation.statistic)}.{law}"
        )
    rows = [[step.name, step.grade.value, _shown(step)] for step in derivation.steps]
    yield Rows(["step", "grade", "what was shown"], rows)


def _shown(step: Step) -> str:
    text = sentence(step.statement)
    text += f" By: {step.reason}." if step.reason else ""
    return text + (f" Witness: {step.witness}." if step.witness else "")
