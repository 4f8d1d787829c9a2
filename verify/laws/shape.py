"""One continuous observation, cut into pieces on which its statistic is monotone.

Source: E. L. Lehmann and J. P. Romano, *Testing Statistical Hypotheses* (3rd ed., 2005), section 2.7.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from fractions import Fraction
from typing import TYPE_CHECKING, Any

from verify.arithmetic.ball import balls, midpoint, to_fraction
from verify.arithmetic.compiled import compiled
from verify.arithmetic.evaluate import evaluate
from verify.errors import UndecidedError
from verify.laws.tilting import RATIO_BITS, candidates

if TYPE_CHECKING:
    from verify.arithmetic.transforms import Transform
    from verify.problem.numbers import Exact

Number = Any

REGULAR, FAR, SINGULAR = "regular", "far", "singular"
"""Ends of a piece: the density is bounded there; the statistic runs to infinity; neither (or not shown)."""

DEVIATION = "mean_"
"""Name of the symbol that stands for E[T(X)] in ``Shape.centred``."""

TRIED = 3
"""How many second parameter values are tried for a cut, the most promising first."""

FARTHEST = 1 << 22
"""How far towards an end (in powers of two, or units) a cut is looked for."""


DEEPEST = 1 << 14
"""The same in powers of two towards an end other than 0, from which so many bits must be told apart."""


@dataclass(frozen=True)
class Piece:
    """An interval of x on which the statistic is strictly monotone.

    Attributes
    ----------
    low, high : Exact or None
        Its ends; None for an infinite one.
    at_low, at_high : Exact or None
        Limits of the statistic there; None for an infinite one.
    rising : bool
        Whether the statistic increases.
    inverse : SymPy expression
        x as a function of the symbol v.
    """

    low: Any
    high: Any
    at_low: Any
    at_high: Any
    rising: bool
    inverse: Any


@dataclass(frozen=True, eq=False)
class Shape:
    """The density of one observation and its statistic.

    Attributes
    ----------
    constant, core : SymPy expressions
        The density is their product; ``constant`` does not contain the variable.
    statistic, slope : SymPy expressions
        T(x) and T'(x).
    centred : SymPy expression
        (mean_ - T) * core.
    variable, parameter : str
        Names.
    pieces : tuple of Piece
        They cover the support.
    space : pair
        Ends of the parameter interval; None for an infinite one.
    mean, variance : SymPy expressions
        Of T(X), in terms of the parameter.
    natural : SymPy expression
        The natural parameter in terms of the parameter.
    transform : Transform or None
        For sums of several observations.
    pushed : SymPy expression or None
        The density of T in terms of the symbol v, without ``constant``, where T is monotone on the support.
    log_concave : bool
        Whether the logarithm of ``pushed`` is shown to be concave.
    log_transform : SymPy expression or None
        The log normaliser in terms of the natural parameter, the symbol z.
    """

    constant: Any
    core: Any
    statistic: Any
    slope: Any
    centred: Any
    variable: str
    parameter: str
    pieces: tuple[Piece, ...]
    space: tuple[Any, Any]
    mean: Any
    variance: Any
    natural: Any = None
    transform: Transform | None = None
    pushed: Any = None
    log_concave: bool = False
    log_transform: Any = None
    cache: dict[Any, Any] = field(default_factory=dict, repr=False)

    @property
    def text(self) -> str:
        """The density of one observation as text."""
        return str(self.constant * self.core)

    @property
    def ends(self) -> tuple[Any, Any]:
        """Smallest and largest value of the statistic; None for an infinite one."""
        lows = [p.at_low if p.rising else p.at_high for p in self.pieces]
        highs = [p.at_high if p.rising else p.at_low for p in self.pieces]
        return _extreme(lows, largest=False), _extreme(highs, largest=True)

    def density(self, A: Any, at: Exact, x: Number) -> Number:
        """Density of one observation at x."""
        names = {self.parameter: A.real(at), self.variable: x}
        return evaluate(self.constant, A, names) * evaluate(self.core, A, names)

    def end_kind(self, at: Exact, piece: Piece, *, upper: bool) -> str:
        """Return what kind of end a piece has at one parameter value."""
        end, value = (piece.high, piece.at_high) if upper else (piece.low, piece.at_low)
        if value is None:
            return FAR
        if end is None:
            return SINGULAR
        key = ("end", at, piece, upper)
        if key not in self.cache:
            with balls(RATIO_BITS) as A:
                self.cache[key] = REGULAR if self.density(A, at, A.real(end)).is_finite() else SINGULAR
        kind: str = self.cache[key]
        return kind

    def far_cut(self, at: Exact, piece: Piece, bits: int, *, upper: bool) -> tuple[Fraction, Any]:
        """Return x near a far end, and a ball bounding the mass between it and the end.

        The likelihood ratio against a second parameter value is monotone in the statistic; where it falls
        towards the end, the mass beyond x is at most its value at x, because the density at the second value
        has mass at most 1.

        Raises
        ------
        UndecidedError
            When no second parameter value bounds this tail.
        """
        key = ("cut", at, piece, bits, upper)
        if key not in self.cache:
            self.cache[key] = self._search_cut(at, piece, bits, upper=upper)
        found: tuple[Fraction, Any] = self.cache[key]
        return found

    def _search_cut(self, at: Exact, piece: Piece, bits: int, *, upper: bool) -> tuple[Fraction, Any]:
        with balls(RATIO_BITS) as A:
            goal = A.power(A.real(2), -bits)
            others = self._tilts(A, at, piece, goal, upper=upper)
            for _, other in sorted(others, key=lambda entry: entry[0])[:TRIED]:
                found = self._march(A, at, other, piece, goal, upper=upper)
                if found is not None:
                    return found
        raise UndecidedError("no bound was found for a tail of one observation inside the parameter space")

    def _tilts(self, A: Any, at: Exact, piece: Piece, goal: Any, *, upper: bool) -> list[tuple[float, Fraction]]:
        """Parameter values towards which the likelihood ratio falls at an end, each with how far T must go to the goal.

        The logarithm of the ratio is linear in T, with the difference of the natural parameters as its slope.
        """
        start = A.real(_place(A, piece, 1, upper=upper))
        names = {self.parameter: A.real(at)}
        here, towards = evaluate(self.natural, A, names), 1 if piece.rising == upper else -1
        density, found = self.density(A, at, start), []
        for other in candidates(at, self.space, far=True):
            slope = towards * (here - evaluate(self.natural, A, {self.parameter: A.real(other)}))
            if slope < 0:
                reach = (A.log(goal) - A.log(density / self.density(A, other, start))) / slope
                if reach.is_finite():
                    found.append((float(reach.mid()), other))
        return found

    def _march(
        self, A: Any, at: Exact, other: Exact, piece: Piece, goal: Any, *, upper: bool
    ) -> tuple[Fraction, Any] | None:
        """The first of some growing steps at which the ratio is below the goal, and the ratio there."""
        ratio, end = self._ratio(A, at, other), piece.high if upper else piece.low
        bits, farthest = (0, FARTHEST) if end is None or end == 0 else (1, DEEPEST)
        step = 1
        while step <= farthest:
            with balls(RATIO_BITS + bits * step) as fine:
                x = _place(fine, piece, step, upper=upper)
                bound = ratio(fine.real(x))
            if bound < goal:
                return x, bound.upper()
            step += max(1, step // 8)
        return None

    def _ratio(self, A: Any, at: Exact, other: Exact) -> Callable[[Number], Number]:
        """Density at ``at`` over density at ``other``, as a function of x."""
        names = [{self.parameter: A.real(t)} for t in (at, other)]
        above, below = (compiled(self.core, A, self.variable, values) for values in names)
        front = evaluate(self.constant, A, names[0]) / evaluate(self.constant, A, names[1])
        return lambda x: front * above(x) / below(x)


def _place(A: Any, piece: Piece, step: int, *, upper: bool) -> Fraction:
    """Return the step-th point on the way to an end of a piece."""
    end, other = (piece.high, piece.low) if upper else (piece.low, piece.high)
    start = _rational(A, other)
    if end is None:
        base = Fraction(0) if start is None else start
        return base + step if upper else base - step
    stop = to_fraction(midpoint(A.real(end)))
    gap = Fraction(1) if start is None else abs(stop - start)
    shift = gap * Fraction(1, 2**step)
    return stop - shift if upper else stop + shift


def _rational(A: Any, end: Any) -> Fraction | None:
    return None if end is None else to_fraction(midpoint(A.real(end)))


def _extreme(ends: list[Any], *, largest: bool) -> Any:
    if any(end is None for end in ends):
        return None
    best = ends[0]
    with balls(128) as A:
        for end in ends[1:]:
            if (A.real(end) > A.real(best)) if largest else (A.real(end) < A.real(best)):
                best = end
    return best
