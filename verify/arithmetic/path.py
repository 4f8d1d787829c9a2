"""A path of integration for the inversion of a transform, and the transform's values on it.

Only exp(-z v) and a kernel depend on the point v and on the parameter value, so the values N(z)**n at the nodes
are computed once. What the rule and the cut leave is bounded anew for each v.

Source: as :mod:`verify.arithmetic.inversion` and :mod:`verify.arithmetic.gauss`.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from typing import Any

from flint import acb, arb

from verify.arithmetic.ball import Balls, balls, midpoint
from verify.arithmetic.gauss import BOUND_BITS, Panel, panels_along
from verify.arithmetic.transforms import FallingOnLines, InTerms, Transform
from verify.errors import UndecidedError

Ball = Any
HEIGHT = 2
FARTHEST = 1 << 24
MARGIN = 12
"""Each part of a path is off by 2**-MARGIN less than what is wanted of the whole."""

REMEMBERED = 4
"""Points v whose exponentials are kept."""


@dataclass(frozen=True)
class Leg:
    """A straight part of a path: start + r toward, and the terms of N(z)**n that are taken along it (None: all)."""

    start: Any
    toward: Any
    which: tuple[int, ...] | None


@dataclass(frozen=True)
class Cut:
    """What is left out beyond the end of a leg, where the integrand falls exponentially.

    Attributes
    ----------
    end : acb
        The end of the leg.
    front : arb
        For a term of rate r the integral beyond is at most front exp((r - v) x) / abs(r - v), x = Re end; on a
        vertical line front exp(-v x).
    rate : arb or None
        The rate r; None on a vertical line.
    decay : arb or None
        On a vertical line, how fast the integrand falls.
    """

    end: Any
    front: Ball
    rate: Ball | None
    decay: Ball | None = None

    def falls(self, v: Ball) -> Ball:
        """How fast the integrand falls at v for each unit of the path; not positive where it does not."""
        if self.rate is None:
            return self.decay
        return (v - self.rate if self.end.real > 0 else self.rate - v) / arb(2).sqrt()

    def beyond(self, v: Ball) -> Ball:
        """The bound at v, without a kernel."""
        if self.rate is None:
            return self.front * (-v * self.end.real).exp()
        if not self.falls(v) > 0:
            return arb("inf")
        gap = self.rate - v
        return self.front * (gap * self.end.real).exp() / abs(gap)


@dataclass(eq=False)
class Path:
    """A path with its rule.

    Attributes
    ----------
    n, prec : int
        Number of observations; bits of the values.
    c : arb
        Where the path crosses the real axis; exact.
    v : arb
        The point it was made for; exact.
    places, weights : list of acb
        Nodes, exact; weight times N(z)**n (or some of its terms) at each.
    shares : list of tuple
        (panel, how much of a bound over its ellipse the rule may be off).
    cuts : list of Cut
        What is left out.
    """

    n: int
    prec: int
    c: Ball
    v: Ball
    places: list[Any] = field(default_factory=list)
    weights: list[Any] = field(default_factory=list)
    shares: list[tuple[Panel, Ball]] = field(default_factory=list)
    cuts: list[Cut] = field(default_factory=list)
    _kept: dict[Any, list[Any]] = field(default_factory=dict)

    def near(self, v: Ball) -> bool:
        """Whether it makes sense to try this path at v: its terms fall there."""
        return all(cut.falls(midpoint(v)) > 0 for cut in self.cuts)

    def values(self, v: Ball) -> list[Any]:
        """Weight times N(z)**n exp((c - z) v) at each node."""
        if not v.is_exact():
            return self._values(v)
        key = tuple(map(int, v.man_exp()))
        if key not in self._kept:
            if len(self._kept) >= REMEMBERED:
                self._kept.pop(next(iter(self._kept)))
            self._kept[key] = self._values(v)
        return self._kept[key]

    def _values(self, v: Ball) -> list[Any]:
        return [weight * ((self.c - z) * v).exp() for z, weight in zip(self.places, self.weights, strict=True)]

    def slack(self, v: Ball, kernel_bound: Callable[[Any], Ball], kernel_beyond: Callable[[Any, Ball], Ball]) -> Ball:
        """Bound of what the rule and the cuts leave of the integral of N(z)**n exp((c - z) v) times a kernel.

        A panel's bound was taken at the point for which the path was made; exp(-z v) changes it by at most the
        largest exp(-(v - v0) Re z) there.
        """
        moved, total = v - self.v, arb(0)

        def factor(box: Any) -> Ball:
            return (-moved * box.real).exp().upper() * kernel_bound(box)

        for panel, share in self.shares:
            total += share * panel.bound(factor)
        for cut in self.cuts:
            total += cut.beyond(v) * kernel_beyond(cut.end, cut.falls(v))
        return (total * (self.c * v).exp()).abs_upper()


def path_through(transform: Transform, n: int, v: Ball, c: Ball, eta: Ball, bits: int) -> Path:
    """Return a path that crosses the real axis at c, with a rule that serves v and points near it to so many bits.

    Raises
    ------
    UndecidedError
        When the point lies on, or too near, a corner of the density of the sum.
    """
    path = Path(n, bits, midpoint(c), midpoint(v))
    with balls(BOUND_BITS) as A:
        goal = _goal(A, transform, path, eta)
        for leg, length in _legs(A, transform, path, goal):
            panels = panels_along(_bound(A, transform, path, leg, eta), leg.start, leg.toward, length, arb(1) / 2, goal)
            if not panels:
                raise UndecidedError("the transform was not bounded around the path of its inversion")
            for panel in panels:
                _take(transform, path, leg, panel)
    return path


def _take(transform: Transform, path: Path, leg: Leg, panel: Panel) -> None:
    """Add a panel to a path: its nodes with the values of the transform there."""
    nodes, share = panel.rule(path.prec)
    path.shares.append((panel, share))
    with balls(path.prec) as A:
        for place, weight in nodes:
            path.places.append(place)
            path.weights.append(weight * _value(A, transform, path, leg, place))


def _value(A: Balls, transform: Transform, path: Path, leg: Leg, z: Any) -> Any:
    """N(z)**n, or those of its terms that are taken along a leg."""
    if leg.which is None:
        return transform.value(A, z, False) ** path.n
    assert isinstance(transform, InTerms)
    return transform.terms(A, z, path.n, leg.which)


def _goal(A: Balls, transform: Transform, path: Path, eta: Ball) -> int:
    """Bits of absolute accuracy: relative to the integrand at c, and to the gap between c and the pole."""
    size = transform.value(A, acb(path.c), False).real ** path.n * (-path.v * path.c).exp()
    gap = abs(eta - path.c)
    narrow = max(0, -_exponent(gap)) if gap > 0 else 0
    return path.prec + MARGIN + narrow - _exponent(size)


def _exponent(size: Ball) -> int:
    mantissa, exponent = size.mid().man_exp()
    return int(exponent) + int(mantissa).bit_length()


def _bound(A: Balls, transform: Transform, path: Path, leg: Leg, eta: Ball) -> Callable[[Any], tuple[Ball, Ball]]:
    """Bounds over a box: of N(z)**n exp(-z v) or some of its terms; of the kernels, relative to the one at c."""
    gap = abs(eta - path.c).upper()

    def bound(z: Any) -> tuple[Ball, Ball]:
        if leg.which is None:
            size = transform.size(A, z) ** path.n * (-path.v * z.real).exp()
        else:
            assert isinstance(transform, InTerms)
            size = transform.terms_size(A, z, path.n, leg.which, path.v)
        least = (eta - z).abs_lower()
        return size.upper(), (1 + gap / least) ** 2 if least > 0 else arb("inf")

    return bound


def _legs(A: Balls, transform: Transform, path: Path, goal: int) -> Iterator[tuple[Leg, Ball]]:
    """The legs of a path with their lengths; what lies beyond them is added to the cuts of the path."""
    start = acb(path.c)
    if isinstance(transform, FallingOnLines):
        yield Leg(start, acb(0, 1), None), _line_end(A, transform, path, goal)
        return
    assert isinstance(transform, InTerms)
    rates = transform.rates(A, path.n)
    yield Leg(start, acb(0, 1), None), arb(HEIGHT)
    left = tuple(j for j, rate in enumerate(rates) if rate > path.v)
    right = tuple(j for j, rate in enumerate(rates) if rate < path.v)
    if len(left) + len(right) < len(rates):
        raise UndecidedError("the point lies on (or too near) a corner of the density of the sum")
    corner = acb(path.c, HEIGHT)
    for which, side in ((left, -1), (right, 1)):
        if which:
            yield Leg(corner, acb(side, 1), which), _ray_end(A, transform, path, rates, which, side, goal)


def _ray_end(
    A: Balls, transform: InTerms, path: Path, rates: list[Ball], which: tuple[int, ...], side: int, goal: int
) -> Ball:
    """Length of a diagonal ray beyond which little is left."""
    wanted, length = arb(2) ** -goal, 8
    while length < FARTHEST:
        end = acb(path.c + side * length, HEIGHT + length)
        if side * end.real >= 1:
            fronts = [transform.bound(A, path.n, j, end.real, end.imag) * arb(2).sqrt() for j in which]
            cuts = [Cut(end, front, rates[j]) for j, front in zip(which, fronts, strict=True)]
            if sum((cut.beyond(path.v) for cut in cuts), arb(0)) < wanted:
                path.cuts.extend(cuts)
                return arb(length)
        length += max(1, length // 4)
    raise UndecidedError("the point lies too near a corner of the density of the sum")


def _line_end(A: Balls, transform: FallingOnLines, path: Path, goal: int) -> Ball:
    """Height of a vertical line beyond which little is left."""
    wanted, top = arb(2) ** -goal, 2
    shift = (A.real(transform.shift) * path.n * path.c).exp()
    while top < FARTHEST:
        bound, rate = transform.vertical_bound(A, path.n, arb(top))
        cut = Cut(acb(path.c, top), bound / rate * shift, None, rate)
        if cut.beyond(path.v) < wanted:
            path.cuts.append(cut)
            return arb(top)
        top += max(1, top // 4)
    raise UndecidedError("the transform falls too slowly to be cut")
