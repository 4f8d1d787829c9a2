"""Levels that equal an attainable probability of a binomial law exactly, so that an end fraction is 0 or 1.

Source: the tails are finite sums of exact binomial masses; for a two-sided form the two limits (or the one) are
symmetric about 1/2, where a symmetric window satisfies both side conditions (Lehmann and Romano 2005, section 4.2).
"""

from __future__ import annotations

from fractions import Fraction
from math import comb

from hypothesis import strategies as st

from verify.problem.hypothesis import Form
from verify.strategies.families import Family
from verify.strategies.sane import null_text

MOST_TRIALS = 60


def mass(trials: int, p: Fraction, k: int) -> Fraction:
    """Exact binomial mass.

    Examples
    --------
    >>> mass(4, Fraction(1, 2), 2)
    Fraction(3, 8)
    """
    return comb(trials, k) * p**k * (1 - p) ** (trials - k)


@st.composite
def tie(draw: st.DrawFn, family: Family, form: Form) -> tuple[str, str, int]:
    """Draw null, level and n of a tie, or of a level beside one."""
    n = draw(st.integers(max(1, -(-2 // family.trials)), max(1, MOST_TRIALS // family.trials)))
    trials = n * family.trials
    p = draw(st.fractions(Fraction(1, 20), Fraction(9, 20), max_denominator=20))
    low, high = (Fraction(1, 2), Fraction(1, 2)) if form is Form.POINT else (p, 1 - p)
    below = draw(st.booleans())
    level = _level(draw, form, trials, low, below)
    share = draw(st.sampled_from([Fraction(0)] * 3 + [Fraction(1, 10**17), Fraction(-1, 10**17), Fraction(1, 10**40)]))
    return null_text(form, *(_of(family, q) for q in (low, high)), below=below), str(beside(level, share)), n


def beside(level: Fraction, share: Fraction) -> Fraction:
    """Move a level by a share of its distance from 0 or 1, the nearer one: it stays a level.

    Examples
    --------
    >>> beside(Fraction(3, 4), Fraction(1, 10))
    Fraction(31, 40)
    """
    return level + share * min(level, 1 - level)


def _of(family: Family, p: Fraction) -> str:
    """The parameter with success probability p: p itself, or the odds."""
    return str(p if family.room == "unit" else p / (1 - p))


def _level(draw: st.DrawFn, form: Form, trials: int, p: Fraction, below: bool) -> Fraction:
    masses = [mass(trials, p, k) for k in range(trials + 1)]
    if form is Form.ONE_SIDED:
        cut = draw(st.integers(1, trials))
        return sum(masses[cut:] if below else masses[:cut], Fraction(0))
    reach = draw(st.integers(1, trials // 2))
    outside = sum(masses[:reach], Fraction(0)) + sum(masses[trials - reach + 1 :], Fraction(0))
    return 1 - outside if form is Form.OUTSIDE else outside
