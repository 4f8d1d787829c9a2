"""The slips: for each, the numbers that would be printed under it. One small function a slip, one line each
in the table.

A slip is found when it reproduces every printed number of a row, fractions included. To add one: write its
function and add its line.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from fractions import Fraction

from verify.arithmetic.enclosure import Enclosure
from verify.errors import UndecidedError
from verify.laws import CLOSED_FORMS, Gamma
from verify.problem.hypothesis import Form
from verify.review.engine import TwoSided, half, joined, solve_tail
from verify.review.normal_slips import corrected, uncorrected
from verify.review.numbers import Numbers, affine
from verify.review.setting import Setting
from verify.review.style import Style
from verify.solution.critical import CriticalFunction

Found = Iterator[Numbers]
Slip = Callable[[Setting, Style], Found]
ZERO = Enclosure.of(0)

MOST_OBSERVATIONS, MOST_SUMMED = 10**9, 100
"""Most observations whose law is computed to try a slip: by a closed form, or by summing weights."""


def ends_exchanged(setting: Setting, style: Style) -> Found:
    """c1 and c2 in each other's place, the fractions with them or not."""
    right = setting.numbers
    if right.two_sided:
        yield right.exchanged(ends=True, fractions=False)
        yield right.exchanged(ends=True, fractions=True)


def fractions_exchanged(setting: Setting, style: Style) -> Found:
    """gamma1 and gamma2 in each other's place."""
    if setting.numbers.two_sided and setting.lattice:
        yield setting.numbers.exchanged(ends=False, fractions=True)


def fractions_complemented(setting: Setting, style: Style) -> Found:
    """1 - gamma for gamma."""
    if setting.lattice:
        yield setting.numbers.complemented()


def lower_off_by_one(setting: Setting, style: Style) -> Found:
    """The lower cutoff one support point off."""
    if setting.step is not None and setting.numbers.region != "above":
        for by in (setting.step, affine(setting.step, Fraction(-1))):
            yield setting.numbers.moved(by, ZERO)


def upper_off_by_one(setting: Setting, style: Style) -> Found:
    """The upper cutoff one support point off."""
    if setting.step is None or setting.numbers.region == "below":
        return
    for by in (setting.step, affine(setting.step, Fraction(-1))):
        yield setting.numbers.moved(ZERO, by) if setting.numbers.two_sided else setting.numbers.moved(by)


def closed_for_open(setting: Setting, style: Style) -> Found:
    """Both ends of the closed window printed for the open one, or the other way about."""
    if setting.step is not None and setting.numbers.two_sided:
        back = affine(setting.step, Fraction(-1))
        yield setting.numbers.moved(setting.step, back)
        yield setting.numbers.moved(back, setting.step)


def n_left_out(setting: Setting, style: Style) -> Found:
    """The law of one observation used for the sum of n."""
    n = setting.problem.n
    if n > 1:
        yield from _with_n(setting, style, 1)


def n_twice(setting: Setting, style: Style) -> Found:
    """N counted twice: the law of n * n observations, or a mean divided by n again."""
    n = setting.problem.n
    if n == 1:
        return
    if style.divisor(n) != 1:
        yield setting.numbers.scaled(Fraction(1, n))
    if n * n > (MOST_OBSERVATIONS if setting.laws[0].name in CLOSED_FORMS else MOST_SUMMED):
        raise UndecidedError(f"the law of {n * n} observations would take too long")
    yield from _with_n(setting, style, n * n)


def _with_n(setting: Setting, style: Style, n: int) -> Found:
    laws = tuple(setting.family.at(limit, n) for limit in setting.problem.hypothesis.limits)
    numbers = setting.numbers_of(_solved(setting, laws, setting.problem.levels), n)
    yield numbers
    divisor = style.divisor(setting.problem.n)
    if divisor != 1:
        yield numbers.scaled(divisor)
    if style.reported_as == "mean":
        yield numbers.scaled(divisor / n)


def alpha_halved(setting: Setting, style: Style) -> Found:
    """Half the level."""
    yield _at_levels(setting, Fraction(1, 2))


def alpha_doubled(setting: Setting, style: Style) -> Found:
    """Twice the level."""
    if all(level < Fraction(1, 2) for level in setting.problem.levels):
        yield _at_levels(setting, Fraction(2))


def _at_levels(setting: Setting, factor: Fraction) -> Numbers:
    levels = tuple(level * factor for level in setting.problem.levels)
    return setting.numbers_of(_solved(setting, setting.laws, levels))


def _solved(setting: Setting, laws: tuple, levels: tuple, outside: bool | None = None) -> CriticalFunction:  # type: ignore[type-arg]
    if setting.form is Form.ONE_SIDED:
        above = setting.right().region == "above"
        return solve_tail(laws[0], levels[0], above=above, digits=setting.digits)
    outside = setting.form is not Form.OUTSIDE if outside is None else outside
    return TwoSided(laws, levels, outside).solve(setting.digits)


def equal_tails(setting: Setting, style: Style) -> Found:
    """Equal tails beyond both ends instead of the two side conditions."""
    if setting.form is Form.ONE_SIDED:
        return
    low, high = _ascending(setting)
    outside = setting.form is not Form.OUTSIDE
    level = setting.problem.levels[0]
    tail = half(level) if outside else half(1 - level)
    pairs = dict.fromkeys([(low, low), (high, high), (low, high)])
    for first, second in pairs:
        yield setting.numbers_of(_tails(setting, first, second, (tail, tail), outside))


