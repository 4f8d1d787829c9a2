"""Problems that break solvers: the profile ``adversarial``."""

from __future__ import annotations

from fractions import Fraction

from hypothesis import strategies as st

from verify.strategies.families import Room
from verify.strategies.sane import SANE, Limits, Profile, first_limit


def power_of_ten(least: int, most: int) -> st.SearchStrategy[Fraction]:
    """Draw 10**k, the exponents equally likely."""
    return st.integers(least, most).map(lambda k: Fraction(10) ** k)


@st.composite
def tiny_levels(draw: st.DrawFn) -> str:
    """Draw a level down to 1e-200."""
    return f"{draw(st.integers(1, 9))}e-{draw(st.integers(2, 200))}"


def levels_near_one() -> st.SearchStrategy[str]:
    """Draw a level next to 1."""
    return power_of_ten(-30, -1).map(lambda gap: str(1 - gap))


@st.composite
def limits(draw: st.DrawFn, room: Room) -> Limits:
    """Draw limits that nearly agree or lie far apart, at any size, some of them irrational."""
    low = draw(first_limit(room) | _extreme(room))
    gap = draw(power_of_ten(-20, -1) | power_of_ten(-2, 4))
    high = _beyond(room, low, gap)
    if draw(st.integers(0, 5)) == 0:
        return f"{low}*sqrt(2)/2", f"{high}*sqrt(2)/2"
    return str(low), str(high)


def _extreme(room: Room) -> st.SearchStrategy[Fraction]:
    """A parameter near the ends of its space: windows at the end of the support, huge and tiny means."""
    if room == "unit":
        return power_of_ten(-9, -1) | power_of_ten(-9, -1).map(lambda q: 1 - q)
    if room == "line":
        return power_of_ten(-6, 6) | power_of_ten(-6, 6).map(lambda q: -q)
    return power_of_ten(-6, 6)


def _beyond(room: Room, low: Fraction, gap: Fraction) -> Fraction:
    if room == "unit":
        return low + (1 - low) * gap / (1 + gap)
    return low + gap if room == "line" else low * (1 + gap)


ADVERSARIAL = Profile(
    limits=limits,
    alpha=SANE.alpha | tiny_levels() | levels_near_one(),
    n=st.integers(1, 5) | st.integers(1, 1000) | power_of_ten(2, 7).map(int),
    ties=True,
)
