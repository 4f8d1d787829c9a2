"""The law of a sum from the derived log normaliser alone: one of two routes that check each other.

With A the log normaliser as a function of the natural parameter, E exp(z (V - n start)) under eta is
exp(n (A(eta + z) - A(eta)) - z n start), also for complex z. Where the support has one end only, the contour is
chosen far from eta, so that what the Fourier series adds from beyond twice the point is below 2**-bits.

Source: J. Abate and W. Whitt, *Queueing Systems* 10 (1992) 5-88 (from memory).
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

from verify.arithmetic.acceleration import epsilon
from verify.arithmetic.ball import Balls, balls, complex_ball, midpoint
from verify.arithmetic.complex_ball import ComplexBalls
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.fourier_series import FourierSeries
from verify.laws.pushed import Frame
from verify.laws.shape import Shape

if TYPE_CHECKING:
    from verify.problem.numbers import Exact

Number = Any

DOUBLINGS = 4
"""How often more bits are taken, at most, for a normaliser that cancels."""


@dataclass(frozen=True, eq=False)
class ByNormaliser:
    """U = sign * (V - n * start), V the sum of n observations.

    Attributes
    ----------
    one, at, n
        The observation, the parameter value, the number of observations.
    frame : Frame
        How U is measured.
    bits : int
        Error aimed at, 2**-bits: not a bound.
    """

    one: Shape
    at: Exact
    n: int
    frame: Frame
    bits: int
    kept: dict[Any, FourierSeries] = field(default_factory=dict, repr=False)

    def read(self, u: Number, order: int) -> Number:
        """Return the density of U at u, P(U <= u), or E (u - U)+ (orders 0, 1, 2)."""
        with balls(3 * self.bits + 128) as A:
            return self._series(A, u).value(u, order)

    def _series(self, A: Balls, u: Number) -> FourierSeries:
        if self.frame.cell is None:
            return self._along(A, 2 * u, (self.bits + 16) * A.log(A.real(2)) / (2 * u), 1, 2 * self.bits)
        if "series" not in self.kept:
            cells = self.n * self.frame.cells
            period = cells * A.real(self.frame.cell)
            self.kept["series"] = self._along(A, period, 1 / period, cells, self.bits)
        return self.kept["series"]

    def _along(self, A: Balls, period: Number, tilt: Number, cells: int, bits: int) -> FourierSeries:
        sign, names = self.frame.sign, {self.one.parameter: A.real(self.at)}
        eta, start = evaluate(self.one.natural, A, names), self.n * A.real(self.frame.start)
        here = self._log(A, complex_ball(eta))

        def transform(k: int) -> Any:
            z = sign * complex_ball(-tilt, 2 * A.pi * k / period)
            return (self.n * (self._log(A, eta + z) - here) - z * start).exp()

        mean = sign * (self.n * evaluate(self.one.mean, A, names) - start)
        return FourierSeries(transform, period, tilt, cells, bits, epsilon, A.real(1), mean)

    def _log(self, A: Balls, z: Any) -> Any:
        """The log normaliser at the midpoint of a complex ball, with more bits where it cancels."""
        z, value = midpoint(z), None
        for bits in (A.prec << k for k in range(DOUBLINGS)):
            with balls(bits):
                value = evaluate(self.one.log_transform, ComplexBalls(bits, analytic=False), {"z": z})
                if value.is_finite() and value.rel_accuracy_bits() > A.prec // 2:
                    break
        return value
