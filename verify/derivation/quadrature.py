"""Double-exponential quadrature in any arithmetic, for numerical looks only: it encloses nothing.

Source: H. Takahasi and M. Mori, "Double exponential formulas for numerical integration", Publ. RIMS 9
(1974) 721-741.
"""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction
from typing import Any

Integrand = Callable[[Any], Any]


def integral_from_zero(A: Any, f: Integrand, end: Any, step: Fraction = Fraction(1, 12)) -> Any:
    """Return the integral of f over (0, end); f may be singular at 0 as long as it is integrable.

    Examples
    --------
    >>> from verify.arithmetic.high import high
    >>> A = high(30)
    >>> bool(abs(integral_from_zero(A, lambda y: 1/A.sqrt(y), A.real(4)) - 4) < A.real(Fraction(1, 10**18)))
    True
    """

    def term(u: Any) -> Any:
        w = A.exp(-A.pi * _sinh(A, u))
        return f(end / (1 + w)) * end * A.pi * _cosh(A, u) * w / ((1 + w) * (1 + w))

    return _sum(A, term, step, Fraction(-9, 2), Fraction(7, 2))


def integral_below(A: Any, f: Integrand, end: Any, step: Fraction = Fraction(1, 24)) -> Any:
    """Return the integral of f over (-oo, end), for an f that falls off like a normal density and is smooth
    up to the end.

    Examples
    --------
    >>> from verify.arithmetic.high import high
    >>> A = high(30)
    >>> half = integral_below(A, lambda y: A.exp(-y*y), A.real(0))
    >>> bool(abs(2 * half - A.sqrt(A.pi)) < A.real(Fraction(1, 10**18)))
    True
    """

    def term(u: Any) -> Any:
        w = A.exp(u - A.exp(-u))
        return f(end - w) * w * (1 + A.exp(-u))

    return _sum(A, term, step, Fraction(-9, 2), Fraction(7, 2))


def _sum(A: Any, term: Integrand, step: Fraction, first: Fraction, last: Fraction) -> Any:
    count = int((last - first) / step)
    total = A.real(0)
    for k in range(count + 1):
        total = total + term(A.real(first + k * step))
    return total * A.real(step)


def _sinh(A: Any, u: Any) -> Any:
    return (A.exp(u) - A.exp(-u)) / 2


def _cosh(A: Any, u: Any) -> Any:
    return (A.exp(u) + A.exp(-u)) / 2
