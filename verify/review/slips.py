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
        candidates, whole = _candidates(name, setting, claim.style)
        if any(_fits(claim, numbers, setting) for numbers in candidates):
            found.append(SlipFound(name, words))
        elif not whole:
            open_ones.append(name)
    return tuple(found), tuple(open_ones)


def _fits(claim: Claim, numbers: Numbers, setting: Setting) -> bool:
    if claim.fractions and setting.lattice and numbers.gamma1 is None:
        return False
    tried = numbers if claim.fractions and setting.lattice else numbers.without_fractions()
    return reproduces(claim, tried, setting.problem.n, setting.step)


def _candidates(name: str, setting: Setting, style: Style) -> tuple[list[Numbers], bool]:
    """Numbers under one slip, remembered for later rows about the same problem, and whether they are all of them."""
    key = f"slip {name} {style.reported_as} {style.region}"
    if key not in setting.memory:
        numbers: list[Numbers] = []
        whole = True
        try:
            for candidate in SLIPS[name][0](setting, style):
                numbers.append(candidate)
        except (UndecidedError, InputError):
            whole = False  # said in the notes: not computed
        setting.memory[key] = numbers, whole
    found: tuple[list[Numbers], bool] = setting.memory[key]
    return found
