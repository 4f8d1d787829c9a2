"""The law of a sum of lattice observations, built from the formula itself.

All laws of a family share their weights: P_t(V = k) is the n-th power of the weight series at one parameter
value, times C**n rho**k. So one power serves every parameter value at one precision, and its table of sums
every question.

- Finite support: everything is in the table.
- Support bounded below: coefficients up to a degree are complete; the upper tail is 1 minus the lower part,
  which leans on the normalisation of the density.
- Two-sided support: one observation is cut where its tails are below 2**-bits, proved by tilting; the sum of
  n lacks at most n times that mass, wherever it lies, and each answer is widened by it.

Source: E. L. Lehmann and J. P. Romano, *Testing Statistical Hypotheses* (3rd ed., 2005), Lemma 2.7.2 (the sum
is again a one-parameter exponential family); bounds in :mod:`verify.laws.tilting`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, ClassVar

from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.series import either_sign
from verify.laws.atoms import Atoms
from verify.laws.base import Number
from verify.laws.builders import ball_table, exact_table, in_balls, moments, widen
from verify.laws.built import BuiltLaw

if TYPE_CHECKING:
    from verify.laws.table import Table
    from verify.problem.numbers import Exact


@dataclass(frozen=True)
class LatticeSum(BuiltLaw):
    """The law of the sum of n independent copies of a lattice observation.

    Attributes
    ----------
    one : Atoms
        The observation, shared by all laws of the family.
    at : Exact
        The parameter value.
    n : int
        Number of observations.
    """

    one: Atoms
    at: Exact
    n: int = 1

    name: ClassVar[str] = "lattice sum"
    source: ClassVar[str] = "Lehmann and Romano 2005, Lemma 2.7.2; n-th power of the weight series"
    lattice: ClassVar[bool] = True
    what: ClassVar[str] = "mass"

    @property
    def support(self) -> tuple[Any, Any]:
        """Smallest and largest lattice point."""
        first, last = self.one.first, self.one.last
        return (None if first is None else self.n * first, None if last is None else self.n * last)

    def atom(self, v: int, direction: int) -> int:
        """First point with positive mass at v or beyond it; points off the support are returned as they are."""
        first, last = self.support
        if not self.one.has_gaps or first is None or last is None:
            return v
        mask = self.one.sum_points(self.n)
        while first <= v <= last and not mask >> (v - first) & 1:
            v += direction
        return v

    def _table(self, A: Any, v: int | None = None) -> Table:
        return ball_table(self, A.prec, v) if in_balls(A) else exact_table(self, v)

    def density(self, A: Any, v: int) -> Number:
        """Mass at v; exactly 0 off the support.

        Source: P. Henrici, *Applied and Computational Complex Analysis* 1 (1974), section 1.6.
        """
        first, last = self.support
        if (first is not None and v < first) or (last is not None and v > last):
            return A.real(0)
        table = self._table(A, v)
        raw = table.raw[v - table.start] if table.start <= v <= table.end else 0
        return widen(A, table, raw, touched=table.cut_touches(v))

    def cdf(self, A: Any, v: int) -> Number:
        """P(V <= v)."""
        if self._beyond(v):
            return A.real(1)
        table = self._table(A, v)
        return widen(A, table, table.lower(v), touched=table.cut_touches(v))

    def sf(self, A: Any, v: int) -> Number:
        """P(V > v): a sum where the table is complete, else 1 minus the lower part at guarded precision."""
        if self._beyond(v):
            return A.real(0)
        table = self._table(A, v)
        if not table.complete:
            return 1 - self.cdf(A, v)
        return widen(A, table, table.upper(v), touched=table.exact_below is not None)

    def shortfall(self, A: Any, v: int) -> Number:
        """E[(m - V); V <= v] = E[(V - m); V > v], summed on the side where it does not cancel."""
        first = self.support[0]
        if self._beyond(v) or (first is not None and v < first):
            return A.real(0)
        table = self._table(A, v)
        mean = self.expectation(A)
        if table.complete and mean < v:
            part = widen(A, table, table.upper(v, moment=True) - mean * table.upper(v), touched=False)
            return part + self._lost(A, table) if table.exact_below is not None else part
        part = widen(A, table, mean * table.lower(v) - table.lower(v, moment=True), touched=False)
        return part + self._lost(A, table) if table.cut_touches(v) else part

    def _lost(self, A: Any, table: Table) -> Number:
        """Ball around 0 that contains E[(V - m); a missing outcome]: by Cauchy-Schwarz at most sd *
        sqrt(missing).
        """
        return either_sign(self.spread(A) * A.sqrt(A.real(table.missing)))

    def _beyond(self, v: int) -> bool:
        last = self.support[1]
        return last is not None and v >= last

    def expectation(self, A: Any) -> Number:
        """E[V] = n E[Y]."""
        return self.n * self._moment(A, 0)

    def variance(self, A: Any) -> Number:
        """Variance of V = n times that of Y."""
        return self.n * self._moment(A, 1)

    def spread(self, A: Any) -> Number:
        """Standard deviation of V."""
        return A.sqrt(self.variance(A))

    def _moment(self, A: Any, which: int) -> Number:
        expr = (self.one.mean, self.one.variance)[which]
        if expr is None:
            return moments(self, A)[which]
        return evaluate(expr, A, {self.one.parameter: A.real(self.at)})
