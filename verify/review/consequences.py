"""What follows from a printed test, taken literally: its true expectations, its size over the whole null,
the power it loses.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure, decimal_text
from verify.errors import UndecidedError
from verify.problem.hypothesis import Form
from verify.problem.numbers import Exact
from verify.review.setting import Setting
from verify.review.size import PREC, PowerCurve, Size, covariance, sizes, towards_end
from verify.solution.critical import CriticalFunction

STEPS = 48


@dataclass(frozen=True)
class Expectation:
    """A left-hand side of the side conditions, under the printed test.

    Attributes
    ----------
    at : Exact
        Parameter value.
    target : Exact
        What the right test has.
    value : Enclosure
        What the printed test has.
    of : {"phi", "(V - E V) phi"}
        Whose expectation.
    """

    at: Exact
    target: Exact
    value: Enclosure
    of: Literal["phi", "(V - E V) phi"]


@dataclass(frozen=True)
class Loss:
    """Power of the best test less that of the printed one, at a stated alternative (negative: the printed
    one has more).
    """

    at: Exact
    best: Enclosure
    lost: Enclosure


@dataclass(frozen=True)
class Consequences:
    """What follows from a printed test.

    Attributes
    ----------
    expectations : tuple of Expectation
        At the limits.
    size : Size or None
        The largest power over the whole null (of two parts the one that exceeds its level most); None when
        it stayed open.
    level_kept : bool or None
        Whether no part of the null is rejected with more than its level; None when that stayed open.
    loss : Loss or None
        Power lost at a stated alternative; None when it was not asked for.
    """

    expectations: tuple[Expectation, ...]
    size: Size | None
    level_kept: bool | None
    loss: Loss | None

    @property
    def excess(self) -> Fraction:
        """By how much the size is above its level, at most; 0 when it is not."""
        if self.size is None or not isinstance(self.size.level, Fraction):
            return Fraction(0)
        return max(self.size.value.upper - self.size.level, Fraction(0))


def consequences(test: CriticalFunction, setting: Setting, *, with_loss: bool = True) -> Consequences:
    """Return what follows from a test, everything enclosed."""
    curve = PowerCurve(test, setting)
    try:
        parts: tuple[Size, ...] = sizes(curve)
    except UndecidedError:
        parts = ()
    kept = level_kept(parts)
    worst = max(parts, key=lambda part: part.value.mid - _middle(part.level), default=None)
    return Consequences(_expectations(curve), worst, kept, power_loss(test, setting) if with_loss else None)


def _middle(level: Exact) -> Fraction:
    if isinstance(level, Fraction):
        return level
    with balls(PREC) as A:
        return to_enclosure(A.real(level)).mid


def level_kept(parts: tuple[Size, ...]) -> bool | None:
    """Say whether no part of the null is rejected with more than its level; None when that stayed open.

    Examples
    --------
    >>> level = Fraction(1, 20)
    >>> sizes = [Size(Enclosure(Fraction(low, 100), Fraction(high, 100)), "", level) for low, high in ((3, 4), (4, 6))]
    >>> level_kept((sizes[0],)), level_kept(tuple(sizes)), level_kept(())
    (True, None, None)
    """
    answers = [_within(part.value, part.level) for part in parts]
    if False in answers:
        return False
    return None if None in answers or not answers else True


def _within(value: Enclosure, level: Exact) -> bool | None:
    """Whether a number is at most a level; None when the enclosure straddles it."""
    with balls(PREC) as A:
        bound = to_enclosure(A.real(level)) if not isinstance(level, Fraction) else Enclosure.of(level)
    if value.upper <= bound.lower:
        return True
    return False if value.lower > bound.upper else None


def _expectations(curve: PowerCurve) -> tuple[Expectation, ...]:
    setting, problem = curve.setting, curve.setting.problem
    found = [
        Expectation(limit, level, curve.power(limit), "phi")
        for limit, level in zip(problem.hypothesis.limits, problem.levels, strict=True)
    ]
    if setting.form is Form.POINT:
        with balls(PREC) as A:
            moment = to_enclosure(covariance(curve.test, setting.laws[0], A) * A.real(setting.family.scale))
        found.append(Expectation(problem.hypothesis.limits[0], Fraction(0), moment, "(V - E V) phi"))
    return tuple(found)


def power_loss(test: CriticalFunction, setting: Setting) -> Loss:
    """Return the largest loss of power over the stated alternatives.

    These are, for an alternative between two limits, its middle; otherwise, on each side of the null, a
    value at which the best test has
    a power of about one half.
    """
    best = setting.right()
    losses = [_loss(best, test, setting, t) for t in stated_alternatives(setting)]
    return max(losses, key=lambda loss: loss.lost.mid)


def _loss(best: CriticalFunction, test: CriticalFunction, setting: Setting, t: Fraction) -> Loss:
    law = PowerCurve(test, setting).law(t)
    with balls(PREC) as A:
        high, here = best.expectation(law, A), test.expectation(law, A)
        return Loss(t, to_enclosure(high), to_enclosure(high - here))


def stated_alternatives(setting: Setting) -> tuple[Fraction, ...]:
    """Return the parameter values at which power is compared, the same for every row about a problem."""
    if "alternatives" not in setting.memory:
        setting.memory["alternatives"] = tuple(_alternatives(setting))
    found: tuple[Fraction, ...] = setting.memory["alternatives"]
    return found


def _alternatives(setting: Setting) -> list[Fraction]:
    hypothesis = setting.problem.hypothesis
    limits = [_middle(limit) for limit in hypothesis.limits]
    if hypothesis.form is Form.OUTSIDE:
        return [Fraction(decimal_text((limits[0] + limits[1]) / 2, 40, up=False))]
    sides = [(limits[-1], True), (limits[0], False)]
    if hypothesis.form is Form.ONE_SIDED:
        sides = [side for side in sides if side[1] == hypothesis.null_below]
    return [_half_power(setting, limit, up=up) for limit, up in sides]


def _half_power(setting: Setting, limit: Fraction, *, up: bool) -> Fraction:
    """A short parameter value on one side of the null, where the best test has a power of about 1/2."""
    curve, inner, outer = PowerCurve(setting.right(), setting), limit, limit
    for k in range(STEPS):
        inner, outer = outer, towards_end(setting, limit, k, up=up)
        if curve.power(outer).mid > Fraction(1, 2):
            break
    for _ in range(6):
        middle = (inner + outer) / 2
        inner, outer = (inner, middle) if curve.power(middle).mid > Fraction(1, 2) else (middle, outer)
    for digits in range(2, 30):
        short = Fraction(decimal_text(outer, digits, up=up))
        if abs(short - outer) < abs(outer - limit) / 8 and setting.problem.density.parsed_space.contains(short):
            return short
    return outer
