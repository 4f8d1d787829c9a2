"""Which slips reproduce a row: each is tried by recomputation, with the same proven machinery as the right
numbers.
"""

from __future__ import annotations

from verify.errors import InputError, UndecidedError
from verify.review.claim import Claim
from verify.review.matching import reproduces
from verify.review.numbers import Numbers
from verify.review.setting import Setting
from verify.review.slip_table import SLIPS
from verify.review.style import Style
from verify.review.verdict import SlipFound


def find_slips(claim: Claim, setting: Setting) -> tuple[tuple[SlipFound, ...], tuple[str, ...]]:
    """Return the slips that give every printed number of the claim, and the names of those that could not
    be computed.

    Several may fit: all are returned. With no fractions printed a slip has to give the cutoffs only.
    """
    found, open_ones = [], []
    for name, (_, words) in SLIPS.items():
        candidates = _candidates(name, setting, claim.style)
        if candidates is None:
            open_ones.append(name)
        elif any(_fits(claim, numbers, setting) for numbers in candidates):
            found.append(SlipFound(name, words))
    return tuple(found), tuple(open_ones)


def _fits(claim: Claim, numbers: Numbers, setting: Setting) -> bool:
    if claim.fractions and setting.lattice and numbers.gamma1 is None:
        return False
    tried = numbers if claim.fractions and setting.lattice else numbers.without_fractions()
    return reproduces(claim, tried, setting.problem.n, setting.step)


def _candidates(name: str, setting: Setting, style: Style) -> list[Numbers] | None:
    """Numbers under one slip, remembered for later rows about the same problem; None when they could not be
    had.
    """
    key = f"slip {name} {style.reported_as} {style.region}"
    if key not in setting.memory:
        try:
            setting.memory[key] = list(SLIPS[name][0](setting, style))
        except (UndecidedError, InputError):
            setting.memory[key] = None
    found: list[Numbers] | None = setting.memory[key]
    return found
