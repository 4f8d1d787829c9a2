"""Cutoffs and fractions in double precision, by plain search over SciPy's distributions: shares no code
with the package.
"""

from dataclasses import dataclass

import numpy as np
from scipy import optimize, stats

Test = dict[str, float]


@dataclass(frozen=True)
class Setup:
    """Laws of V at the limits, the levels, where the test rejects, and whether V is discrete."""

    laws: tuple
    levels: tuple
    region: str
    discrete: bool

    @property
    def point(self) -> bool:
        return len(self.laws) == 1


def solve(setup: Setup) -> Test:
    """Return the test of a two-sided setup."""
    return _lattice(setup) if setup.discrete else _continuous(setup)


def _lattice(setup: Setup) -> Test:
    """Try every pair of support points near the right size: the pair whose fractions lie in (0, 1] is the
    test.
    """
    low = max(int(min(law.ppf(1e-7) for law in setup.laws)) - 1, 0)
    high = int(max(law.ppf(1 - 1e-7) for law in setup.laws)) + 1
    points = np.arange(low, high + 1)
    masses = [law.pmf(points) for law in setup.laws]
    rows = [masses[0], masses[0] * (points - setup.laws[0].mean())] if setup.point else masses
    inside = [np.concatenate([[0.0], np.cumsum(row)]) for row in rows]
    if setup.point:
        wanted = [1 - setup.levels[0], 0.0]
    else:
        wanted = [level if setup.region == "inside" else 1 - level for level in setup.levels]
    first = np.cumsum(masses[0])
    for i in range(len(points) - 1):
        ends = np.searchsorted(first, [(first[i - 1] if i else 0.0) + wanted[0], first[i] + wanted[0]])
        for j in range(max(i + 1, ends[0] - 1), min(ends[1] + 2, len(points))):
            matrix = np.array([[row[i], row[j]] for row in rows])
            right = np.array([want - (total[j] - total[i + 1]) for want, total in zip(wanted, inside, strict=True)])
            if abs(np.linalg.det(matrix)) < 1e-300:
                continue
            g = np.linalg.solve(matrix, right)
            if np.all(g > 0) and np.all(g <= 1):
                g = g if setup.region == "inside" else 1 - g
                return {
                    "c1": int(points[i]),
                    "c2": int(points[j]),
                    "gamma1": float(g[0]),
                    "gamma2": float(g[1]),
                }
    raise AssertionError("no window")


def _continuous(setup: Setup) -> Test:
    def off(ends: np.ndarray) -> list[float]:
        a, b = ends
        out = []
        for law, level in zip(setup.laws, setup.levels, strict=True):
            inside = law.cdf(b) - law.cdf(a)
            out.append(inside - (level if setup.region == "inside" else 1 - level))
        if setup.point:
            law = setup.laws[0]
            grid = np.linspace(a, b, 20001)
            out.append(float(np.trapezoid((grid - law.mean()) * law.pdf(grid), grid)))
        return out

    low, high = min(law.mean() for law in setup.laws), max(law.mean() for law in setup.laws)
    spread = max(law.std() for law in setup.laws)
    lower, upper = sorted(setup.laws, key=lambda law: law.mean())[:: len(setup.laws) - 1 or 1][:2] * (
        3 - len(setup.laws)
    )
    starts = [np.array([lower.ppf(0.95), upper.ppf(0.05)]), np.array([lower.ppf(0.05), upper.ppf(0.95)])]
    for start in starts:
        found, _, ok, _ = optimize.fsolve(off, start, full_output=True, xtol=1e-12)
        if ok == 1 and found[0] < found[1] and max(map(abs, off(found))) < 1e-9:
            return {"c1": float(found[0]), "c2": float(found[1])}
    for wide in (0.05, 0.3, 1.0, 2.0, 3.0):
        for middle in ((low + high) / 2, (low * high) ** 0.5 if low > 0 else low, low, high):
            start = np.array([middle - wide * spread, middle + wide * spread])
            found, _, ok, _ = optimize.fsolve(off, start, full_output=True, xtol=1e-12)
            if ok == 1 and found[0] < found[1] and max(map(abs, off(found))) < 1e-9:
                return {"c1": float(found[0]), "c2": float(found[1])}
    raise AssertionError("no window")


def tail(law, level: float, *, above: bool, discrete: bool) -> tuple[float, float | None]:
    """Return the cutoff (and fraction) of a one-sided test."""
    if not discrete:
        return float(law.isf(level) if above else law.ppf(level)), None
    near = int(law.isf(level)) if above else int(law.ppf(level))
    for c in range(near - 2, near + 3):
        beyond = law.sf(c) if above else law.cdf(c - 1)
        gamma = (level - beyond) / law.pmf(c)
        if 0 < gamma <= 1:
            return c, float(gamma)
    raise AssertionError("no cutoff")


def poisson(mean: float):
    return stats.poisson(mean)


def binomial(trials: int, p: float):
    return stats.binom(trials, p)


def gamma(shape: float, scale: float):
    return stats.gamma(shape, scale=scale)


def normal(mean: float, variance: float):
    return stats.norm(mean, variance**0.5)
