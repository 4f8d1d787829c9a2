"""The review memo: one section for each row that does not agree, and the ledger of the derivation; Markdown or HTML."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from itertools import islice
from typing import TYPE_CHECKING, Any

from verify.problem.numbers import exact_text
from verify.report.memo_blocks import Block, Heading, Items, Paragraph, Rows
from verify.report.review_text import between, tally
from verify.report.text import CAUTION, law_line
from verify.review.record import kind_of, summary_of

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.problem.casefile import Case

MOST_SECTIONS = 1000
WORDS = {
    "agrees": "agrees to the digits printed",
    "last digit": "agrees but for the last digit",
    "differs": "differs",
    "refuted": "is refuted: the derivation itself is wrong",
    "undecided": "stayed undecided",
    "unusable": "could not be used",
}
KEPT = {True: "the level is kept", False: "the level is exceeded", None: "whether the level is kept stayed open"}


@dataclass(frozen=True)
class Memo:
    """What a memo says.

    Attributes
    ----------
    case : Case
        The case file.
    table : str
        Name of the table; empty for the claim of the case file.
    derivations : list
        The derivations that the rows lean on, with the name of their case.
    version : str
        Of this program.
    """

    case: Case
    table: str
    version: str
    derivations: list[tuple[str, Derivation]] = field(default_factory=list)

    def blocks(self, records: list[dict[str, Any]] | Any) -> Iterable[Block]:
        """Yield the memo; ``records`` is called (or read) twice, once to count and once to write."""
        counts, _, _ = tally(records(), 0)
        unequal = (record for record in records() if kind_of(record) != "agrees")
        yield Heading(1, f"Review memo: {self.case.title or self.case.name}")
        yield from self._opening(summary_of(counts))
        number = 0
        for number, record in enumerate(islice(unequal, MOST_SECTIONS), start=1):
            if number == 1:
                yield Heading(2, "Rows that need attention" if self.table else "The claim")
            yield from row_section(record, whole=bool(self.table))
        if number == 0:
            yield Heading(2, "Findings")
            yield Paragraph("Every printed number agrees with the proved one to the digits printed. Nothing needs attention.")
        elif counts.total() - counts["agrees"] > MOST_SECTIONS:
            yield Paragraph(f"Only the first {MOST_SECTIONS} such rows are written out; the annotated table has all of them.")
        for name, derivation in self.derivations:
            yield from ledger(name, derivation)
        yield from self._closing()

    def _opening(self, summary: str) -> Iterable[Block]:
        what = f"the table {self.table}" if self.table else f"the claim in {self.case.name}"
        yield Paragraph(
            f"Under review: {what}. Every cutoff and fraction was recomputed from the density in exact and ball arithmetic; a right number "
            "is quoted only with digits that are proved. A number agrees when it is the right one, correctly rounded to the "
            "digits printed."
        )
        yield Paragraph(f"Result. {summary}.", strong=True)

    def _closing(self) -> Iterable[Block]:
        yield Heading(2, "How to read this memo")
        yield Items(
            [
                "The size is the largest probability of rejection over the whole null, not only at its limits; where it lies is stated.",
                "Power lost is the power of the best test less that of the printed one at the parameter value stated; a negative loss "
                "is power that was bought with the level.",
                "A slip is named only when recomputing under it gives every printed number of the row. Several may fit the same row.",
            ]
        )
        yield Paragraph(CAUTION.replace("This text", "This memo"))
        yield Paragraph(f"Prepared with sidecheck {self.version}; case file {self.case.name}, SHA-256 {self.case.sha256}.")
        yield Paragraph("Reviewed by: ____________________    Date: ____________________")


def row_section(record: dict[str, Any], *, whole: bool = True) -> Iterable[Block]:
    """Yield the section of one row."""
    kind = kind_of(record)
    if whole:
        name = f"Row {record['row']}" + (f" ({record['id']})" if record["id"] else "")
        yield Heading(3, f"{name} {WORDS[kind]}")
    else:
        yield Paragraph(f"The claim {WORDS[kind]}.", strong=True)
    if record["error"] is not None:
        yield Paragraph(f"The row was passed over: {record['error']}.")
        return
    yield Paragraph(_question(record))
    if record["claimed"] and record["correct_printed"]:
        yield Rows(["", "printed", "right", "proved"], _number_rows(record))
    if record["because"]:
        yield Paragraph(" ".join(record["because"]))
    if record["consequences"]:
        yield Paragraph(_consequences(record["consequences"]))
    if record["notes"]:
        yield Items([_sentence(note) for note in record["notes"]])


def _question(record: dict[str, Any]) -> str:
    level = " and ".join(record["alpha"])
    about = f" (case {record['case']})" if record["case"] else ""
    return f"Null: {record['null']}; level {level}; n = {record['n']}{about}." if record["null"] else "No hypothesis is stated."


def _number_rows(record: dict[str, Any]) -> list[list[str]]:
    rows = []
    for name, printed in record["claimed"].items():
        right = record["correct_printed"].get(name, "none")
        ends = (record["correct"] or {}).get(name)
        mark = " (wrong)" if name in record["off"] and record["verdict"] != "last digit" else ""
        flag = " (binary cell)" if name in record["binary"] else ""
        rows.append([name, printed + mark + flag, right, _proved(ends)])
    return rows


def _proved(ends: dict[str, str] | None) -> str:
    if ends is None:
        return ""
    return f"{ends['lower']} exactly" if ends["lower"] == ends["upper"] else between(ends, 16)


def _consequences(result: dict[str, Any]) -> str:
    parts = []
    for e in result["expectations"]:
        what = "rejection probability" if e["of"] == "phi" else "moment E[(V - EV) phi]"
        parts.append(f"at {e['at']} its {what} is {between(e['expectation'])} where {e['target']} is right")
    text = "As printed, the test has these properties: " + "; ".join(parts) + "."
    if result["size"]:
        text += f" Its true size over the whole null is {between(result['size'])}, at {result['size_at']}: {KEPT[result['level_kept']]}."
    if result["power_lost"]:
        gain = result["power_lost"]["upper"].startswith("-")
        verb = "It has more power than the best test of this level by" if gain else "Against the best test it loses"
        lost = {"lower": result["power_lost"]["upper"][1:], "upper": result["power_lost"]["lower"][1:]} if gain else result["power_lost"]
        text += f" {verb} {between(lost, 4)} at {result['power_lost_at']}, where the best test has power {between(result['best_power'], 6)}."
    return text


def _sentence(text: str) -> str:
    return text[:1].upper() + text[1:] + ("" if text.endswith(".") else ".")


def ledger(name: str, derivation: Derivation) -> Iterable[Block]:
    """Yield the derivation of one density, step by step with its grade."""
    density = derivation.density
    yield Heading(2, f"Derivation: {name}" if name else "Derivation")
    given = density.formula or density.kernel or "a table of weights"
    yield Paragraph(f"Density of one observation: {given}, {density.variable} in {density.support}, {density.parameter} in {density.space}.")
    if derivation.natural_parameter is not None:
        yield Paragraph(
            f"Natural parameter {exact_text(derivation.natural_parameter)}, statistic {exact_text(derivation.statistic)}. "
            + (law_line(derivation.family, None) + "." if derivation.family else "")
        )
    yield Rows(["step", "grade", "what was shown"], [[step.name, step.grade.value, _shown(step)] for step in derivation.steps])


def _shown(step: Any) -> str:
    text = _sentence(step.statement)
    text += f" By: {step.reason}." if step.reason else ""
    return text + (f" Witness: {step.witness}." if step.witness else "")
