"""First opinion: SciPy's distribution objects and root finders, as a competent statistician would write it.

Two-sided forms: a window with tail coordinate s starts at the s-quantile under the first limit and ends where
what is left of the complement, rest - s, begins; the second side condition is a monotone function of s, and
``brentq`` finds its
root. On a lattice the two fractions then come from a 2 x 2 linear system. Point null: the second law is the
size-biased one, which turns E[V phi] = alpha E[V] into an expectation. All on the scale of Y; the cutoffs are
mapped to V.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
from scipy.optimize import brentq

from verify.comparison.question import Answer, Question
from verify.comparison.scipy_laws import lost_tail_hint, scipy_law, size_biased

Numbers = dict[str, float]
MOST_U = 700.0
"""exp(700) is near the largest double."""
SMALL_TAIL = 1e-12
"""Below this level a class's generic tail functions matter: ppf(1 - q) sees q only to 1e-16."""


def scipy_opinion(ask: Question) -> Answer:
    """Cutoffs, fractions and the expectations of the proven test, as SciPy computes them.

    Raises
    ------
    NotAttempted
        When SciPy has no such law.
    """
    law = scipy_law(ask.law, ask.parameters[0])
    hint = lost_tail_hint(law.frozen.dist) if min(ask.levels) < SMALL_TAIL else ""
    numbers = _expectations(ask)
    try:
        return Answer(numbers | _solve(ask, law), hint)
    except (ArithmeticError, ValueError, RuntimeError, np.linalg.LinAlgError) as error:
        return Answer(numbers, hint, failure=str(error))  # nan where a number is needed, or brentq gave up


def _solve(ask: Question, law: Any) -> Numbers:
    lattice = hasattr(law.frozen.dist, "pmf")
    if ask.form == "one-sided":
        return _one_sided(ask, law, lattice)
    if ask.point and ask.law == "normal":
        c1, c2 = law.lower_quantile(ask.levels[0] / 2), law.upper_quantile(ask.levels[0] / 2)
        return _to_v(ask, {"c1": c1, "c2": c2})
    other = size_biased(ask.law, ask.parameters[0]) if ask.point else scipy_law(ask.law, ask.parameters[1])
    targets = (ask.levels[0], ask.levels[0] if ask.point else ask.levels[1])
    return _to_v(ask, (_lattice_window if lattice else _window)(law, other, targets, ask.inside))


# -- one-sided ---------------------------------------------------------------------------------------------


def _rejects_large_y(ask: Question) -> bool:
    """Large Q(t) makes V large; the null t <= t0 is left where Q(t) is large when Q rises."""
    return (ask.null_below == ask.rising) == (ask.scale > 0)


def _one_sided(ask: Question, law: Any, lattice: bool) -> Numbers:
    alpha, large = ask.levels[0], _rejects_large_y(ask)
    c = _number(law.upper_quantile(alpha) if large else law.lower_quantile(alpha), "the quantile at alpha")
    if not lattice:
        return _to_v(ask, {"c": c})
    gamma = (alpha - (law.above(c) if large else law.below(c - 1))) / law.at(c)
    return _to_v(ask, {"c": c, "gamma": _number(gamma, "gamma")})


# -- two-sided ---------------------------------------------------------------------------------------------


def _shares(rest: float, u: float) -> tuple[float, float]:
    """The two tails s and rest - s, both to their own relative accuracy: s = rest / (1 + exp(-u))."""
    return rest / (1 + np.exp(-u)), rest / (1 + np.exp(u))


def _search(excess: Callable[[float], float]) -> float:
    """Root of the second side condition on the scale of :func:`_shares`: doubling, then brentq."""
    at_zero = excess(0.0)
    span = 1.0
    while span < MOST_U:
        for u in (-span, span):
            if excess(u) * at_zero <= 0:
                return float(brentq(excess, min(u, 0.0), max(u, 0.0), xtol=1e-15, rtol=8.9e-16, maxiter=500))
        span *= 2
    raise ArithmeticError("the second side condition does not change its sign")


def _window(law: Any, other: Any, targets: tuple[float, float], inside: bool) -> Numbers:
    """Continuous law."""
    rest = 1 - targets[0] if inside else targets[0]

    def ends(u: float) -> tuple[float, float]:
        left, right = _shares(rest, u)
        return _number(law.lower_quantile(left), "c1"), _number(law.upper_quantile(right), "c2")

    def excess(u: float) -> float:
        c1, c2 = ends(u)
        mass = other.below(c2) - other.below(c1) if inside else other.below(c1) + other.above(c2)
        return _number(mass - targets[1], "the second side condition")

    c1, c2 = ends(_search(excess))
    return {"c1": c1, "c2": c2}


def _lattice_window(law: Any, other: Any, targets: tuple[float, float], inside: bool) -> Numbers:
    """Lattice law: the search with the fractions that the first condition gives, then the 2 x 2 system."""
    rest = 1 - targets[0] if inside else targets[0]

    def excess(u: float) -> float:
        left, right = _shares(rest, u)
        tails = _left_tail(law, other, left) + _right_tail(law, other, right)
        return _number((1 - tails if inside else tails) - targets[1], "the second side condition")

    left, right = _shares(rest, _search(excess))
    first = _clip(law.lower_quantile(left), *law.support()), _clip(law.upper_quantile(right), *law.support())
    return _nearest_pair(law, other, targets, inside, first)


