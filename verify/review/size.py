"""The true size of a test: where over the whole null its power is largest, and how large, enclosed.

The power of a test that rejects inside a window rises and then falls in the parameter; that of one that
rejects outside falls and then rises (the kernel of an exponential family is totally positive, so it
diminishes variation). So on each part of the null the largest power lies at an end of the part, or at the one
peak when the peak lies inside: the sign of the derivative Cov(phi, V) at the ends says which. Nothing is
assumed about where it is.

Source: S. Karlin, Total Positivity (1968), chapter 1 (variation diminishing); Lehmann and Romano 2005,
Theorem 3.7.1 (iii).
"""

from __future__ import annotations

from contextlib import suppress
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cmp_to_key
from typing import Any

from verify.arithmetic.ball import Balls, balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.evaluate import evaluate
from verify.errors import NotRational, UndecidedError
from verify.laws import Law
from verify.problem.hypothesis import Form
from verify.problem.numbers import Exact, as_exact, exact_text
from verify.problem.order import compare
from verify.review.exact_power import exact_power
from verify.review.setting import Setting
from verify.solution.critical import CriticalFunction

PREC = 128
BISECTIONS = 60
REACH = 64
"""Steps towards the end of the parameter space."""

NEAR_ONE = Fraction(10**9 - 1, 10**9)


@dataclass(frozen=True)
class Size:
    """Largest power over one part of the null.

    Attributes
    ----------
    value : Enclosure
        The supremum, enclosed.
    at : str
        Where it lies: a parameter value, or the end of the parameter space that it is approached at.
    level : Exact
        The level that belongs to this part.
    """

    value: Enclosure
    at: str
    level: Exact


@dataclass(frozen=True)
class PowerCurve:
    """The power of one test as a function of the parameter."""

    test: CriticalFunction
    setting: Setting
    known: dict[int, Enclosure] = field(default_factory=dict)

    def law(self, t: Exact) -> Law:
        """Law of the sum of the Y's at a parameter value."""
        limits = self.setting.problem.hypothesis.limits
        for limit, law in zip(limits, self.setting.laws, strict=True):
            if limit is t:
                return law
        return self.setting.family.at(t, self.setting.problem.n)

    def power(self, t: Exact) -> Enclosure:
        """Probability of rejection; at a limit it is computed once."""
        for place, limit in enumerate(self.setting.problem.hypothesis.limits):
            if limit is t:
                if place not in self.known:
                    self.known[place] = self._at_limit(place)
                return self.known[place]
        return self.test.power(self.law(t), PREC)

    def _at_limit(self, place: int) -> Enclosure:
        """Power at a limit, exactly where its enclosure straddles the level and the masses are rational."""
        law, level = self.setting.laws[place], self.setting.problem.levels[place]
        found = self.test.power(law, PREC)
        if isinstance(level, Fraction) and found.contains(level):
            with suppress(NotRational):
                return exact_power(self.test, law)
        return found

    def direction(self, t: Exact) -> int:
        """Sign of the derivative in the parameter: +1, -1, or 0 when it could not be told."""
        with balls(PREC) as A:
            slope = covariance(self.test, self.law(t), A)
            sign = int(bool(slope > 0)) - int(bool(slope < 0))
        return sign if self.setting.upward else -sign


def covariance(test: CriticalFunction, law: Law, A: Balls) -> Any:
    """Return Cov(phi, Y) = E[(Y - E Y) phi], the derivative of the power in the natural parameter."""
    c1, c2 = (A.interval(c) if isinstance(c, Enclosure) else c for c in (test.c1, test.c2))
    below, last = (c1 - 1, c2 - 1) if law.lattice else (c1, c2)
    if test.region == "inside":
        total = law.shortfall(A, c1) - law.shortfall(A, last) if test.c1 != test.c2 else A.real(0)
    elif test.region == "outside":
        total = law.shortfall(A, c2) - law.shortfall(A, below)
    else:
        total = law.shortfall(A, c1) if test.region == "above" else -law.shortfall(A, below)
    if test.phi1 is not None and test.phi2 is not None:
        mean = law.expectation(A)
        ends = [(c1, test.phi1)] + (
            [(c2, test.phi2)] if test.c1 != test.c2 and test.region in ("inside", "outside") else []
        )
        for c, phi in ends:
            total = total + A.interval(phi) * (law.value(A, c) - mean) * law.density(A, c)
    return total


