"""Taylor series in balls: a formula and its first derivatives at a point, without writing the derivatives out.

The coefficients are enclosures; :func:`verify.arithmetic.evaluate.evaluate` walks the formula.

Source: A. Griewank and A. Walther, *Evaluating Derivatives* (2nd ed., 2008), chapter 13 (Taylor arithmetic).
"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from math import comb
from typing import Any

from flint import arb, arb_series, ctx

from verify.arithmetic.ball import Balls, balls
from verify.arithmetic.evaluate import evaluate
from verify.errors import UndecidedError, UnknownFunction

Ball = Any
Series = Any

BESSEL = ("besseli", "besselk")
METHODS = ("sin", "cos", "tan", "atan", "asin", "acos", "erf", "erfc", "erfi", "zeta")


class TaylorBalls:
    """Arithmetic of power series with ball coefficients, cut at a number of terms."""

    def __init__(self, prec: int, terms: int) -> None:
        self.prec, self.terms = prec, terms
        self._real = Balls(prec)

    def real(self, x: Any) -> Series:
        """A number as a constant series."""
        return x if isinstance(x, arb_series) else arb_series([self._real.real(x)], self.terms)

    @property
    def pi(self) -> Series:
        """The number pi."""
        return self.real(arb.pi())

    def exp(self, x: Series) -> Series:
        """Exponential."""
        return x.exp()

    def log(self, x: Series) -> Series:
        """Natural logarithm."""
        return x.log()

    def sqrt(self, x: Series) -> Series:
        """Square root."""
        return x.sqrt()

    def power(self, x: Series, k: Any) -> Series:
        """X to the power k."""
        if isinstance(k, int):
            return _whole_power(x, k) if k >= 0 else 1 / _whole_power(x, -k)
        return (self.real(k) * x.log()).exp()

    def gamma(self, x: Series) -> Series:
        """Gamma function."""
        return x.gamma()

    def factorial(self, k: Series) -> Series:
        """K! = Gamma(k + 1)."""
        return (k + 1).gamma()

    def function(self, name: str, *args: Series) -> Series:
        """A named function of one series.

        Raises
        ------
        UnknownFunction
            For a function whose series is not known.
        """
        if len(args) == 1 and name in METHODS:
            return getattr(args[0], name)()
        if name == "loggamma":
            return args[0].lgamma()
        if name in ("sinh", "cosh", "tanh"):
            return _hyperbolic(name, args[0].exp())
        if name in BESSEL and args[0].length() <= 1:
            return _composed(_bessel_derivatives(name, args[0][0], args[1][0], self.terms), args[1])
        raise UnknownFunction(f"no Taylor series of the function {name} is known")


def _whole_power(x: Series, k: int) -> Series:
    result = arb_series([1], ctx.cap)
    for _ in range(k.bit_length()):
        if k & 1:
            result = result * x
        k >>= 1
        if k:
            x = x * x
    return result


def _bessel_derivatives(name: str, nu: Ball, z: Ball, terms: int) -> list[Ball]:
    """Taylor coefficients at z by the orders around nu: I^(k) = 2**-k times the sum of C(k, j) I_(nu - k + 2 j).

    For K there is a factor (-1)**k. Source: DLMF 10.29.5.
    """
    bessel = arb.bessel_i if name == "besseli" else arb.bessel_k
    at = {m: bessel(z, nu + m) for m in range(1 - terms, terms)}
    sign = 1 if name == "besseli" else -1
    return [
        sign**k * sum((comb(k, j) * at[2 * j - k] for j in range(k + 1)), arb(0)) / (arb(2) ** k * arb.fac_ui(k))
        for k in range(terms)
    ]


def _composed(outer: list[Ball], inner: Series) -> Series:
    """A Taylor series at the constant term of another series, put into it."""
    distance = inner - inner[0]
    result = arb_series([0], ctx.cap)
    for coefficient in reversed(outer):
        result = result * distance + coefficient
    return result


def _hyperbolic(name: str, up: Series) -> Series:
    down = 1 / up
    if name == "tanh":
        return (up - down) / (up + down)
    return (up - down if name == "sinh" else up + down) / 2


def taylor(expr: Any, variable: str, at: Any, terms: int, prec: int) -> list[Ball]:
    """Return the first Taylor coefficients of a formula of one variable at an exact point.

    Raises
    ------
    UnknownFunction
        For a function whose series is not known.
    UndecidedError
        At a pole.

    Examples
    --------
    >>> import sympy as sp
    >>> t = sp.Symbol("t")
    >>> [round(float(coefficient.mid()), 6) for coefficient in taylor(sp.exp(t) / t, "t", sp.Integer(2), 3, 64)]
    [3.694528, 1.847264, 0.923632]
    """
    with balls(prec) as B, _cut(terms):
        A = TaylorBalls(prec, terms)
        try:
            series = A.real(evaluate(expr, A, {variable: arb_series([B.real(at), arb(1)], terms)}))
        except ValueError as error:  # how python-flint says that a divisor vanishes at the point
            raise UndecidedError(f"{expr} has no Taylor series at {at}") from error
        return [series[k] for k in range(terms)]


@contextmanager
def _cut(terms: int) -> Iterator[None]:
    """Cut every series in the block at so many terms."""
    kept = ctx.cap
    ctx.cap = terms
    try:
        yield
    finally:
        ctx.cap = kept
