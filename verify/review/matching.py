"""Printed numbers against the numbers of a test, over every way of writing either."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from verify.arithmetic.enclosure import Enclosure
from verify.review.claim import Claim
from verify.review.numbers import Numbers
from verify.review.printed import Match, Printed
from verify.review.style import Report


@dataclass(frozen=True)
class Comparison:
    """The best way of reading printed numbers as those of a test.

    Attributes
    ----------
    match : Match
        That of the worst number.
    each : dict
        Match of each number, by name.
    report : dict
        What would be printed for the test.
    truncated : bool
        Whether every number is the true one with its further digits cut off.
    note : str
        How the claim had to be read.
    """

    match: Match
    each: Mapping[str, Match]
    report: Report
    truncated: bool
    note: str


def compare(claim: Claim, test: Numbers, n: int, step: Enclosure | None) -> Comparison:
    """Compare a claim with a test; both are tried in all their equal writings.

    Parameters
    ----------
    claim : Claim
        What was printed.
    test : Numbers
        The test, on the scale of V.
    n : int
        Number of observations.
    step : Enclosure or None
        Distance of support points of V.
    """
    best: Comparison | None = None
    for report, note in claim.style.readings(test, n, step):
        for printed in claim.variants(_printed_step(claim, test, n, step), _rejection_counts(claim, test)):
            found = _compare(printed, report, note)
            if best is None or found.match.rank < best.match.rank:
                best = found
            if best.match is Match.SAME:
                return best
    if best is None:
        raise ValueError("a test that is reported in no way")
    return best


def _rejection_counts(claim: Claim, test: Numbers) -> bool:
    """Whether a printed fraction of 1 at an end puts it with the inside of the window, or with the side that a
    one-sided test rejects.
    """
    return (test.region != "outside") != claim.style.of_acceptance


def _printed_step(claim: Claim, test: Numbers, n: int, step: Enclosure | None) -> Fraction | None:
    """Distance of support points as printed; of a one-sided test, signed towards the side that it rejects."""
    if step is None or not step.exact:
        return None
    size = step.mid * claim.style.scale / claim.style.divisor(n)
    return abs(size) if test.two_sided else -size if test.region == "below" else size


def _compare(printed: Mapping[str, Printed], report: Report, note: str) -> Comparison:
    each = {name: number.match(report[name]) if name in report else Match.OTHER for name, number in printed.items()}
    worst = max(each.values(), key=lambda match: match.rank)
    truncated = worst is Match.LAST and all(number.truncates(report[name]) for name, number in printed.items())
    return Comparison(worst, each, report, truncated, note)


def reproduces(claim: Claim, test: Numbers, n: int, step: Enclosure | None) -> bool:
    """Whether a test gives every printed number, correctly rounded."""
    return compare(claim, test, n, step).match is Match.SAME
