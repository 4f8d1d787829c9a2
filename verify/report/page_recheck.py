"""The last sections: how to recheck, what is assumed, and who signs."""

from __future__ import annotations

import hashlib
from functools import cache
from pathlib import Path
from typing import Any

from verify.report.page_blocks import (
    Block,
    Code,
    Commands,
    Items,
    Paragraph,
    Runs,
    Section,
    Signatures,
    Table,
    Text,
    words,
)  # fmt: skip

RECHECK = "recheck.py"
STATUSES = (
    ("0", "accepted: every statement was confirmed, under the assumptions that the checker lists"),
    ("1", "rejected: a statement is false, or could not be shown"),
    ("2", "malformed: the file does not have the published form"),
    ("3", "undecided: checking would pass the resource limit"),
    ("4", "accepted, with the numbers themselves on trust (a law without a closed form)"),
)
CAUTIONS = (
    "This document records what one program stated and how it can be checked by another. It supports the "
    "documentation of software testing in the sense of "
    "ICH E9, section 5.8 (“Integrity of Data and Computer Software Validity”); it does not claim compliance "
    "with any regulation or guidance.",
    "Choosing the limits, the level and the design, and interpreting a result, belongs to qualified "
    "statisticians under the applicable guidance.",
    "The certificate is about the problem as stated in section 2. Whether observations are independent and "
    "follow that density is not examined here.",
    "Use of the fractions at the cutoffs means a randomised decision when the statistic equals a cutoff. A test "
    "that never rejects there has smaller expectations.",
    "The seal inside the certificate guards against slips, not against intent: compare the SHA-256 of the file "
    "with the one printed here.",
)
FRACTIONS = 3
"""Place of the caution that is only for tests with fractions."""


@cache
def rechecker() -> bytes:
    """Return the source of the rechecker, which is written beside every certificate."""
    return (Path(__file__).resolve().parent.parent / "certificate" / RECHECK).read_bytes()


def recheck_digest() -> str:
    """Return the SHA-256 of the rechecker."""
    return hashlib.sha256(rechecker()).hexdigest()


def recheck_section(name: str, digest: str, predicate: dict[str, Any]) -> Section:
    """Return the section on rechecking: commands that work in a folder that holds the certificate and the checker."""
    file, version = f"{name}.cert.json", predicate["versions"].get("sidecheck", "")
    trusted = predicate["law"]["name"].startswith("no closed form")
    expected = (
        "4, and a first line that begins with ACCEPTED" if trusted else "0, and a first line that begins with ACCEPTED"
    )
    checker = (
        f"`{RECHECK}` (issued beside this page; it is the file `verify/certificate/{RECHECK}` of sidecheck {version}"
    )
    needs = (
        f"You need `{file}`, {checker}, and anyone may write their own from the published rules), and any Python of "
        "version 3.11 or later. No package is needed, and nothing is fetched from a network. "
        "Put both files into one folder."
    )
    steps = (
        f"Compare the digests of the two files with those in the table below: `sha256sum {file} {RECHECK}` "
        f"(macOS: `shasum -a 256`; Windows: `certutil -hashfile {file} SHA256`).",
        f"Run the checker on a bare interpreter: `python -I -S {RECHECK} {file}` "
        "(on some systems the command is `python3`).",
        f"Expect exit status {expected} and then the digest of the certificate. It lists what is taken on trust.",
        f"To check that it is about a given case file, add `--case {name}.case.toml`.",
    )
    digests = Table(
        (words("File"), words("SHA-256")),
        [[(Code(file),), (Code(digest),)], [(Code(RECHECK),), (Code(recheck_digest()),)]],
        (5, 12),
        "Digests",
    )
    commands = (f"sha256sum {file} {RECHECK}", f"python -I -S {RECHECK} {file}")
    table = Table(
        (words("Exit status"), words("Meaning")),
        [[words(code), words(text)] for code, text in STATUSES],
        (3, 14),
        "What the checker answers",
    )
    blocks: list[Block] = [
        Paragraph(with_code(needs)),
        Items([with_code(step) for step in steps], numbered=True),
        Commands(commands),
        digests,
        table,
    ]
    return Section("How to recheck it", blocks)


def with_code(text: str) -> Runs:
    """Return text in which what stands between backquotes is to be typed.

    Examples
    --------
    >>> with_code("type `ls` here")[1]
    Code(text='ls')
    """
    parts = text.split("`")
    return tuple(Code(part) if place % 2 else Text(part) for place, part in enumerate(parts) if part)


def assumptions_section(predicate: dict[str, Any]) -> Section:
    """Return what is taken on trust, the cautions, and what wrote the certificate."""
    trust: list[Runs] = [words(line[:1].upper() + line[1:] + ".") for line in predicate["assumptions"]]
    has_fractions = any(key.startswith("gamma") for key in predicate["test"])
    cautions = [words(text) for place, text in enumerate(CAUTIONS) if place != FRACTIONS or has_fractions]
    versions = ", ".join(
        f"{key} {value}" for key, value in predicate["versions"].items() if key not in ("sidecheck", "build")
    )
    return Section(
        "Assumptions and cautions",
        [
            Paragraph(words("Taken on trust, in the words of the checker:"), "intro"),
            Items(trust),
            Paragraph(words("Cautions:"), "intro"),
            Items(cautions),
            Paragraph(words(f"Computed with {versions}."), "small"),
        ],
    )


def signature_section() -> Section:
    """Return the lines to be signed."""
    return Section("Signatures", [Signatures(("Prepared by", "Reviewed by", "Approved by"))])
