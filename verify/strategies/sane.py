"""Everyday problems: what a profile draws, and the profile ``sane``."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction

from hypothesis import strategies as st

from verify.problem.hypothesis import Form
from verify.strategies.families import Room

Limits = tuple[str, str]
"""Two limits as texts, ascending; a form with one limit takes the first."""


@dataclass(frozen=True)
class Profile:
    """How to draw what a problem is made of.

    Attributes
    ----------
    limits : callable
        Room of the parameter -> strategy for two limits.
    alpha : strategy for str
        One level.
    n : strategy for int
        Number of observations.
    ties : bool
        Whether levels equal to an attainable tail probability are drawn on purpose.
    """

    limits: Callable[[Room], st.SearchStrategy[Limits]]
    alpha: st.SearchStrategy[str]
    n: st.SearchStrategy[int]
    ties: bool = False


def null_text(form: Form, low: str, high: str, *, below: bool, parameter: str = "t") -> str:
    """Write a null of this form.

    Examples
    --------
    >>> null_text(Form.OUTSIDE, "8", "12", below=True)
    't <= 8 or t >= 12'
    """
    t = parameter
    return {
        Form.ONE_SIDED: f"{t} <= {low}" if below else f"{t} >= {low}",
        Form.OUTSIDE: f"{t} <= {low} or {t} >= {high}",
        Form.INTERVAL: f"{low} <= {t} <= {high}",
        Form.POINT: f"{t} = {low}",
    }[form]


def first_limit(room: Room) -> st.SearchStrategy[Fraction]:
    """Draw a limit of ordinary size."""
    if room == "unit":
        return st.fractions(Fraction(1, 20), Fraction(17, 20), max_denominator=40)
    if room == "line":
        return st.fractions(Fraction(-5), Fraction(5), max_denominator=20)
    return st.fractions(Fraction(1, 4), Fraction(20), max_denominator=20)


@st.composite
def sane_limits(draw: st.DrawFn, room: Room) -> Limits:
    """Draw two limits that are well apart."""
    low = draw(first_limit(room))
    part = draw(st.fractions(Fraction(1, 10), Fraction(9, 10), max_denominator=10))
    high = low + {"unit": (1 - low) * part, "line": 3 * part, "positive": 2 * low * part}[room]
    return str(low), str(high)


USUAL_LEVELS = ("0.05", "0.01", "0.1", "0.025", "0.001", "1/3")

any_level = st.fractions(Fraction(1, 1000), Fraction(1, 4), max_denominator=1000).map(str)

SANE = Profile(
    limits=sane_limits,
    alpha=st.sampled_from(USUAL_LEVELS) | any_level,
    n=st.integers(1, 100),
)
