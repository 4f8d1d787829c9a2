"""The page of a certificate, made from the certificate alone."""

from __future__ import annotations

import hashlib
import json
from typing import TYPE_CHECKING, Any

from verify.errors import UndecidedError
from verify.report.math_text import plain
from verify.report.page_blocks import Block, Code, Figure, Page, Paragraph, Runs, Section, words
from verify.report.page_derivation import derivation_section
from verify.report.page_numbers import first_digits, numbers_of
from verify.report.page_question import certified, parameter_of, problem_section
from verify.report.page_recheck import assumptions_section, recheck_section, signature_section
from verify.report.page_results import double_section, numbers_section

if TYPE_CHECKING:
    from verify.derivation.family import LawFamily

SUBTITLE = "Precision certificate of an optimal test"


def certificate_page(name: str, data: bytes, family: LawFamily | None = None) -> Page:
    """Build the page.

    Parameters
    ----------
    name : str
        File name of the certificate without ``.cert.json``.
    data : bytes
        The certificate.
    family : LawFamily, optional
        The family derived from the same density, which saves deriving it again for the figures of a law
        without a closed form.

    Returns
    -------
    Page
        The same for the same bytes.
    """
    statement = json.loads(data)
    predicate, subject = statement["predicate"], statement["subject"][0]
    digest = hashlib.sha256(data).hexdigest()
    return Page(
        predicate["problem"]["title"] or name,
        SUBTITLE,
        _facts(name, digest, subject, predicate),
        (
            certified(predicate),
            problem_section(predicate),
            derivation_section(predicate),
            numbers_section(predicate),
            double_section(predicate),
            _figures(predicate, family),
            recheck_section(name, digest, predicate),
            assumptions_section(predicate),
            signature_section(),
        ),
        digest,
        predicate["issued"],
    )


def _facts(name: str, digest: str, subject: dict[str, Any], predicate: dict[str, Any]) -> list[tuple[str, Runs]]:
    versions = predicate["versions"]
    written = f"sidecheck {versions.get('sidecheck', '')}, build {versions.get('build', '')}"
    facts: list[tuple[str, Runs]] = [
        ("Certificate", (Code(f"{name}.cert.json"),)),
        ("its SHA-256", (Code(digest),)),
        ("Case file", (Code(subject["name"]),)),
        ("its SHA-256", (Code(subject["digest"]["sha256"]),)),
        ("Written by", words(written)),
    ]
    return [*facts, ("Issued", words(predicate["issued"]))] if predicate["issued"] else facts


def _figures(predicate: dict[str, Any], family: LawFamily | None) -> Section:
    """Draw both figures; a law that cannot be drawn within its budget is said to be so."""
    from verify.report.figure_data import laws_figure, power_figure
    from verify.report.figures import ceiling, draw_laws, draw_power

    symbol = plain(parameter_of(predicate))
    try:
        laws, power = laws_figure(predicate, family), power_figure(predicate, family)
    except UndecidedError as error:
        return Section("Figures", [Paragraph(words(f"The laws could not be drawn: {error}."))])
    kind = "masses" if laws.lattice else "densities"
    limits = " and ".join(f"{symbol} = {line.label}" for line in laws.laws)
    guide = " Lines between masses only guide the eye." if laws.lattice else ""
    guide += " The density rises beyond the top of the figure." if ceiling(laws) is not None else ""
    stated = [value for key, value in numbers_of(predicate["test"]).items() if key.startswith("c")]
    cutoffs = " and ".join(dict.fromkeys(first_digits(value) for value in stated))
    unit = "a cutoff" if len(stated) == 1 else "cutoffs"
    peak = max(power.power)
    first = (
        f"Above, the critical function φ over V, with {unit} at {cutoffs}; below, the {kind} of V at "
        f"{limits}. The grey ground is the region of rejection."
    )
    levels = " and ".join(f"{level:.6g}" for level in dict.fromkeys(power.levels))
    second = (
        f"The power function: probability of rejection over {symbol}. Dotted: level {levels}; dashed: the limits; "
        "grey ground: the null hypothesis."
    )
    blocks: list[Block] = [
        Figure(draw_laws(laws, symbol, "fig1-"), f"{first} Test: {predicate['test']['rejects']}.", first + guide),
        Figure(
            draw_power(power, symbol, "fig2-"),
            f"{second} Drawn from {power.t[0]:.10g} to {power.t[-1]:.10g}; largest value: {peak:.4g}.",
            second,
        ),
        Paragraph(
            words(
                "Figures are drawn in double precision, from the law and the numbers stated above; nothing is "
                "concluded from them."
            ),
            "small",
        ),
    ]
    return Section("Figures", blocks)
