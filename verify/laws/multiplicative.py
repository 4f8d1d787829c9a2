"""The law of a sum of logarithms of whole numbers: the atoms multiply instead of adding.

V = log(m1) + ... + log(mn) = log(m1 * ... * mn): the mass of log m is the n-fold convolution over products of
the mass of one observation. Points of this law are the whole numbers m, in their order;
:meth:`MultiplicativeSum.value` is log m.

Source: T. M. Apostol, *Introduction to Analytic Number Theory* (1976), section 2.6 (Dirichlet convolution).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, ClassVar

from verify.arithmetic.ball import balls
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.series import product_power
from verify.errors import NotRational, UndecidedError
from verify.laws.atoms import MOST_LOOKED, Atoms
from verify.laws.base import Number
from verify.laws.builders import GUARD_BITS, in_balls
from verify.laws.built import BuiltLaw
from verify.laws.table import Table

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

MAX_NUMBER = 200_000
"""Largest whole number up to which masses are convolved."""


@dataclass(frozen=True)
class MultiplicativeSum(BuiltLaw):
    """The law of the product of n whole-number observations, on the scale of its logarithm.

    Attributes
    ----------
    one : Atoms
        The observation; its y is the whole number itself.
    at : Exact
        The parameter value.
    n : int
        Number of observations.
    """

    one: Atoms
    at: Exact
    n: int = 1

    name: ClassVar[str] = "sum of logarithms of whole numbers"
    source: ClassVar[str] = "Apostol 1976, section 2.6"
    lattice: ClassVar[bool] = True
    what: ClassVar[str] = "mass"
    plain_points: ClassVar[bool] = False

    @property
    def support(self) -> tuple[Any, Any]:
        """Smallest and largest product."""
        first, last = self.one.first or 1, self.one.last
        return first**self.n, None if last is None else last**self.n

    def atom(self, v: int, direction: int) -> int:
        """First product at v or beyond it in a direction; points off the support are returned as they are."""
        while v >= self.support[0] and not self._beyond(v, strictly=True) and not self._reached(v):
            v += direction
        return v

    def _reached(self, v: int) -> bool:
        """Whether n whole numbers of the observation multiply to v (exact)."""
        if self.one.first == 1 and self.one.has(v):
            return True
        known: list[int] = self.one.cache.get(("reached", self.n), [])
        if len(known) < v:
            points = range(1, self._length(v) + 1)
            known = self.one.cache["reached", self.n] = product_power([int(self.one.has(m)) for m in points], self.n)
        return known[v - 1] > 0

    def value(self, A: Any, v: int) -> Number:
        """The value of V at the point v: its logarithm."""
        return A.log(A.real(v))

    def density(self, A: Any, v: int) -> Number:
        """Mass of the product v."""
        if v < self.support[0] or self._beyond(v, strictly=True):
            return A.real(0)
        return A.real(self._table(A, v).raw[v - 1]) + 0

    def cdf(self, A: Any, v: int) -> Number:
        """P(product <= v)."""
        if v < self.support[0]:
            return A.real(0)
        return A.real(1) if self._beyond(v) else A.real(self._table(A, v).below[v - 1]) + 0

    def sf(self, A: Any, v: int) -> Number:
        """P(product > v) = 1 - P(product <= v), which leans on the normalisation."""
        return A.real(0) if self._beyond(v) else 1 - self.cdf(A, v)

    def shortfall(self, A: Any, v: int) -> Number:
        """E[(m - V); V <= v] for V the logarithm of the product and m its mean."""
        if v < self.support[0] or self._beyond(v):
            return A.real(0)
        table = self._table(A, v)
        return self.expectation(A) * table.below[v - 1] - self._log_means(A, table)[v - 1]

    def _log_means(self, A: Any, table: Table) -> list[Number]:
        key = ("log means", A.prec, self.at, self.n)
        sums: list[Number] = self.one.cache.get(key, [])
        if len(sums) < len(table.raw):
            sums, total = [], A.real(0)
            for m, mass in enumerate(table.raw, start=1):
                total = total + A.log(A.real(m)) * mass
                sums.append(total)
            self.one.cache[key] = sums
        return sums

    def expectation(self, A: Any) -> Number:
        """E[V], from the derived log-normaliser or the masses of a finite support."""
        return self.n * self._moment(A, 0)

    def spread(self, A: Any) -> Number:
        """Standard deviation of V, from the derived log-normaliser or the masses of a finite support."""
        return A.sqrt(self.n * self._moment(A, 1))

    def _moment(self, A: Any, which: int) -> Number:
        expr = (self.one.mean, self.one.variance)[which]
        if expr is None:
            return self._finite_moments(A)[which]
        return evaluate(expr, A, {self.one.parameter: A.real(self.at)})

    def _finite_moments(self, A: Any) -> tuple[Number, Number]:
        key = ("log moments", A.prec, self.at)
        if key not in self.one.cache:
            masses = self._masses(A, self.at, self._last())
            weighted = [(A.log(A.real(m)), mass) for m, mass in enumerate(masses, start=1) if self.one.has(m)]
            mean = sum((log * mass for log, mass in weighted), A.real(0))
            self.one.cache[key] = mean, sum(((log - mean) * (log - mean) * mass for log, mass in weighted), A.real(0))
        found: tuple[Number, Number] = self.one.cache[key]
        return found

    def _last(self) -> int:
        """Largest number of one observation."""
        last = self.one.last
        if last is None or last > MAX_NUMBER:
            end = "without end" if last is None else f"up to {last}"
            raise UndecidedError(f"the whole numbers of one observation go {end} (at most {MAX_NUMBER} are listed)")
        return last

    def _masses(self, A: Any, at: Exact, length: int) -> list[Number]:
        """Masses of one observation at 1, ..., length: nothing off its support, a kernel divided by its sum."""
        one = self.one
        masses = [one.masses(A, at, m, m)[0] if one.has(m) else A.real(0) for m in range(1, length + 1)]
        if one.normalised:
            return masses
        total = self._total(A, at)
        return [mass / total for mass in masses]

    def _total(self, A: Any, at: Exact) -> Number:
        """Sum of a kernel over its support."""
        one, key = self.one, ("total", A.prec, at)
        if key not in one.cache:
            points = range(one.first or 1, self._last() + 1)
            one.cache[key] = sum((one.masses(A, at, m, m)[0] for m in points if one.has(m)), A.real(0))
        total: Number = one.cache[key]
        return total

    def _beyond(self, v: int, *, strictly: bool = False) -> bool:
        last = self.support[1]
        return last is not None and (v > last if strictly else v >= last)

    def _table(self, A: Any, v: int) -> Table:
        if not in_balls(A):
            raise NotRational("masses of a law on logarithms are computed in balls")
        key = ("products", A.prec, self.at, self.n)
        known: Table | None = self.one.cache.get(key)
        if known is None or known.end < v:
            known = self.one.cache[key] = self._build(A.prec, v)
        return known

    def _build(self, prec: int, v: int) -> Table:
        length = self._length(v)
        base = self.one.cache.setdefault("base", self.at)
        with balls(prec + GUARD_BITS + 2 * self.n.bit_length()) as A:
            powers = self._powers(A, base, length)
            if base == self.at:
                return Table(1, powers, 1, complete=False)
            factor, exponent = self._tilt(A, base)
            front = A.power(factor, self.n)
            raw = [
                mass if mass == 0 else mass * front * A.exp(exponent * A.log(A.real(m)))
                for m, mass in enumerate(powers, start=1)
            ]
            return Table(1, raw, 1, complete=False)

    def _length(self, v: int) -> int:
        if v > MAX_NUMBER:
            raise UndecidedError(
                f"the table of products would reach {v} (at most {MAX_NUMBER}); a lighter tail or smaller n would help"
            )
        return min(MAX_NUMBER, max(64, 1 << (v + v // 4).bit_length()))

    def _powers(self, A: Any, base: Exact, length: int) -> list[Number]:
        key = ("product powers", A.prec, self.n)
        if len(self.one.cache.get(key, [])) < length:
            self.one.cache[key] = product_power(self._masses(A, base, length), self.n)
        found: list[Number] = self.one.cache[key]
        return found[:length]

    def _tilt(self, A: Any, base: Exact) -> tuple[Number, Number]:
        """Return (C, e) with mass(m; at) = C * m**e * mass(m; base)."""
        share = A.real(1) if self.one.normalised else self._total(A, base) / self._total(A, self.at)
        found: list[tuple[int, Number]] = []
        first, last = self.one.first or 1, self.one.last
        for m in range(first, first + MOST_LOOKED if last is None else last + 1):
            low, high = self.one.masses(A, base, m, m)[0], self.one.masses(A, self.at, m, m)[0]
            if self.one.has(m) and low > 0 and high > 0:
                found.append((m, share * high / low))
            if len(found) == 2:
                break
        else:
            raise UndecidedError(f"fewer than two atoms of one observation were found from {first} on")
        (m0, r0), (m1, r1) = found
        step = A.log(A.real(m1)) - A.log(A.real(m0))
        exponent = A.log(r1 / r0) / step
        return r0 / A.exp(exponent * A.log(A.real(m0))), exponent
