"""What the figures of a certificate show, as numbers for drawing."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from functools import partial
from typing import TYPE_CHECKING, Any

from verify.certificate.claims import ends
from verify.laws import CLOSED_FORMS
from verify.problem.numbers import exact, exact_text
from verify.report.figure_laws import LawAt, density_of, law_at, limits_of, number, shown

if TYPE_CHECKING:
    from verify.derivation.family import LawFamily
    from verify.laws.base import Law

MOST_ATOMS = 240
"""Lattice points drawn one by one; beyond, the masses are drawn as a curve."""
CURVE = 160
MOST_DOUBLINGS = 11
"""Steps from 1/64 of a limit on; a mean that is bounded may never move far enough."""
MOST_HALVINGS = 60
REACH = 5.0
"""How far the power function is followed beyond a limit, in standard deviations of V."""
SETTLED = (0.15, 0.995)
"""It is not followed beyond a place where the power falls below this part of the level, or rises above this."""


@dataclass(frozen=True)
class Line:
    """The law at one limit: the limit for the legend, and its points."""

    label: str
    x: list[float]
    y: list[float]


@dataclass(frozen=True)
class LawsFigure:
    """The critical function, and the laws at the limits, over V."""

    lattice: bool
    laws: list[Line]
    x: list[float]
    phi: list[float]


@dataclass(frozen=True)
class PowerFigure:
    """The power function over the parameter."""

    t: list[float]
    power: list[float]
    limits: list[float]
    levels: list[float]
    null: list[tuple[float, float]]


@dataclass(frozen=True)
class Test:
    """The test of a certificate on the scale of the sum of Y.

    Attributes
    ----------
    rejects : str
        inside, outside, above or below, on this scale.
    low, high : Fraction
        Ends on this scale, equal when one-sided.
    at_low, at_high : float
        Fractions with which it rejects there (0 where the law is continuous).
    scale, shift : float
        V = scale * sum of Y + shift.
    """

    __test__ = False
    rejects: str
    low: Fraction
    high: Fraction
    at_low: float
    at_high: float
    scale: float
    shift: float

    def phi(self, y: float) -> float:
        """The critical function."""
        low, high = float(self.low), float(self.high)
        if y == low:
            return self.at_low
        if y == high:
            return self.at_high
        sides = {"inside": low < y < high, "outside": not low <= y <= high, "above": y > high, "below": y < low}
        return float(sides[self.rejects])

    def power(self, law: Law) -> float:
        """The probability of rejection under a law."""
        low, high = (int(self.low), int(self.high)) if law.lattice else (self.low, self.high)
        total = 0.0 if self.rejects == "inside" and low == high else number(lambda A: self._certain(law, A))
        fractions = {low: self.at_low, high: self.at_high} if law.lattice else {}
        for y, fraction in fractions.items():
            total += fraction * number(partial(_mass, law, y)) if fraction else 0.0
        return min(max(total, 0.0), 1.0)

    def _certain(self, law: Law, A: Any) -> Any:
        """The probability of the points at which phi is 1."""
        step = 1 if law.lattice else 0
        low, high = (int(self.low), int(self.high)) if law.lattice else (A.real(self.low), A.real(self.high))
        if self.rejects == "inside":
            return law.cdf(A, high - step) - law.cdf(A, low)
        below = law.cdf(A, low - step) if self.rejects in ("below", "outside") else A.real(0)
        return below + law.sf(A, high) if self.rejects in ("above", "outside") else below


def _mass(law: Law, y: Any, A: Any) -> Any:
    return law.density(A, y)


def read_test(predicate: dict[str, Any]) -> Test:
    """Return the test of a certificate, with ends exchanged where V falls as Y rises."""
    stated, n = predicate["test"], predicate["problem"]["n"]
    scale, shift = shown(exact(predicate["law"]["scale"])), n * shown(exact(predicate["law"]["shift"]))
    found = []
    for y, c, gamma in (("y", "c", "gamma"), ("y1", "c1", "gamma1"), ("y2", "c2", "gamma2")):
        if c in stated:
            place = Fraction(stated[y]) if y in stated else (_mid(stated[c]) - Fraction(shift)) / Fraction(scale)
            found.append((place, float(_mid(stated[gamma])) if gamma in stated else 0.0))
    rejects = stated["rejects"]
    if scale < 0:
        rejects = {"above": "below", "below": "above"}.get(rejects, rejects)
    found.sort()
    (low, at_low), (high, at_high) = found[0], found[-1]
    return Test(rejects, low, high, at_low, at_high, scale, shift)


def _mid(claim: Any) -> Fraction:
    low, high = ends(claim)
    return (low + high) / 2


def laws_figure(predicate: dict[str, Any], family: LawFamily | None = None) -> LawsFigure:
    """Return the numbers of the first figure."""
    at, test = law_at(predicate, family), read_test(predicate)
    limits = limits_of(predicate)
    laws = [at(limit) for limit in limits]
    grid = _grid(laws, test)
    x = [test.scale * y + test.shift for y in grid]
    lines = [
        Line(exact_text(limit), x, [_density(law, y) / (1 if law.lattice else abs(test.scale)) for y in grid])
        for law, limit in zip(laws, limits, strict=True)
    ]
    return LawsFigure(laws[0].lattice, lines, x, [test.phi(float(y)) for y in grid])


def _density(law: Law, y: float) -> float:
    return number(lambda A: _mass(law, y if law.lattice else A.real(Fraction(y)), A))


def _grid(laws: list[Law], test: Test) -> list[Any]:
    """Where the laws are drawn: four standard deviations around their means, and around the cutoffs."""
    spans = [(number(law.expectation), number(law.spread)) for law in laws]
    low = min(*(mean - 4 * spread for mean, spread in spans), float(test.low) - spans[0][1] / 2)
    high = max(*(mean + 4 * spread for mean, spread in spans), float(test.high) + spans[-1][1] / 2)
    first, last = laws[0].support
    low, high = (
        max(low, float(first)) if first is not None else low,
        min(high, float(last)) if last is not None else high,
    )
    if not laws[0].lattice:
        inset = (high - low) / (20 * CURVE)
        low += inset if first is not None and low == float(first) else 0.0
        high -= inset if last is not None and high == float(last) else 0.0
        return [low + (high - low) * k / CURVE for k in range(CURVE + 1)]
    start, stop = int(low // 1), int(-(-high // 1))
    step = max(1, -(-(stop - start) // MOST_ATOMS))
    points = set(range(start, stop + 1, step)) | {int(test.low), int(test.high)}
    return sorted(points | ({int(test.low) + 1, int(test.high) - 1} if step > 1 else set()))


def power_figure(predicate: dict[str, Any], family: LawFamily | None = None) -> PowerFigure:
    """Return the numbers of the second figure."""
    at, test = law_at(predicate, family), read_test(predicate)
    limits = limits_of(predicate)
    space = density_of(predicate).parsed_space
    low, high = (None if end.is_infinite else shown(end) for end in (space.lower, space.upper))
    floats = [shown(limit) for limit in limits]
    levels = [shown(exact(text)) for text in predicate["problem"]["alpha"]]
    start = _far(_away(at, test, floats[0], levels[0]), floats[0], -1, low)
    stop = _far(_away(at, test, floats[-1], levels[-1]), floats[-1], 1, high)
    count = 120 if predicate["law"]["name"] in CLOSED_FORMS else 40
    points = sorted({*(start + (stop - start) * k / count for k in range(count + 1)), *floats})
    power = [test.power(at(Fraction(t))) for t in points]
    return PowerFigure(points, power, floats, levels, _null(predicate, floats, start, stop))


def _away(at: LawAt, test: Test, limit: float, level: float) -> Callable[[float], bool]:
    """Whether the power has settled at a place, or V's mean has moved far enough."""
    law = at(Fraction(limit))
    mean, wanted = number(law.expectation), REACH * number(law.spread)

    def away(t: float) -> bool:
        there = at(Fraction(t))
        if abs(number(there.expectation) - mean) >= wanted:
            return True
        return not SETTLED[0] * level <= test.power(there) <= SETTLED[1]

    return away


def _null(predicate: dict[str, Any], limits: list[float], start: float, stop: float) -> list[tuple[float, float]]:
    """The null on the axis, as intervals."""
    form, text = predicate["test"]["form"], predicate["problem"]["null"]
    if form == "outside null":
        return [(start, limits[0]), (limits[-1], stop)]
    if form == "one-sided":
        return [(start, limits[0])] if "<" in text else [(limits[0], stop)]
    return [(limits[0], limits[-1])]


def _far(away: Callable[[float], bool], limit: float, side: int, end: float | None) -> float:
    """Walk from a limit until a place that is far away, or to just before the end of the space."""
    margin = None if end is None else abs(end - limit)
    near, step = 0.0, abs(limit) / 64 or 1 / 64
    for _ in range(MOST_DOUBLINGS):
        if (margin is not None and step >= margin) or away(limit + side * step):
            break
        near, step = step, 2 * step
    far = step if margin is None else min(step, margin * 0.995)
    if not away(limit + side * far):
        return limit + side * far
    for _ in range(MOST_HALVINGS):
        if far - near < far / 16:
            break
        middle = (near + far) / 2
        near, far = (near, middle) if away(limit + side * middle) else (middle, far)
    return limit + side * far
