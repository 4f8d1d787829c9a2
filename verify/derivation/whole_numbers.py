"""On which lattice a discrete statistic lives: whole multiples of a span, or logarithms of whole numbers.

Everything here is exact: a span is found from rational values or it is not found.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from fractions import Fraction
from math import gcd, lcm
from typing import Any

import sympy as sp
from sympy import Expr, Symbol

Points = Mapping[int, tuple[Fraction, ...]]


@dataclass(frozen=True)
class Lattice:
    """``T = scale * Y + shift`` with Y a whole number.

    Attributes
    ----------
    scale, shift : Expr
        The affine map.
    origin, step : Fraction
        x = origin + step * y, where ``places`` is None.
    places : mapping or None
        The x's of each y.
    first, last : int or None
        Ends of the support of Y.
    """

    scale: Expr
    shift: Expr
    first: int | None
    last: int | None
    origin: Fraction = Fraction(0)
    step: Fraction = Fraction(1)
    places: Points | None = None


def affine(statistic: Expr, x: Symbol, low: int | None, high: int | None) -> Lattice | None:
    """Return the lattice of a statistic a x + b on the whole numbers low..high (turned round when it has no
    lower end).

    Examples
    --------
    >>> x = Symbol("x", integer=True)
    >>> affine(2*x + sp.pi, x, None, 0)
    Lattice(scale=-2, shift=pi, first=0, last=None, origin=Fraction(0, 1), step=Fraction(-1, 1), places=None)
    """
    a = sp.diff(statistic, x)
    if a.has(x) or a == 0:
        return None
    b = sp.expand(statistic - a * x)
    if b.has(x):
        return None
    if low is None and high is not None:
        return Lattice(-a, b, -high, None, step=Fraction(-1))
    return Lattice(a, b, low, high)


def on_finite_support(statistic: Expr, x: Symbol, xs: range) -> Lattice | None:
    """Return the lattice of any statistic on finitely many points; None when its values have no common span."""
    values = {k: statistic.subs(x, k) for k in xs}
    base = min(values.values(), key=lambda value: sp.N(value, 30))
    unit = next((value - base for value in values.values() if sp.simplify(value - base) != 0), None)
    if unit is None:
        return None
    ratios = {k: sp.simplify((value - base) / unit) for k, value in values.items()}
    if not all(ratio.is_Rational for ratio in ratios.values()):
        return None
    return _on_span(base, unit, {k: Fraction(int(r.p), int(r.q)) for k, r in ratios.items()})


def _on_span(base: Expr, unit: Expr, ratios: dict[int, Fraction]) -> Lattice:
    below = lcm(*(r.denominator for r in ratios.values()))
    common = gcd(*(int(r * below) for r in ratios.values()))
    places: dict[int, tuple[Fraction, ...]] = {}
    for k, ratio in ratios.items():
        y = int(ratio * below) // common
        places[y] = (*places.get(y, ()), Fraction(k))
    return Lattice(unit * common / below, base, 0, max(places), places=places)


class PolynomialPlaces(Points):
    """The x of each y for a polynomial y = p(x) that rises on x >= start, found by bisection as they are
    asked for.

    Parameters
    ----------
    polynomial : Poly
        Takes whole values; its coefficients around ``start`` are not negative.
    start : int
        The first x.
    mirrored : bool
        Whether -x has the same value as x.
    """

    def __init__(self, polynomial: sp.Poly, start: int, *, mirrored: bool = False) -> None:
        self._coefficients = [Fraction(int(c.p), int(c.q)) for c in polynomial.all_coeffs()]
        self._start, self._mirrored = start, mirrored

    def _value(self, x: int) -> Fraction:
        total = Fraction(0)
        for c in self._coefficients:
            total = total * x + c
        return total

    def get(self, y: int, default: Any = ()) -> Any:
        """Return the x's whose value is y."""
        low, high = self._start, self._start + 1
        while self._value(high) < y:
            high += high - low
        while high - low > 1:
            middle = (low + high) // 2
            low, high = (middle, high) if self._value(middle) <= y else (low, middle)
        for x in (low, high):
            if self._value(x) == y:
                return (Fraction(x), Fraction(-x)) if self._mirrored and x else (Fraction(x),)
        return default

    def __getitem__(self, y: int) -> tuple[Fraction, ...]:
        found: tuple[Fraction, ...] = self.get(y)
        return found

    def __iter__(self) -> Iterator[int]:
        raise TypeError("the places of an infinite lattice are not listed")

    def __len__(self) -> int:
        raise TypeError("an infinite lattice has no length")


def polynomial(statistic: Expr, x: Symbol, low: int | None, high: int | None) -> Lattice | None:
    """Return the lattice of a polynomial statistic that certainly rises from one end of an infinite support.

    It rises when its coefficients around the lower end are not negative. On all whole numbers it has to be
    even.
    """
    if high is not None or not statistic.is_polynomial(x):
        return None
    start = 0 if low is None else low
    poly = sp.Poly(statistic, x)
    if low is None and poly.compose(sp.Poly(-x, x)) != poly:
        return None
    lead = poly.LC()
    scaled = sp.Poly(poly.as_expr() / lead, x)
    if not all(c.is_Rational for c in scaled.all_coeffs()):
        return None
    shift = scaled.eval(start)
    moved = scaled.compose(sp.Poly(x + start, x)) - shift
    if any(c < 0 for c in moved.all_coeffs()):
        return None
    below = lcm(*(int(c.q) for c in moved.all_coeffs()))
    values = sp.Poly((scaled.as_expr() - shift) * below, x)
    return Lattice(
        lead / below, lead * shift, 0, None, places=PolynomialPlaces(values, start, mirrored=low is None)
    )


def logarithmic(statistic: Expr, x: Symbol, low: int | None, high: int | None) -> Lattice | None:
    """Return ``T = scale * log(y) + shift`` where y is a whole number that rises with x, else None."""
    if low is None:
        return None
    logs = [node for node in statistic.atoms(sp.log) if node.has(x)]
    if len(logs) != 1:
        return None
    mark = sp.Dummy("L")
    rest = sp.expand(statistic.subs(logs[0], mark))
    scale = rest.coeff(mark, 1)
    shift = sp.expand(rest - scale * mark)
    inner = logs[0].args[0]
    if scale.has(x) or shift.has(x) or shift.has(mark) or scale == 0 or not inner.is_polynomial(x):
        return None
    poly = sp.Poly(inner, x)
    moved = poly.compose(sp.Poly(x + low, x))
    if not all(c.is_Integer and c >= 0 for c in moved.all_coeffs()) or moved.eval(0) < 1:
        return None
    last = None if high is None else int(poly.eval(high))
    return Lattice(scale, shift, int(moved.eval(0)), last, places=PolynomialPlaces(poly, low))