def sizes(curve: PowerCurve) -> tuple[Size, ...]:
    """Return the largest power of a test over each part of the null.

    With another level at each limit of an interval null, each limit is a part of its own; what lies between them is a
    third, held to the larger level, where the power may be largest there.

    Raises
    ------
    UndecidedError
        When a peak could not be bracketed.
    """
    parts: list[tuple[Exact | None, Exact | None]]
    hypothesis, levels = curve.setting.problem.hypothesis, curve.setting.problem.levels
    limits = hypothesis.limits
    if hypothesis.form is Form.INTERVAL and len(set(levels)) > 1:
        between = [(limits[0], limits[1])] if curve.test.region == "inside" else []
        parts = [*((limit, limit) for limit in limits), *between]
        held = (*levels, max(levels, key=cmp_to_key(compare)))
        return tuple(_largest(curve, *part, level) for part, level in zip(parts, held, strict=False))
    match hypothesis.form:
        case Form.ONE_SIDED:
            parts = [(None, limits[0]) if hypothesis.null_below else (limits[0], None)]
        case Form.OUTSIDE:
            parts = [(None, limits[0]), (limits[1], None)]
        case _:
            parts = [(limits[0], limits[-1])]
    return tuple(_largest(curve, low, high, levels[i]) for i, (low, high) in enumerate(parts))


def _largest(curve: PowerCurve, low: Exact | None, high: Exact | None, level: Exact) -> Size:
    if low is not None and low is high:
        return Size(curve.power(low), exact_text(low), level)
    if curve.test.region == "inside":
        return _of_a_hill(curve, low, high, level)
    if curve.test.region == "outside":
        return _larger(_at_end(curve, low, high, level, up=False), _at_end(curve, high, low, level, up=True))
    rises = (curve.test.region == "above") == curve.setting.upward
    return _at_end(curve, high if rises else low, low if rises else high, level, up=rises)


def _larger(first: Size, second: Size) -> Size:
    """The larger of two powers: enclosures that overlap do not tell which it is, but both bound it from below."""
    ends = [(size.value.lower, size.value.upper) for size in (first, second)]
    lower, upper = map(max, zip(*ends, strict=True))
    at = max(first, second, key=lambda size: size.value.lower).at
    return Size(Enclosure(lower, upper), at, first.level)


def _at_end(curve: PowerCurve, t: Exact | None, other: Exact | None, level: Exact, *, up: bool) -> Size:
    """Power at a limit, or its supremum towards an end of the parameter space, which is at most 1."""
    if t is not None:
        return Size(curve.power(t), exact_text(t), level)
    if other is None:
        raise UndecidedError("a part of the null without a limit")
    best = Fraction(0)
    for k in range(REACH):
        best = max(best, curve.power(towards_end(curve.setting, other, k, up=up)).lower)
        if best > NEAR_ONE:
            break
    name = curve.setting.problem.density.parameter
    space = curve.setting.problem.density.parsed_space
    return Size(Enclosure(best, Fraction(1)), f"{name} -> {space.upper if up else space.lower}", level)


def _of_a_hill(curve: PowerCurve, low: Exact | None, high: Exact | None, level: Exact) -> Size:
    """Power that rises, then falls: at an end where it still rises (or already falls), else at the peak
    inside.
    """
    limit = high if high is not None else low
    if limit is not None and _is_constant(curve):
        return Size(curve.power(limit), exact_text(limit), level)
    if high is not None and curve.direction(high) > 0:
        return Size(curve.power(high), exact_text(high), level)
    if low is not None and curve.direction(low) < 0:
        return Size(curve.power(low), exact_text(low), level)
    rising, falling = _bracket(curve, low, high)
    for _ in range(BISECTIONS):
        middle = (rising + falling) / 2
        sign = curve.direction(middle)
        if sign == 0:
            rising, falling = _around(curve, middle, rising, falling)
            break
        rising, falling = (middle, falling) if sign > 0 else (rising, middle)
    return Size(_peak(curve, rising, falling), f"about {_short((rising + falling) / 2)}", level)


