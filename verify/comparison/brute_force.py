"""Second opinion: brute force from the formula itself, never from the law.

The formula is evaluated in doubles at every atom that matters and its masses are convolved n times; a
continuous density is integrated (see ``continuous.py``). The side conditions are then solved on the resulting
table.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from verify.comparison.atoms import Masses, atoms_that_matter, convolution_power, on_grid
from verify.comparison.continuous import continuous_opinion
from verify.comparison.formula import ends_of_support, log_density, rejects_large_v
from verify.comparison.question import Answer, Question
from verify.comparison.table_search import Table, inside_ends, one_sided_end, outside_ends
from verify.comparison.walker import values
from verify.errors import NotAttempted

Array = Any
Numbers = dict[str, float]


def brute_force_opinion(ask: Question) -> Answer:
    """Cutoffs, fractions and the expectations of the proven test from the formula.

    Raises
    ------
    NotAttempted
        Beyond the limits of the method: too many atoms, no common grid, an unknown function.
    ArithmeticError
        When the masses do not add up or the table has no solution.
    """
    with np.errstate(all="ignore"):
        if ask.density.parsed_support.kind == "integers":
            return _lattice(ask)
        return continuous_opinion(ask)


# -- lattice -----------------------------------------------------------------------------------------------


def _lattice(ask: Question) -> Answer:
    ones = [_observations(ask, limit) for limit in ask.limits]
    note = ""
    if ask.n == 1:
        rows = [(values(ask.statistic, {ask.density.x.name: x}) + 0.0 * x, masses) for x, masses in ones]
        places, weights = _merged(rows)
    else:
        grids = [on_grid(values(ask.statistic, {ask.density.x.name: x}) + 0.0 * x, masses) for x, masses in ones]
        found = [grid for grid in grids if grid is not None]
        if len(found) < len(ones):
            raise NotAttempted("the values of T have no common grid, so their masses cannot be convolved on one")
        sums = [convolution_power(one, ask.n, np.exp(-_depth(ask))) for one in found]
        places, weights = _aligned(sums)
        note = "" if all(total.exact_tails for total in sums) else "convolved by FFT: tails below 1e-16 are lost"
    large = ask.form == "one-sided" and rejects_large_v(ask, lambda x, t: log_density(ask, x, t), ones[0][0])
    return Answer(_solve_table(ask, places, weights, large) | _evaluate(ask, places, weights, large), note)


def _depth(ask: Question) -> float:
    """How far below its peak, in natural logarithms, a mass still matters."""
    return 60.0 - float(np.log(min(ask.levels)))


def _observations(ask: Question, t: float) -> tuple[Array, Array]:
    """The x that matter at a parameter value, and their masses."""
    lower, upper = ends_of_support(ask, t)
    table = ask.density.table
    if table is not None:
        x = lower + np.arange(len(table))
        known = np.log(np.array([float(weight) for weight in table]))
        heights = known + log_density(ask, x, t)
    else:
        x = atoms_that_matter(lambda place: log_density(ask, place, t), lower, upper, _depth(ask))
        heights = log_density(ask, x, t)
    if table is not None or ask.density.is_kernel:
        weights = np.exp(heights - np.max(heights))
        return x, weights / np.sum(weights)
    masses = np.exp(heights)
    if not abs(np.sum(masses) - 1) < 1e-6:
        raise ArithmeticError(
            f"the masses of the formula add up to {np.sum(masses):.9g} at {ask.density.t.name} = {t:g}"
        )
    return x, masses


def _merged(rows: list[tuple[Array, Array]]) -> tuple[Array, list[Array]]:
    """Masses of T under each limit over the union of its values; equal values are one atom."""
    union = np.unique(np.concatenate([places for places, _ in rows]))
    near = np.concatenate([[True], np.diff(union) > 1e-12 * np.maximum(np.abs(union[1:]), 1e-300)])
    union = union[near]
    weights = []
    for places, masses in rows:
        index = np.clip(
            np.searchsorted(union, places * (1 + 1e-13 * np.sign(places)), side="right") - 1,
            0,
            len(union) - 1,
        )
        weights.append(np.bincount(index, weights=masses, minlength=len(union)))
    return union, weights


def _aligned(sums: list[Masses]) -> tuple[Array, list[Array]]:
    """Masses under each limit over one common grid."""
    step = sums[0].step
    start = min(total.start for total in sums)
    offsets = [round((total.start - start) / step) for total in sums]
    length = max(offset + len(total.masses) for offset, total in zip(offsets, sums, strict=True))
    if length > 1 << 23:
        raise NotAttempted("the laws at the two limits lie too far apart for one table")
    weights = []
    for offset, total in zip(offsets, sums, strict=True):
        row = np.zeros(length)
        row[offset : offset + len(total.masses)] = total.masses
        weights.append(row)
    return start + step * np.arange(length), weights


def table_of(ask: Question, places: Array, weights: list[Array]) -> Table:
    """Rows and targets of the two side conditions."""
    if ask.point:
        centred = places - np.sum(places * weights[0]) / np.sum(weights[0])
        return Table(places, weights[0], centred * weights[0], (ask.levels[0], 0.0))
    return Table(places, weights[0], weights[1], (ask.levels[0], ask.levels[1]))


def _solve_table(ask: Question, places: Array, weights: list[Array], large: bool) -> Numbers:
    if ask.form == "one-sided":
        c, gamma = one_sided_end(places, weights[0], ask.levels[0], large)
        return {"c": c, "gamma": gamma}
    i, j, g1, g2 = (inside_ends if ask.inside else outside_ends)(table_of(ask, places, weights))
    return {"c1": float(places[i]), "c2": float(places[j]), "gamma1": g1, "gamma2": g2}


def _evaluate(ask: Question, places: Array, weights: list[Array], large: bool) -> Numbers:
    """Expectations of the proven test under the table's masses."""
    test, half = ask.test, 0.25 * _gap(places)
    if "c" in test:
        beyond = places > test["c"] + half if large else places < test["c"] - half
        phi = beyond + test["gamma"] * (np.abs(places - test["c"]) <= half)
    else:
        between = (places > test["c1"] + half) & (places < test["c2"] - half)
        outer = (places < test["c1"] - half) | (places > test["c2"] + half)
        phi = (between if ask.inside else outer).astype(float)
        phi = np.where(np.abs(places - test["c2"]) <= half, test.get("gamma2", 0.0), phi)
        phi = np.where(np.abs(places - test["c1"]) <= half, test["gamma1"], phi)
    found = {f"expectation{k}": float(np.sum(phi * row)) for k, row in enumerate(weights, 1)}
    if ask.point:
        found["expectation2"] = float(np.sum(phi * table_of(ask, places, weights).second))
    return found


def _gap(places: Array) -> float:
    return float(np.min(np.diff(places))) if len(places) > 1 else 1.0
