"""The overview page of a bundle: one row a certificate, with the way to its page."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping
from typing import Any

from verify.report.math_boxes import relation, row
from verify.report.page_blocks import (
    Block,
    Break,
    Code,
    Commands,
    Link,
    Math,
    Page,
    Paragraph,
    Run,
    Runs,
    Section,
    Table,
    Text,
    words,
)  # fmt: skip
from verify.report.page_numbers import NAMES, box_of, numbers_of
from verify.report.page_question import names_of
from verify.report.page_recheck import RECHECK, recheck_digest
from verify.report.prose import formula, prose


def overview_page(certificates: Mapping[str, bytes]) -> Page:
    """Build the overview.

    Parameters
    ----------
    certificates : mapping
        Name without ``.cert.json`` -> bytes of the certificate. It serves to find one's way; each certificate
        is rechecked alone.
    """
    rows, digests, issued = [], [], set()
    for key, data in sorted(certificates.items()):
        statement = json.loads(data)
        digest = hashlib.sha256(data).hexdigest()
        rows.append(_row(key, statement["predicate"]))
        digests.append([(Code(f"{key}.cert.json"),), (Code(digest),)])
        issued.add(statement["predicate"]["issued"])
    digests.append([(Code(RECHECK),), (Code(recheck_digest()),)])
    count = len(rows)
    facts: list[tuple[str, Runs]] = [("Certificates", words(str(count)))]
    date = issued.pop() if len(issued) == 1 else ""
    facts += [("Issued", words(date))] if date else []
    head = tuple(
        words(text)
        for text in ("Certificate", "Null hypothesis", "Law, level, n", "Cutoffs and fractions", "Grade, digits")
    )
    listed = Table(head, rows, (7, 6, 6, 8, 5))
    recheck: list[Block] = [
        Paragraph(
            words("From the folder that holds these files, on any Python of version 3.11 or later, without packages:"),
            "intro",
        ),
        Commands(
            (
                "sha256sum -c SHA256SUMS",
                *(f"python -I -S {RECHECK} {key}.cert.json" for key in sorted(certificates)[:1]),
            )
        ),
        Paragraph(
            words(
                "and so on for each certificate. Exit status 0 means accepted, 4 accepted with the numbers on "
                "trust; each page says more."
            ),
            "small",
        ),
        Table((words("File"), words("SHA-256")), digests, (6, 12), "Digests"),
    ]
    return Page(
        "Overview of the bundle",
        "Precision certificates of optimal tests",
        facts,
        (Section("Certificates", [listed, Paragraph(words(TRUST), "small")]), Section("How to recheck them", recheck)),
        hashlib.sha256(
            "".join(
                f"{hashlib.sha256(certificates[key]).hexdigest()}  {key}\n" for key in sorted(certificates)
            ).encode()
        ).hexdigest(),
        date,
    )


TRUST = (
    "Numbers are cut to ten digits here. “Agrees to” is the least number of significant digits to which double "
    "precision agrees with the certified numbers. "
    "At the foot: SHA-256 of the list of digests and names."
)


def _row(key: str, predicate: dict[str, Any]) -> list[Runs]:
    problem, law = predicate["problem"], predicate["law"]
    levels = list(dict.fromkeys(problem["alpha"]))
    level: list[Run] = []
    for place, text in enumerate(levels):
        level += [Text(" and " if place else ""), *formula(text)]
    numbers: list[Run] = []
    for place, (which, value) in enumerate(numbers_of(predicate["test"]).items()):
        numbers += [Break()] if place else []
        numbers.append(Math(row(NAMES[which], relation("="), box_of(value))))
    found = [d for opinion in predicate["double_precision"]["opinions"] for d in opinion["digits"].values()]
    agrees = f"agrees to {min(found)}" if found else "no opinion"
    title: tuple[Run, ...] = (Break(), Text(problem["title"])) if problem["title"] else ()
    return [
        (Link(key, f"{key}.html"), *title),
        prose(problem["null"], names_of(predicate)),
        (Text(law["name"]), Break(), Text("level "), *level, Break(), Text(f"n = {problem['n']}")),
        tuple(numbers),
        (
            Text(predicate["derivation"]["grade"], strong=True),
            Break(),
            Text(f"{problem['digits']} digits"),
            Break(),
            Text(agrees),
        ),
    ]