def _is_constant(curve: PowerCurve) -> bool:
    """Whether the test rejects with one probability whatever is observed.

    Nowhere, when its window is empty or lies off the support; or on two atoms alike.
    """
    test = curve.test
    low, high = curve.setting.laws[0].support
    if test.phi1 is not None and ((low is not None and test.c2 < low) or (high is not None and test.c1 > high)):
        return True
    if test.phi1 is None or test.phi1 != test.phi2:
        return False
    nowhere = test.region == "inside" and test.c1 == test.c2 and test.phi1 == Enclosure.of(0)
    return nowhere or (test.c2 - test.c1 <= 1 and curve.setting.laws[0].support == (test.c1, test.c2))


def _around(curve: PowerCurve, peak: Fraction, rising: Fraction, falling: Fraction) -> tuple[Fraction, Fraction]:
    """Tighten a bracket around a value where the derivative cannot be told from 0, by certain signs beside
    it.
    """
    width = min(peak - rising, falling - peak, key=abs)
    for k in range(1, 2 * BISECTIONS):
        near = (peak - width / 2**k, peak + width / 2**k)
        if curve.direction(near[0]) <= 0 or curve.direction(near[1]) >= 0:
            break
        rising, falling = near
    return rising, falling


def _bracket(curve: PowerCurve, low: Exact | None, high: Exact | None) -> tuple[Fraction, Fraction]:
    """Two parameter values between which the peak lies: the power rises at the first and falls at the
    second.
    """
    anchor = high if high is not None else low
    if anchor is None:
        raise UndecidedError("a part of the null without a limit")
    found: list[Fraction] = []
    for side, end in ((False, low), (True, high)):
        wanted = -1 if side else 1
        start = _rational(end if end is not None else anchor)
        for k in range(REACH):
            t = start if k == 0 else towards_end(curve.setting, start, k - 1, up=side, fine=end is not None)
            if curve.direction(t) == wanted:
                found.append(t)
                break
        else:
            raise UndecidedError("the peak of the power could not be bracketed inside the parameter space")
    return found[0], found[1]


def _peak(curve: PowerCurve, a: Fraction, b: Fraction) -> Enclosure:
    """Enclose the largest power between two parameter values.

    Between natural parameters x < y the power is at most max(power(x), power(y)) * exp((y - x) (E_y V - E_x
    V) / 4): by Hoelder's inequality power(u x + (1-u) y) <= power(x)^u power(y)^(1-u) exp(J) with J = u A(x)
    + (1-u) A(y) - A(u x + (1-u) y), and the tangents of the convex A give J <= u (1-u) (y - x) (A'(y) -
    A'(x)).
    """
    ends = [curve.power(t) for t in (a, b)]
    lower = max(end.lower for end in ends)
    with balls(PREC) as A:
        derivation = curve.setting.derivation
        name = derivation.density.parameter
        naturals = [evaluate(derivation.natural_parameter, A, {name: A.real(t)}) for t in (a, b)]
        means = [curve.law(t).expectation(A) * A.real(curve.setting.family.scale) for t in (a, b)]
        growth = A.exp((naturals[1] - naturals[0]) * (means[1] - means[0]) / 4)
        top = to_enclosure(A.real(max(end.upper for end in ends)) * growth)
    return Enclosure(lower, min(top.upper, Fraction(1)))


def towards_end(setting: Setting, t: Exact, k: int, *, up: bool, fine: bool = False) -> Fraction:
    """Return the k-th of a sequence of parameter values that runs from t to an end of the parameter space.

    ``fine`` begins with very small steps.
    """
    space = setting.problem.density.parsed_space
    start, end = _rational(t), (space.upper if up else space.lower)
    amount = Fraction(2) ** (2 * k - 120 if fine else k - 4)
    if end.is_infinite:
        step = (abs(start) + 1) * amount
        return start + step if up else start - step
    limit = _rational(as_exact(end))
    return limit + (start - limit) / (1 + amount)


def _rational(t: Exact) -> Fraction:
    """A rational parameter value, the nearest at 200 bits when t is irrational: only a place to look at."""
    if isinstance(t, Fraction):
        return t
    with balls(200) as A:
        return to_enclosure(A.real(t)).mid


def _short(t: Fraction) -> str:
    return Enclosure.of(t).text(8)
