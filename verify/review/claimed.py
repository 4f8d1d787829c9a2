"""The test that a colleague's printed numbers describe, as a critical function on the scale of Y."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.errors import UndecidedError
from verify.problem.hypothesis import Form
from verify.review.claim import Claim
from verify.review.printed import Printed
from verify.review.setting import Setting
from verify.solution.critical import CriticalFunction, Region

PREC = 256


@dataclass(frozen=True)
class Claimed:
    """A printed test, taken literally.

    Attributes
    ----------
    critical : CriticalFunction or None
        The test on the scale of Y; None when no cutoff lies inside the support of a continuous law.
    notes : tuple of str
        What had to be decided to read it.
    """

    critical: CriticalFunction | None
    notes: tuple[str, ...] = ()


def claimed_test(claim: Claim, setting: Setting) -> Claimed:
    """Read the printed numbers as a test.

    A lattice cutoff printed as a short mean may fit several support points: the nearest to the printed
    number is taken. Ends in the wrong order are put in order. Both are said in the notes.

    Raises
    ------
    UndecidedError
        When a cutoff cannot be placed.
    """
    notes: list[str] = []
    if setting.form is Form.ONE_SIDED:
        return _one_sided(claim, setting, notes)
    region: Region = "inside" if _rejects_inside(claim, setting) else "outside"
    first, second = (_end(claim, name, setting, region, notes) for name in ("1", "2"))
    if (claim.style.scale < 0) != setting.flipped:
        first, second = second, first
    if _place(first[0]) > _place(second[0]):
        notes.append("as printed the window is empty, its ends are in the wrong order; they were put in order")
        first, second = second, first
    if setting.lattice:
        first, second = _inward(first, 1, region), _inward(second, -1, region)
        if first[0] > second[0]:
            notes.append("the window holds no support point")
            first = second = (second[0], Enclosure.of(0 if region == "inside" else 1))
    else:
        return Claimed(_on_support(region, first[0], second[0], setting, notes), tuple(notes))
    return Claimed(CriticalFunction(region, first[0], second[0], first[1], second[1]), tuple(notes))


def _on_support(
    region: Region, c1: Enclosure, c2: Enclosure, setting: Setting, notes: list[str]
) -> CriticalFunction | None:
    """The test of a continuous law; an end that lies outside the support leaves a one-sided test."""
    below, above = _off_support(c1, setting), _off_support(c2, setting)
    if not (below or above):
        return CriticalFunction(region, c1, c2, None, None)
    notes.append("a cutoff lies outside the support of the statistic")
    if below and above:
        return None
    kept, rest = (c2, "below") if below else (c1, "above")
    if region == "outside":
        rest = "above" if below else "below"
    side: Region = "above" if rest == "above" else "below"
    return CriticalFunction(side, kept, kept, None, None)


def _off_support(c: Enclosure, setting: Setting) -> bool:
    """Whether a cutoff of a continuous law is not certainly inside its support."""
    low, high = setting.laws[0].support
    with balls(PREC) as A:
        place = A.interval(c)
        inside = (low is None or place > A.real(low)) and (high is None or place < A.real(high))
    return not inside


def _rejects_inside(claim: Claim, setting: Setting) -> bool:
    if claim.style.region is not None:
        return claim.style.region == "reject inside"
    return setting.form is Form.OUTSIDE


def _one_sided(claim: Claim, setting: Setting, notes: list[str]) -> Claimed:
    above = setting.upward == setting.problem.hypothesis.null_below
    c, phi = _end(claim, "", setting, "above" if above else "below", notes)
    if isinstance(c, Fraction):
        c, phi = (math.floor(c) if above else math.ceil(c)), Enclosure.of(0)
    if isinstance(c, Enclosure) and _off_support(c, setting):
        return Claimed(None, (*notes, "the cutoff lies outside the support of the statistic"))
    return Claimed(CriticalFunction("above" if above else "below", c, c, phi, phi), tuple(notes))


def _end(claim: Claim, which: str, setting: Setting, region: Region, notes: list[str]) -> tuple[Any, Enclosure | None]:
    """Return one end on the scale of Y (an int on a support point, a Fraction between them) and the
    fraction there.
    """
    printed = claim.numbers[f"c{which}"]
    if not setting.lattice:
        return place_of(printed, claim, setting), None
    point = _support_point(printed, claim, setting, notes)
    fraction = claim.numbers.get(f"gamma{which}")
    if fraction is None:
        return point, Enclosure.of(1 if _end_rejects(claim, region) else 0)
    value = 1 - fraction.value if claim.style.of_acceptance else fraction.value
    return point, Enclosure.of(value)


def _end_rejects(claim: Claim, region: Region) -> bool:
    """Whether a cutoff without a fraction is rejected; unless the style says otherwise, it is not."""
    if claim.style.window is None:
        return False
    belongs = claim.style.window == "closed"
    return not belongs if region == "outside" else belongs


def place_of(printed: Printed, claim: Claim, setting: Setting) -> Enclosure:
    """Return a printed cutoff, taken literally, on the scale of Y."""
    style, n, family = claim.style, setting.problem.n, setting.family
    v = printed.value * style.divisor(n)
    if style.scale != 1 or style.shift:
        v = (v - style.shift * n) / style.scale
    if isinstance(family.scale, Fraction) and isinstance(family.shift, Fraction):
        return Enclosure.of(v if family.scale == 1 and not family.shift else (v - n * family.shift) / family.scale)
    with balls(PREC) as A:
        return to_enclosure((A.real(v) - n * A.real(family.shift)) / A.real(family.scale))


def _support_point(printed: Printed, claim: Claim, setting: Setting, notes: list[str]) -> int | Fraction:
    if not setting.laws[0].plain_points:
        return _numbered_point(place_of(printed, claim, setting), setting)
    y = place_of(printed, claim, setting)
    if y.exact and y.mid.denominator == 1:
        return int(y.mid)
    slack = _slack(printed, claim, setting)
    near = round(y.mid)
    if abs(near - y.mid) <= slack:
        if slack >= Fraction(1, 2) and printed.unit is not None:
            notes.append(
                f"{printed.text} is printed too short to tell neighbouring support points apart; the nearest was taken"
            )
        return near
    notes.append(f"the cutoff {printed.text} is no support point of the statistic")
    return y.mid


def _slack(printed: Printed, claim: Claim, setting: Setting) -> Fraction:
    """Half a unit of the last printed digit, on the scale of Y (a little more than nothing for a number
    written exactly).
    """
    if printed.unit is None:
        return Fraction(1, 10**12)
    width = printed.unit / 2 * claim.style.divisor(setting.problem.n) / abs(claim.style.scale)
    scale = setting.family.scale
    if isinstance(scale, Fraction):
        return width / abs(scale)
    with balls(PREC) as A:
        return to_enclosure(A.real(width) / abs(A.real(scale))).upper


def _numbered_point(y: Enclosure, setting: Setting) -> int:
    """Nearest point of a law whose points are numbered by something else than their value."""
    law = setting.laws[0]
    low = law.support[0] if law.support[0] is not None else 0
    with balls(PREC) as A:
        target, high = A.interval(y), max(low, 1)
        while law.value(A, high) < target:
            high *= 2
            if high > 1 << 62:
                raise UndecidedError("a cutoff lies beyond every support point that can be listed")
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (middle, high) if law.value(A, middle) < target else (low, middle)
        down, up = (abs(law.value(A, k) - target).mid() for k in (low, high))
        return low if down < up else high


def _place(c: Any) -> Any:
    return c.mid if isinstance(c, Enclosure) else c


def _inward(end: tuple[Any, Enclosure | None], side: int, region: Region) -> tuple[int, Enclosure | None]:
    """Move an end that lies between two support points to the inner one, which belongs wholly to the
    window.
    """
    c, phi = end
    if isinstance(c, int):
        return c, phi
    whole = Enclosure.of(1 if region == "inside" else 0)
    return (math.ceil(c) if side > 0 else math.floor(c)), whole
