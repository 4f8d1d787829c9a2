"""The n-fold convolution of one polynomial on [0, 1], exactly, piece by piece.

With p a polynomial, the integral of p(y) exp(-s y) over [0, 1] is P(1/s) - exp(-s) Q(1/s), where
P(u) = sum of p^(k)(0) u**(k+1) and Q(u) = sum of p^(k)(1) u**(k+1) end after finitely many terms. In the n-th
power, exp(-j s) u**m belongs to (x - j)**(m-1) / (m-1)! for x > j and 0 before. For p = 1 this is the law of
a sum of n uniform variables.

Source: W. Feller, *An Introduction to Probability Theory and Its Applications*, vol. 2 (2nd ed., 1971),
sections I.9 (sums of uniform variables) and XIII.1-3 (Laplace transforms); the argument above is the proof.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import comb
from typing import Any

from flint import arb, arb_poly

Ball = Any

DENSITY, CUMULATIVE, TWICE = 0, 1, 2
"""The convolution, its integral from the left end, and the integral of that."""


class PolynomialSum:
    """Convolution of n copies of a polynomial on [0, 1], read from the left end.

    Parameters
    ----------
    polynomial : arb_poly
        The polynomial; it counts as 0 outside [0, 1].
    n : int
        Number of copies.

    Examples
    --------
    >>> from verify.arithmetic.ball import balls
    >>> with balls(64):
    ...     three = PolynomialSum(arb_poly([1]), 3)
    ...     print(three.value(arb("1.5"), DENSITY).str(6), three.value(arb(1), CUMULATIVE).str(6, radius=False))
    0.750000 0.166667
    """

    def __init__(self, polynomial: Any, n: int) -> None:
        self.n = n
        self._low = {0: arb_poly([1]), 1: _transformed(polynomial.coeffs())}
        self._high = {0: arb_poly([1]), 1: _transformed(polynomial(arb_poly([1, 1])).coeffs())}
        self._pieces: dict[int, tuple[Any, Any, Any]] = {}

    def value(self, x: Ball, kind: int) -> Ball:
        """Return one of the three functions at a point; 0 before the left end."""
        begun = [j for j in range(self.n + 1) if not x <= j]
        for j in begun:
            _power(self._high, j)
        return sum((self._piece(j)[kind]((x - j).max(arb(0))) for j in reversed(begun)), arb(0))

    def _piece(self, j: int) -> tuple[Any, Any, Any]:
        if j not in self._pieces:
            power = _power(self._low, self.n - j) * _power(self._high, j) * ((-1) ** j * comb(self.n, j))
            density = _back(power.coeffs())
            once = density.integral()
            self._pieces[j] = density, once, once.integral()
        return self._pieces[j]


def _power(powers: dict[int, Any], k: int) -> Any:
    """The k-th power, by one multiplication where the one before is known."""
    if k not in powers:
        powers[k] = powers[k - 1] * powers[1] if k - 1 in powers else powers[1] ** k
    return powers[k]


def _transformed(coefficients: Sequence[Ball]) -> Any:
    """Sum of k! c_k u**(k+1)."""
    out, factorial = [arb(0)], arb(1)
    for k, c in enumerate(coefficients):
        factorial = factorial * k if k else factorial
        out.append(c * factorial)
    return arb_poly(out)


def _back(coefficients: Sequence[Ball]) -> Any:
    """Sum of a_m x**(m-1) / (m-1)!."""
    out, factorial = [], arb(1)
    for k, a in enumerate(coefficients[1:]):
        factorial = factorial * k if k else factorial
        out.append(a / factorial)
    return arb_poly(out)


def reflected(polynomial: Any) -> Any:
    """p(1 - y)."""
    return polynomial(arb_poly([1, -1]))