def _left_tail(law: Any, other: Any, s: float) -> float:
    """What the lower tail of size s under one law is under the other, the atom at its end shared out."""
    c = _clip(law.lower_quantile(s), *law.support())
    return float(other.below(c - 1) + (s - law.below(c - 1)) / law.at(c) * other.at(c))


def _right_tail(law: Any, other: Any, s: float) -> float:
    c = _clip(law.upper_quantile(s), *law.support())
    return float(other.above(c) + (s - law.above(c)) / law.at(c) * other.at(c))


def _nearest_pair(
    law: Any, other: Any, targets: tuple[float, float], inside: bool, first: tuple[float, float]
) -> Numbers:
    """Of the pairs around the one found, the first whose fractions lie in [0, 1] most nearly."""
    steps = [(0, 0), (1, 0), (-1, 0), (0, 1), (0, -1), (1, 1), (-1, -1), (1, -1), (-1, 1)]
    best: Numbers = {}
    worst = np.inf
    low, high = law.support()
    for left, right in steps:
        c1, c2 = first[0] + left, first[1] + right
        if not low <= c1 <= c2 <= high:
            continue
        g1, g2 = _fractions(law, other, targets, inside, c1, c2)
        miss = max(-g1, g1 - 1, -g2, g2 - 1, 0.0)
        if miss < worst:
            worst, best = miss, {"c1": c1, "c2": c2, "gamma1": g1, "gamma2": g2}
        if miss == 0:
            break
    if not np.isfinite(worst):
        raise ArithmeticError("the fractions came out as nan")
    return best


def _fractions(
    law: Any, other: Any, targets: tuple[float, float], inside: bool, c1: float, c2: float
) -> tuple[float, float]:
    laws = (law, other)
    if inside:
        known = [x.below(c2 - 1) - x.below(c1) if c2 > c1 else 0.0 for x in laws]
    else:
        known = [x.below(c1 - 1) + x.above(c2) for x in laws]
    if c1 == c2:  # one atom, one fraction
        g = float((targets[0] - known[0]) / law.at(c1))
        return g, g
    system = np.array([[x.at(c1), x.at(c2)] for x in laws])
    g1, g2 = np.linalg.solve(system, np.array(targets) - np.array(known))
    return float(g1), float(g2)


# -- the proven test, evaluated ----------------------------------------------------------------------------


def _expectations(ask: Question) -> Numbers:
    """E phi at each limit (and E[(V - E V) phi] for a point null) of the proven test."""
    laws = [scipy_law(ask.law, p) for p in ask.parameters]
    test = _to_y(ask)
    found = {f"expectation{i}": _expectation(law, test, ask) for i, law in enumerate(laws, 1)}
    if ask.point:
        found["expectation2"] = _moment(ask, laws[0], test, found["expectation1"])
    return found


def _moment(ask: Question, law: Any, test: Numbers, expectation: float) -> float:
    """E[(V - E V) phi], where V = scale Y + shift."""
    if ask.law == "normal":  # E[(Y - mean); Y outside] = variance (f(c2) - f(c1))
        return float(ask.scale * law.frozen.var() * (law.at(test["c2"]) - law.at(test["c1"])))
    biased = _expectation(size_biased(ask.law, ask.parameters[0]), test, ask)
    return float(ask.scale * law.frozen.mean() * (biased - expectation))


def _expectation(law: Any, test: Numbers, ask: Question) -> float:
    lattice = "gamma" in test or "gamma1" in test
    step = 1 if lattice else 0
    if "c" in test:
        c, large = test["c"], _rejects_large_y(ask)
        tail = law.above(c) if large else law.below(c - step)
        return float(tail + (test["gamma"] * law.at(c) if lattice else 0.0))
    c1, c2 = test["c1"], test["c2"]
    edges = (
        test["gamma1"] * law.at(c1) + test.get("gamma2", 0.0) * (law.at(c2) if c2 != c1 else 0.0) if lattice else 0.0
    )
    if ask.inside:
        return float((law.below(c2 - step) - law.below(c1) if c2 > c1 else 0.0) + edges)
    return float(law.below(c1 - step) + law.above(c2) + edges)


# -- scales ------------------------------------------------------------------------------------------------


def _to_v(ask: Question, y: Numbers) -> Numbers:
    """Map cutoffs from Y to V; a negative scale exchanges the ends."""
    v = {name: float(ask.scale * x + ask.shift) if name.startswith("c") else float(x) for name, x in y.items()}
    return _exchange(v) if ask.scale < 0 else v


def _to_y(ask: Question) -> Numbers:
    v = _exchange(ask.test) if ask.scale < 0 else ask.test
    lattice = "gamma" in v or "gamma1" in v
    y = {name: (x - ask.shift) / ask.scale if name.startswith("c") else x for name, x in v.items()}
    return {name: float(round(x)) if lattice and name.startswith("c") else x for name, x in y.items()}


def _exchange(numbers: Numbers) -> Numbers:
    return {name.translate(str.maketrans("12", "21")): x for name, x in numbers.items()}


def _clip(v: float, low: float, high: float) -> float:
    return min(max(_number(v, "a quantile"), low), high)


def _number(x: Any, what: str) -> float:
    if np.isnan(x):
        raise ArithmeticError(f"{what} came out as nan")
    return float(x)
