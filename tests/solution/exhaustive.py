"""A second way to the window that shares nothing with the package: exact fractions, every pair of cutoffs tried."""

from __future__ import annotations

from fractions import Fraction
from itertools import combinations
from math import comb

Masses = dict[int, Fraction]


def binomial(trials: int, p: Fraction) -> Masses:
    return {k: comb(trials, k) * p**k * (1 - p) ** (trials - k) for k in range(trials + 1)}


def negative_binomial(size: int, p: Fraction, last: int) -> Masses:
    return {k: comb(size + k - 1, k) * p**size * (1 - p) ** k for k in range(last + 1)}


def windows(rows: list[dict[int, Fraction]], targets: list[Fraction]):
    """Yield every (c1, c2, psi1, psi2) in canonical form whose window has the two sums asked for.

    rows[i][k] is the weight of k in the i-th side condition of the window function psi (1 inside).
    """
    points = sorted(rows[0])
    for c in points:
        if rows[0][c] and targets[0] / rows[0][c] <= 1:
            g = targets[0] / rows[0][c]
            if g > 0 and g * rows[1][c] == targets[1]:
                yield c, c, g, g
    for c1, c2 in combinations(points, 2):
        inner = [sum(row[k] for k in points if c1 < k < c2) for row in rows]
        (a, b), (c, d) = [(row[c1], row[c2]) for row in rows]
        e, f = (target - whole for target, whole in zip(targets, inner, strict=True))
        determinant = a * d - b * c
        if determinant == 0:
            continue
        g1, g2 = (e * d - b * f) / determinant, (a * f - e * c) / determinant
        if 0 < g1 <= 1 and 0 < g2 <= 1:
            yield c1, c2, g1, g2


def inside(first: Masses, second: Masses, levels: tuple[Fraction, Fraction]):
    """The only test that rejects inside with these expectations, as (c1, c2, phi1, phi2)."""
    (found,) = windows([first, second], list(levels))
    return found


def outside(first: Masses, second: Masses, levels: tuple[Fraction, Fraction]):
    """The only test that rejects outside with these expectations (finite supports)."""
    (found,) = windows([first, second], [1 - level for level in levels])
    return found[0], found[1], 1 - found[2], 1 - found[3]


def point(masses: Masses, level: Fraction):
    """The only unbiased test of a point null (finite supports)."""
    mean = sum(k * mass for k, mass in masses.items())
    moment = {k: (k - mean) * mass for k, mass in masses.items()}
    (found,) = windows([masses, moment], [1 - level, Fraction(0)])
    return found[0], found[1], 1 - found[2], 1 - found[3]


def above(masses: Masses, level: Fraction):
    """The one-sided test that rejects large values, as (c, phi)."""
    beyond = Fraction(0)
    for k in sorted(masses, reverse=True):
        if beyond + masses[k] >= level:
            return k, (level - beyond) / masses[k]
        beyond += masses[k]
    raise AssertionError("the level is above 1")