def two_one_sided(setting: Setting, style: Style) -> Found:
    """Two one-sided tests, each at the level, instead of the window."""
    if setting.form is Form.ONE_SIDED:
        return
    low, high = _ascending(setting)
    outside = setting.form is not Form.OUTSIDE
    levels = setting.problem.levels if setting.upward else setting.problem.levels[::-1]
    pair = (levels[0], levels[-1])
    if outside:
        yield setting.numbers_of(_tails(setting, low, high, pair, True))
    else:
        lower = solve_tail(low, pair[0], above=True, digits=setting.digits)
        upper = solve_tail(high, pair[1], above=False, digits=setting.digits)
        yield setting.numbers_of(joined(lower, upper, "inside"))


def _ascending(setting: Setting) -> tuple:  # type: ignore[type-arg]
    """The laws with the smaller and the larger mean."""
    return (setting.laws[0], setting.laws[-1]) if setting.upward else (setting.laws[-1], setting.laws[0])


def _tails(setting: Setting, first, second, tails: tuple, outside: bool) -> CriticalFunction:  # type: ignore[no-untyped-def, type-arg]
    """Window with a given probability below it under the first law, and above it under the second."""
    lower = solve_tail(first, tails[0], above=False, digits=setting.digits)
    upper = solve_tail(second, tails[1], above=True, digits=setting.digits)
    window = joined(lower, upper, "outside")
    if outside:
        return window
    zero = [None if phi is None else affine(phi, Fraction(-1), Fraction(1)) for phi in (window.phi1, window.phi2)]
    return CriticalFunction("inside", window.c1, window.c2, *zero)


def rate_for_scale(setting: Setting, style: Style) -> Found:
    """The scale of a gamma law taken for its rate."""
    if isinstance(setting.laws[0], Gamma):
        laws = tuple(Gamma(law.shape, 1 / law.rate) for law in setting.laws if isinstance(law, Gamma))
        yield setting.numbers_of(_solved(setting, laws, setting.problem.levels))


def mean_for_sum(setting: Setting, style: Style) -> Found:
    """The mean printed for the sum, or the sum for the mean."""
    n = setting.problem.n
    if n > 1:
        yield setting.numbers.scaled(Fraction(1, n))
        yield setting.numbers.scaled(Fraction(n))


def first_limit_twice(setting: Setting, style: Style) -> Found:
    """The first limit used for both: what the two conditions tend to as the second limit comes to the
    first.
    """
    if len(setting.laws) == 2:
        first = TwoSided(setting.laws[:1], setting.problem.levels[:1], setting.form is not Form.OUTSIDE)
        yield setting.numbers_of(first.solve(setting.digits))


def region_complemented(setting: Setting, style: Style) -> Found:
    """Null and alternative exchanged: the test of the other hypothesis, at the level or at its complement."""
    right, levels = setting.right(), setting.problem.levels
    if setting.form is Form.ONE_SIDED:
        above = right.region != "above"
        yield setting.numbers_of(solve_tail(setting.laws[0], levels[0], above=above, digits=setting.digits))
    elif len(setting.laws) == 2:
        yield setting.numbers_of(_solved(setting, setting.laws, levels, outside=setting.form is Form.OUTSIDE))
    if style.region is not None and (style.region == "reject inside") != (setting.form is Form.OUTSIDE):
        yield setting.numbers
        yield setting.numbers.complemented()


def normal_approximation(setting: Setting, style: Style) -> Found:
    """A normal law with the same mean and variance, no continuity correction."""
    yield from uncorrected(setting)


def normal_approximation_corrected(setting: Setting, style: Style) -> Found:
    """The same with the cutoffs moved by half a lattice step."""
    yield from corrected(setting)


SLIPS: dict[str, tuple[Slip, str]] = {
    "ends-exchanged": (ends_exchanged, "the two cutoffs in each other's place"),
    "fractions-exchanged": (fractions_exchanged, "gamma1 and gamma2 in each other's place"),
    "fractions-complemented": (fractions_complemented, "1 - gamma printed for gamma"),
    "lower-off-by-one": (lower_off_by_one, "the lower cutoff one support point off"),
    "upper-off-by-one": (upper_off_by_one, "the upper cutoff one support point off"),
    "closed-for-open": (
        closed_for_open,
        "the ends of the closed window printed for the open one, or the other way about",
    ),
    "n-left-out": (n_left_out, "n left out: the law of one observation used for the sum"),
    "n-twice": (n_twice, "n counted twice"),
    "alpha-halved": (alpha_halved, "half the level"),
    "alpha-doubled": (alpha_doubled, "twice the level"),
    "equal-tails": (equal_tails, "equal tails in place of the two side conditions"),
    "two-one-sided": (two_one_sided, "two one-sided tests, each at the level, in place of the window"),
    "normal-approximation": (normal_approximation, "a normal approximation without continuity correction"),
    "normal-approximation-corrected": (
        normal_approximation_corrected,
        "a normal approximation with continuity correction",
    ),
    "rate-for-scale": (
        rate_for_scale,
        "the scale of the gamma law taken for its rate, or the rate for the scale",
    ),
    "mean-for-sum": (mean_for_sum, "the mean printed where the sum is meant, or the sum for the mean"),
    "first-limit-twice": (first_limit_twice, "the first limit used for both"),
    "region-complemented": (region_complemented, "null and alternative exchanged"),
}
"""Name of the slip -> the numbers it prints, and what it is in words ("these are the numbers for ...")."""

TRUNCATED = "truncated"
TRUNCATED_WORDS = "the right digits cut off instead of rounded"
