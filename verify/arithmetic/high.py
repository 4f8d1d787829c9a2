"""The door to mpmath: the same formulas at high precision in an engine that shares no code with the balls.

It proves nothing (mpmath rounds, it does not enclose); it is the second pair of eyes on a proven number. Each
arithmetic has an mpmath context of its own; the global one is never touched.
"""

from __future__ import annotations

from fractions import Fraction
from typing import Any

import mpmath

from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.evaluate import evaluate
from verify.errors import UnknownFunction


class High:
    """Real arithmetic of mpmath at a fixed number of decimal digits.

    Examples
    --------
    >>> A = High(30)
    >>> print(A.mp.nstr(A.gamma_q(3, A.real(2)), 10))
    0.6766764162
    """

    def __init__(self, digits: int) -> None:
        self.mp = mpmath.MPContext()
        self.mp.dps = digits

    def real(self, x: Any) -> Any:
        """Return an exact number, rounded to the digits in use."""
        if isinstance(x, Fraction):
            return self.mp.mpf(x.numerator) / x.denominator
        if isinstance(x, int):
            return self.mp.mpf(x)
        if isinstance(x, Enclosure):
            return self.real(x.mid)
        if isinstance(x, self.mp.mpf):
            return x
        return evaluate(x, self, {})

    def rational(self, x: Any) -> Fraction:
        """Return a number of this arithmetic as the rational that it is."""
        return Fraction(*map(int, mpmath.libmp.to_rational(self.mp.mpf(x)._mpf_)))

    @property
    def pi(self) -> Any:
        """The number pi."""
        return +self.mp.pi

    def exp(self, x: Any) -> Any:
        """Exponential."""
        return self.mp.exp(x)

    def log(self, x: Any) -> Any:
        """Natural logarithm."""
        return self.mp.log(x)

    def sqrt(self, x: Any) -> Any:
        """Square root."""
        return self.mp.sqrt(x)

    def power(self, x: Any, k: Any) -> Any:
        """X to the power k."""
        return x ** (k if isinstance(k, int) else self.real(k))

    def gamma(self, x: Any) -> Any:
        """Gamma function."""
        return self.mp.gamma(self.real(x))

    def factorial(self, k: Any) -> Any:
        """K! = Gamma(k + 1)."""
        return self.mp.factorial(self.real(k))

    def binomial(self, N: Any, k: Any) -> Any:
        """Binomial coefficient."""
        return self.mp.binomial(self.real(N), self.real(k))

    def rising(self, r: Any, k: Any) -> Any:
        """Rising factorial."""
        return self.mp.rf(self.real(r), self.real(k))

    def gamma_q(self, a: Any, x: Any) -> Any:
        """Regularised upper incomplete gamma function."""
        return self.mp.gammainc(self.real(a), self.real(x), self.mp.inf, regularized=True)

    def gamma_p(self, a: Any, x: Any) -> Any:
        """Regularised lower incomplete gamma function."""
        return self.mp.gammainc(self.real(a), 0, self.real(x), regularized=True)

    def beta_p(self, x: Any, a: Any, b: Any) -> Any:
        """Regularised incomplete beta function I_x(a, b)."""
        return self.mp.betainc(self.real(a), self.real(b), 0, self.real(x), regularized=True)

    def beta_q(self, x: Any, a: Any, b: Any) -> Any:
        """1 - I_x(a, b), from 0 to 1 - x with a and b exchanged, since the other form cancels silently."""
        return self.mp.betainc(self.real(b), self.real(a), 0, 1 - self.real(x), regularized=True)

    def erfc(self, x: Any) -> Any:
        """Complementary error function."""
        return self.mp.erfc(x)

    def erfcx(self, x: Any) -> Any:
        """Scaled complementary error function exp(x^2) erfc(x)."""
        return self.mp.exp(x * x) * self.mp.erfc(x)

    def function(self, name: str, *args: Any) -> Any:
        """Evaluate a named function of a formula.

        Raises
        ------
        UnknownFunction
            For a function that mpmath does not have.
        """
        function = getattr(self.mp, _NAMES.get(name, name), None)
        if function is None:
            raise UnknownFunction(f"no high-precision value of the function {name} is known")
        return function(*args)


_NAMES = {"Abs": "fabs", "RisingFactorial": "rf", "ceiling": "ceil"}


def high(digits: int) -> High:
    """Return the mpmath arithmetic at so many digits."""
    return High(digits)
