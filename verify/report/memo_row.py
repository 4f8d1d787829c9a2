"""The section of a memo about one row: what was asked, printed and right, why, and what follows."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from verify.report.memo_blocks import Block, Heading, Items, Paragraph, Rows
from verify.report.review_words import between, consequence_sentences, sentence
from verify.review.record import kind_of, plain

WORDS = {
    "agrees": "agrees to the digits printed",
    "last digit": "agrees but for the last digit",
    "differs": "differs",
    "refuted": "is refuted: the derivation itself is wrong",
    "undecided": "stayed undecided",
    "unusable": "could not be used",
}


def row_title(record: dict[str, Any]) -> str:
    """Return how a row is called."""
    return f"Row {record['row']}" + (f" ({record['id']})" if record["id"] else "")


def row_section(record: dict[str, Any], *, whole: bool = True) -> Iterable[Block]:
    """Yield the section of one row; of the only claim without a heading of its own."""
    words = WORDS[kind_of(record)]
    yield (Heading(3, f"{row_title(record)} {words}") if whole else Paragraph(f"The claim {words}.", strong=True))
    if record["error"] is not None:
        yield Paragraph(f"The row was passed over: {record['error']}.")
        return
    yield Paragraph(_question(record))
    if record["claimed"] and record["correct_printed"]:
        yield Rows(["", "printed", "right", "", "right to more digits (proved)"], _number_rows(record))
    if record["because"]:
        yield Paragraph(" ".join(record["because"]))
    if record["consequences"]:
        yield Paragraph(" ".join(consequence_sentences(record["consequences"], record["parameter"])))
    if record["notes"]:
        yield Items([sentence(note) for note in record["notes"]])


def _question(record: dict[str, Any]) -> str:
    if not record["null"]:
        return "No hypothesis is stated."
    level = " and ".join(dict.fromkeys(map(plain, record["alpha"])))
    about = f" (case {record['case']})" if record["case"] else ""
    return f"Null: {record['null']}; level {level}; n = {record['n']}{about}."


def _number_rows(record: dict[str, Any]) -> list[list[str]]:
    rows = []
    for name, printed in record["claimed"].items():
        remark = "wrong" if name in record["off"] else ""
        remark = "last digit" if remark and record["verdict"] == "last digit" else remark
        flag = " (binary cell)" if name in record["binary"] else ""
        right = record["correct_printed"].get(name, "none")
        rows.append([name, printed + flag, right, remark, _proved(record["correct_reported"].get(name))])
    for name, right in record["correct_printed"].items():
        if name not in record["claimed"]:
            rows.append([name, "not printed", right, "", _proved(record["correct_reported"].get(name))])
    return rows


def _proved(ends: dict[str, str] | None) -> str:
    if ends is None:
        return ""
    return f"{ends['lower']} exactly" if ends["lower"] == ends["upper"] else between(ends, 16)
