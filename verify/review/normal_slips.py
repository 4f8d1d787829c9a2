"""The numbers that a normal approximation of the statistic would give, with and without continuity
correction.
"""

from __future__ import annotations

import contextlib
import math
from collections.abc import Iterator
from dataclasses import replace
from fractions import Fraction

from verify.arithmetic.ball import balls, to_enclosure
from verify.arithmetic.enclosure import Enclosure
from verify.errors import InputError, UndecidedError
from verify.laws import Law, Normal
from verify.problem.hypothesis import Form
from verify.review.engine import TwoSided, half, joined, solve_tail
from verify.review.numbers import Numbers, affine
from verify.review.setting import Setting
from verify.solution.critical import CriticalFunction

DIGITS = 20


def uncorrected(setting: Setting) -> Iterator[Numbers]:
    """Yield the cutoffs of the approximation: as they are and, on a lattice, brought to support points."""
    for critical in _windows(setting):
        yield from _printed(setting, critical)


def corrected(setting: Setting) -> Iterator[Numbers]:
    """Yield the same with the cutoffs moved by half a lattice step, inward or outward."""
    if not setting.lattice or not setting.laws[0].plain_points:
        return
    for critical in _windows(setting):
        for by in (Fraction(1, 2), Fraction(-1, 2)):
            c1, c2 = affine(critical.c1, Fraction(1), by), affine(critical.c2, Fraction(1), -by)
            moved = (
                replace(critical, c1=c1, c2=c2)
                if critical.region in ("inside", "outside")
                else replace(critical, c1=c1, c2=c1)
            )
            yield from _printed(setting, moved)


def _windows(setting: Setting) -> Iterator[CriticalFunction]:
    """Cutoffs on the scale of Y under normal laws with the means and variances of the statistic."""
    if isinstance(setting.laws[0], Normal):
        return  # nothing is approximated
    laws, levels = tuple(map(_normal, setting.laws)), setting.problem.levels
    form = setting.form
    if form is Form.ONE_SIDED:
        yield solve_tail(laws[0], levels[0], above=setting.right().region == "above", digits=DIGITS)
        return
    low, high = (laws[0], laws[-1]) if setting.upward else (laws[-1], laws[0])
    outside = form is not Form.OUTSIDE
    first, last = (levels[0], levels[-1]) if setting.upward else (levels[-1], levels[0])
    with contextlib.suppress(UndecidedError, InputError):  # unequal variances need not have such a window
        yield TwoSided(laws, levels, outside).solve(DIGITS)
    for share in (first, half(first)) if outside else (first,):
        other = share if first == last else last
        if outside:
            lower, upper = (
                solve_tail(law, a, above=up, digits=DIGITS) for law, a, up in ((low, share, False), (high, other, True))
            )
        else:
            lower, upper = (
                solve_tail(law, a, above=up, digits=DIGITS) for law, a, up in ((low, share, True), (high, other, False))
            )
        yield joined(lower, upper, "outside" if outside else "inside")


def _normal(law: Law) -> Normal:
    """The normal law with the law's mean and variance, to sixty digits."""
    with balls(256) as A:
        mean, spread = to_enclosure(law.expectation(A)).mid, to_enclosure(law.spread(A)).mid
    return Normal(_short(mean), _short(spread * spread))


def _short(x: Fraction) -> Fraction:
    return x.limit_denominator(10**60)


def _printed(setting: Setting, critical: CriticalFunction) -> Iterator[Numbers]:
    """Cutoffs as real numbers, and brought to support points: the nearest, the inner and the outer ones."""
    yield _numbers(setting, critical)
    if setting.lattice and setting.laws[0].plain_points:
        c1, c2 = critical.c1.mid, critical.c2.mid
        for first, second in (
            (round(c1), round(c2)),
            (math.ceil(c1), math.floor(c2)),
            (math.floor(c1), math.ceil(c2)),
        ):
            if critical.region in ("above", "below"):
                second = first
            yield _numbers(setting, replace(critical, c1=Enclosure.of(first), c2=Enclosure.of(second)))


def _numbers(setting: Setting, critical: CriticalFunction) -> Numbers:
    return setting.numbers_of(critical).without_fractions()
