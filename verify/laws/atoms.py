"""The masses of one lattice observation, read from its formula, its kernel or its table of weights.

The family's statistic is T = scale * Y + shift with Y a whole number. This file knows the masses of one Y at
any parameter value, and how two parameter values of one family compare: their mass ratio is C * rho**y for
every y, which is what a one-parameter exponential family means.

Source: E. L. Lehmann and J. P. Romano, *Testing Statistical Hypotheses* (3rd ed., 2005), section 3.4.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from itertools import chain
from typing import TYPE_CHECKING, Any

from verify.arithmetic.evaluate import evaluate
from verify.errors import UndecidedError

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

Number = Any

MOST_LOOKED = 4096
"""So many places are looked at for an atom where a support has no end."""

SHOWN = 12
"""So many weights of a table are named in its text."""


@dataclass(frozen=True, eq=False)
class Atoms:
    """Where one observation's Y can lie, and how to compute its masses.

    Attributes
    ----------
    constant, core : SymPy expressions
        The mass of one x is their product; ``constant`` does not contain the variable.
    variable, parameter : str
        The names of x and of the family's parameter.
    origin, step : Fraction
        x = origin + step * y, where the statistic is affine in x.
    places : mapping or None
        Otherwise: the x's of each y.
    first, last : int or None
        Smallest and largest y with positive mass; None where there is none.
    normalised : bool
        False for a kernel, whose masses still have to be divided by their sum (finite supports only).
    table : mapping or None
        Known weights by y, multiplied with the formula.
    space : pair
        Ends of the open parameter interval; None for an infinite one.
    mean, variance : SymPy expression or None
        Of one Y in terms of the parameter, where the support is infinite.
    """

    constant: Any
    core: Any
    variable: str
    parameter: str
    first: int | None
    last: int | None
    origin: Fraction = Fraction(0)
    step: Fraction = Fraction(1)
    places: Mapping[int, tuple[Fraction, ...]] | None = None
    normalised: bool = True
    table: Mapping[int, Fraction] | None = None
    space: tuple[Any, Any] = (None, None)
    mean: Any = None
    variance: Any = None
    cache: dict[Any, Any] = field(default_factory=dict, repr=False)

    @property
    def text(self) -> str:
        """The mass of one observation as text."""
        mass = str(self.constant * self.core)
        if self.table is None:
            return mass
        weights = [str(self.table[y]) for y in sorted(self.table)]
        shown = weights if len(weights) <= SHOWN else [*weights[:SHOWN], f"... ({len(weights)} in all)"]
        return f"{mass} times the weights {', '.join(shown)}"

    @property
    def has_gaps(self) -> bool:
        """Whether some lattice points between the first and the last have no mass."""
        if self.first is None or self.last is None or (self.places is None and self.table is None):
            return False
        return not all(self.has(y) for y in range(self.first, self.last + 1))

    def has(self, y: int) -> bool:
        """Whether one observation can be y, as far as its support and its table say."""
        if (self.first is not None and y < self.first) or (self.last is not None and y > self.last):
            return False
        return (self.table is None or bool(self.table.get(y))) and (self.places is None or bool(self.places.get(y)))

    def sum_points(self, n: int) -> int:
        """Return the points of the sum of n copies as bits of a whole number, bit 0 at n * first (exact)."""
        if self.first is None or self.last is None:
            raise ValueError("only a finite support has its points listed")
        known: dict[int, int] = self.cache.setdefault("sum points", {})
        if n not in known:
            steps = [y - self.first for y in range(self.first, self.last + 1) if self.has(y)]
            reached = 1
            for _ in range(n):
                shifted = [reached << step for step in steps]
                reached = 0
                for bits in shifted:
                    reached |= bits
            known[n] = reached
        return known[n]

    def masses(self, A: Any, at: Exact, low: int, high: int) -> list[Number]:
        """Return the masses of y = low, ..., high at a parameter value (up to the normaliser for a kernel)."""
        names = {self.parameter: A.real(at)}
        constant = evaluate(self.constant, A, names)
        return [constant * self._core(A, names, y) for y in range(low, high + 1)]

    def tilted(self, A: Any, at: Exact, low: int, high: int) -> list[Number]:
        """Return the same masses in balls, from those at the family's base value (evaluated once) times C *
        rho**y.
        """
        base = self.cache.setdefault("base", at)
        held = self.cache.setdefault("base masses", {})
        known = next((held[key] for key in held if key[:2] == (low, high) and key[2] >= A.prec), None)
        if known is None:
            known = held[low, high, A.prec] = self.masses(A, base, low, high)
        if base == at:
            return known
        C, rho = self.ratio(A, at, base, low)
        factor, out = C * A.power(rho, low), []
        for mass in known:
            out.append(mass * factor)
            factor = factor * rho
        return out

    def _core(self, A: Any, names: dict[str, Number], y: int) -> Number:
        if self.table is not None and not self.table.get(y):
            return A.real(0)
        xs = (self.origin + self.step * y,) if self.places is None else self.places.get(y, ())
        total = A.real(0)
        for x in xs:
            total = total + evaluate(self.core, A, {**names, self.variable: A.real(x)})
        return total if self.table is None else total * A.real(self.table[y])

    def ratio(self, A: Any, at: Exact, base: Exact, near: int) -> tuple[Number, Number]:
        """Return (C, rho) with mass(y; at) = C * rho**y * mass(y; base) for every y.

        Two atoms at or above ``near`` (or else below it) are read; the form of the family does the rest.

        Raises
        ------
        UndecidedError
            When fewer than two atoms are found near there.
        """
        upwards = range(near, near + MOST_LOOKED if self.last is None else self.last + 1)
        downwards = range(near - 1, near - MOST_LOOKED if self.first is None else self.first - 1, -1)
        found: list[tuple[int, Number]] = []
        for y in chain(upwards, downwards):
            below, above = self.masses(A, base, y, y)[0], self.masses(A, at, y, y)[0]
            if above > 0 and below > 0:
                found.append((y, above / below))
            if len(found) == 2:
                return _solve_ratio(A, sorted(found, key=lambda pair: pair[0]))
        raise UndecidedError(f"fewer than two atoms of one observation were found from {near} on")


def _solve_ratio(A: Any, found: list[tuple[int, Number]]) -> tuple[Number, Number]:
    (y0, r0), (y1, r1) = found
    rho = r1 / r0 if y1 - y0 == 1 else A.exp(A.log(r1 / r0) / A.real(y1 - y0))
    return r0 / A.power(rho, A.real(y0)), rho
