"""Numbers of a certificate as they stand on a page."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from verify.arithmetic.enclosure import Enclosure
from verify.certificate.claims import Claim, ends
from verify.report.math_boxes import Atom, Box, Script, row
from verify.report.page_blocks import Break, Digits, Math, Run, Runs, Text

SHORT = 10
"""Digits of a number within a sentence."""

NAMES: dict[str, Box] = {
    "c": Atom("name", "c"),
    "c1": Script(Atom("name", "c"), below=Atom("number", "1")),
    "c2": Script(Atom("name", "c"), below=Atom("number", "2")),
    "gamma": Atom("name", "γ"),
    "gamma1": Script(Atom("name", "γ"), below=Atom("number", "1")),
    "gamma2": Script(Atom("name", "γ"), below=Atom("number", "2")),
}
PHI = Atom("name", "φ")
V = Atom("name", "V")


def name(key: str) -> Math:
    """Return a cutoff or fraction as it is written."""
    return Math(NAMES[key])


def first_digits(claim: Claim) -> str:
    """Return a number in a sentence: exact where that is short, else its first digits, cut, with dots behind them.

    Examples
    --------
    >>> first_digits("94"), first_digits({"lower": "0.086714664601023", "upper": "0.086714664601024"})
    ('94', '0.08671466460…')
    """
    if isinstance(claim, str) and len(claim) <= 16:
        return claim
    low, high = ends(claim)
    text = Enclosure(low, high).text(SHORT)
    return text if "+-" in text or "[" in text else text + "…"


def box_of(claim: Claim) -> Box:
    """Return the number of a sentence within a formula."""
    return Atom("number", first_digits(claim).replace("-", "−").replace("+−", "±"))


def in_full(claim: Claim) -> Runs:
    """Return a number in a table: the fraction, or both ends of its enclosure, one under the other."""
    if isinstance(claim, str):
        return (Digits(claim),)
    return (Digits(claim["lower"]), Break(), Digits(claim["upper"]))


def kind_of(claim: Claim, word: str = "enclosed") -> Runs:
    """Return whether a number is exact, or how wide the interval is in which it is enclosed, or checked."""
    if isinstance(claim, str):
        return (Text("exact"),)
    low, high = ends(claim)
    return (Text(f"{word}, width {power_of_ten(high - low)}"),)


def power_of_ten(width: Fraction) -> str:
    """Return a width rounded up to one digit.

    Examples
    --------
    >>> power_of_ten(Fraction(1, 10**51)), power_of_ten(Fraction(12, 10**8))
    ('1e-51', '2e-7')
    """
    lead = 0
    while Fraction(10) ** lead > width:
        lead -= 1
    while Fraction(10) ** (lead + 1) <= width:
        lead += 1
    digit = -(-width // Fraction(10) ** lead)
    return f"1e{lead + 1}" if digit == 10 else f"{digit}e{lead}"


def expectation(parameter: Box, at: Box, of: str) -> Box:
    """Return the sign of an expectation at a parameter value."""
    body: tuple[Box, ...] = (PHI,) if of == "phi" else (V, Atom("space", "\u2009"), PHI)
    where = row(parameter, Atom("relation", "="), at)
    inner = row(Atom("operator", "["), *body, Atom("operator", "]"))
    return row(Script(Atom("word", "E"), below=where), inner)


def joined(parts: list[Runs], separator: str = ", ", last: str = " and ") -> Runs:
    """Join runs as in a sentence."""
    runs: list[Run] = []
    for place, part in enumerate(parts):
        if place:
            runs.append(Text(last if place == len(parts) - 1 else separator))
        runs += part
    return tuple(runs)


def numbers_of(test: dict[str, Any]) -> dict[str, Claim]:
    """Return the cutoffs and fractions of a test, in this order."""
    return {key: test[key] for key in NAMES if key in test}
