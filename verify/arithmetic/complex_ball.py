"""Complex balls that know whether an integrator asks for an analytic function.

A rigorous integrator bounds a function on complex neighbourhoods of the path. Where a branch cut passes
through such a neighbourhood the bound would be false: the function must then answer "not finite".
``ComplexBalls(analytic=True)`` does.

Source: F. Johansson, "Numerical integration in arbitrary-precision ball arithmetic", ICMS 2018, section 2.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from flint import acb, arb

from verify.arithmetic.ball import Balls
from verify.errors import UnknownFunction

ComplexBall = Any


def undefined() -> ComplexBall:
    """Return the ball that says "no bound"."""
    return acb(arb("nan"), arb("nan"))


class ComplexBalls:
    """Arithmetic of complex balls; ``analytic`` refuses values on neighbourhoods that touch a branch cut.

    Parameters
    ----------
    prec : int
        Bits.
    analytic : bool
        Whether the caller asks for a bound on an analytic function.
    """

    def __init__(self, prec: int, *, analytic: bool) -> None:
        self.prec, self.analytic = prec, analytic
        self._real = Balls(prec)

    def real(self, x: Any) -> ComplexBall:
        """Return an exact number, or a ball, as a complex ball."""
        return x if isinstance(x, acb) else acb(self._real.real(x))

    @property
    def pi(self) -> ComplexBall:
        """The number pi."""
        return acb(arb.pi())

    def exp(self, x: ComplexBall) -> ComplexBall:
        """Exponential."""
        return x.exp()

    def log(self, x: ComplexBall) -> ComplexBall:
        """Principal logarithm, cut along the negative axis."""
        return x.log(analytic=self.analytic)

    def sqrt(self, x: ComplexBall) -> ComplexBall:
        """Principal square root, cut along the negative axis."""
        return x.sqrt(analytic=self.analytic)

    def power(self, x: ComplexBall, k: Any) -> ComplexBall:
        """X to the power k (principal, unless k is a Python int)."""
        return x**k if isinstance(k, int) else x.pow(self.real(k), analytic=self.analytic)

    def gamma(self, x: ComplexBall) -> ComplexBall:
        """Gamma function (its poles give no finite ball by themselves)."""
        return x.gamma()

    def factorial(self, k: ComplexBall) -> ComplexBall:
        """K! = Gamma(k + 1)."""
        return (k + 1).gamma()

    def erfc(self, x: ComplexBall) -> ComplexBall:
        """Complementary error function."""
        return x.erfc()

    def function(self, name: str, *args: ComplexBall) -> ComplexBall:
        """Evaluate a named function of a formula.

        Raises
        ------
        UnknownFunction
            For a function without a complex enclosure.
        """
        if name in ENTIRE_OR_MEROMORPHIC:
            return ENTIRE_OR_MEROMORPHIC[name](*args)
        if name in REAL_EXTENDED:
            return REAL_EXTENDED[name](args[0], self.analytic)
        if name in CUT:
            inside, value = CUT[name]
            return value(*args) if inside(*args) or not self.analytic else undefined()
        raise UnknownFunction(f"no complex enclosure is known for the function {name}")


def _method(name: str) -> Callable[[ComplexBall], ComplexBall]:
    return lambda x: getattr(x, name)()


ENTIRE_OR_MEROMORPHIC: dict[str, Callable[..., ComplexBall]] = {
    **{
        name: _method(name)
        for name in (
            "sin",
            "cos",
            "tan",
            "cot",
            "sec",
            "csc",
            "sinh",
            "cosh",
            "tanh",
            "coth",
            "sech",
            "csch",
            "erf",
            "erfc",
        )
    },
    "binomial": lambda n, k: (n + 1).gamma() * (k + 1).rgamma() * (n - k + 1).rgamma(),
    "beta": lambda a, b: a.gamma() * b.gamma() * (a + b).rgamma(),
    "zeta": lambda s: s.zeta(),
    "polygamma": lambda m, x: x.polygamma(m),
}
"""Functions that need no look at a cut."""

REAL_EXTENDED: dict[str, Callable[[ComplexBall, bool], ComplexBall]] = {
    "Abs": lambda x, analytic: x.real_abs(analytic=analytic),
    "sign": lambda x, analytic: x.real_sgn(analytic=analytic),
    "floor": lambda x, analytic: x.real_floor(analytic=analytic),
    "ceiling": lambda x, analytic: x.real_ceil(analytic=analytic),
}
"""Functions of a real variable that are analytic between their breaks."""


def _right(*args: ComplexBall) -> bool:
    return bool(args[-1].real > 0)


def _whole_order(nu: ComplexBall, z: ComplexBall) -> bool:
    return nu.unique_fmpz() is not None or _right(z)


CUT: dict[str, tuple[Callable[..., bool], Callable[..., ComplexBall]]] = {
    "loggamma": (_right, lambda x: x.lgamma()),
    "digamma": (_right, lambda x: x.digamma()),
    "besseli": (_whole_order, lambda nu, z: z.bessel_i(nu)),
    "besselj": (_whole_order, lambda nu, z: z.bessel_j(nu)),
    "besselk": (_right, lambda nu, z: z.bessel_k(nu)),
    "asin": (lambda x: bool(abs(x.real) < 1), _method("asin")),
    "acos": (lambda x: bool(abs(x.real) < 1), _method("acos")),
    "atan": (lambda x: bool(abs(x.imag) < 1), _method("atan")),
    "asinh": (lambda x: bool(abs(x.imag) < 1), _method("asinh")),
    "acosh": (lambda x: bool(x.real > 1), _method("acosh")),
    "atanh": (lambda x: bool(abs(x.real) < 1), _method("atanh")),
}
"""Functions with a cut: where they are certainly analytic, and their value."""
