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
from verify.laws.atoms import Atoms
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
        """E[V] from the derived log-normaliser."""
        return self.n * self._moment(A, self.one.mean)

    def spread(self, A: Any) -> Number:
        """Standard deviation of V from the derived log-normaliser."""
        return A.sqrt(self.n * self._moment(A, self.one.variance))

    def _moment(self, A: Any, expr: Any) -> Number:
        return evaluate(expr, A, {self.one.parameter: A.real(self.at)})

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
        if v > MAX_NUMBER:
            raise UndecidedError(
                f"the table of products would reach {v} (at most {MAX_NUMBER}); a lighter tail or smaller n would help"
            )
        length = min(MAX_NUMBER, max(64, 1 << (v + v // 4).bit_length()))
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

    def _powers(self, A: Any, base: Exact, length: int) -> list[Number]:
        key = ("product powers", A.prec, self.n)
        if len(self.one.cache.get(key, [])) < length:
            masses = self.one.masses(A, base, 1, length)
            self.one.cache[key] = product_power(masses, self.n)
        found: list[Number] = self.one.cache[key]
        return found[:length]

    def _tilt(self, A: Any, base: Exact) -> tuple[Number, Number]:
        """Return (C, e) with mass(m; at) = C * m**e * mass(m; base)."""
        found: list[tuple[int, Number]] = []
        m = self.one.first or 1
        while len(found) < 2:
            low, high = self.one.masses(A, base, m, m)[0], self.one.masses(A, self.at, m, m)[0]
            if low > 0 and high > 0:
                found.append((m, high / low))
            m += 1
        (m0, r0), (m1, r1) = found
        step = A.log(A.real(m1)) - A.log(A.real(m0))
        exponent = A.log(r1 / r0) / step
        return r0 / A.exp(exponent * A.log(A.real(m0))), exponent
