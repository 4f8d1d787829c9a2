"""The door to python-flint: the arithmetic of balls (midpoint and radius), in which everything printed is proved.

A ball contains the true value, always; nothing may be concluded from its midpoint alone. Arb's precision is global to
the process: it is set in one place, the ``with balls(prec)`` block.

Source: F. Johansson, "Arb: efficient arbitrary-precision midpoint-radius interval arithmetic", IEEE Trans. Comput. 66
(2017) 1281-1292.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from fractions import Fraction
from math import comb
from typing import Any

from flint import acb, arb, ctx, fmpq

from verify.arithmetic.ball_functions import REAL_FUNCTIONS
from verify.arithmetic.beta_series import incomplete_beta
from verify.arithmetic.enclosure import Enclosure
from verify.arithmetic.evaluate import evaluate
from verify.arithmetic.gamma_series import lower_gamma, terms_needed
from verify.errors import UndecidedError, UnknownFunction

Ball = Any
"""A real ball (``flint.arb``)."""

SMALLEST_EXPONENT = -300_000
"""Powers of two below this are widened to an interval from zero when a ball becomes a pair of rationals."""

MOST_REMEMBERED = 64
"""Parameters whose balls are remembered within one block of a precision."""

DIRECT_GAMMA_P = 60
"""Up to this first parameter Arb's lower incomplete gamma function is tried first (it may give up: then it says so)."""

FEW_TERMS, MANY_TERMS = 500, 2_000_000
"""Terms of the lower incomplete gamma function that are summed at once, and those that are summed where need be."""

EXACT_BINOMIAL = 2000
"""Up to so many trials a binomial coefficient is computed as an integer; beyond, through the gamma function."""


class Balls:
    """Real arithmetic in balls at a fixed precision; see :func:`balls`.

    Parameters
    ----------
    prec : int
        Bits of the midpoints.
    """

    def __init__(self, prec: int) -> None:
        self.prec = prec
        self._known: dict[int, tuple[Any, Ball]] = {}
        self._gammas: dict[int, tuple[Any, Ball]] = {}

    def real(self, x: Any) -> Ball:
        """Return the ball of an exact number (int, Fraction or SymPy number); balls pass unchanged."""
        kind = type(x)
        if kind is arb:
            return x
        if kind is int:
            return arb(x)
        if kind is Fraction:
            entry = self._known.get(id(x))
            return _remembered(self._known, x, _ball_of) if entry is None else entry[1]
        return evaluate(x, self, {})

    def interval(self, enclosure: Enclosure) -> Ball:
        """Return a ball that contains both ends of an enclosure."""
        return self.real(enclosure.lower).union(self.real(enclosure.upper))

    @property
    def pi(self) -> Ball:
        """The number pi."""
        return arb.pi()

    def exp(self, x: Ball) -> Ball:
        """Exponential."""
        return arb(x).exp()

    def log(self, x: Ball) -> Ball:
        """Natural logarithm."""
        return arb(x).log()

    def sqrt(self, x: Ball) -> Ball:
        """Square root."""
        return arb(x).sqrt()

    def power(self, x: Ball, k: Any) -> Ball:
        """X to the power k."""
        if isinstance(k, int) and k > 0 and arb(x).contains(0):
            return _power_across_zero(arb(x), k)
        return arb(x) ** (k if isinstance(k, int) else self.real(k))

    def gamma(self, x: Any) -> Ball:
        """Gamma function."""
        if type(x) is not Fraction:
            return self.real(x).gamma()
        entry = self._gammas.get(id(x))
        return _remembered(self._gammas, x, lambda shape: self.real(shape).gamma()) if entry is None else entry[1]

    def factorial(self, k: Any) -> Ball:
        """K! = Gamma(k + 1)."""
        return arb.fac_ui(k) if isinstance(k, int) and k < EXACT_BINOMIAL else (self.real(k) + 1).gamma()

    def binomial(self, N: Any, k: Any) -> Ball:
        """Binomial coefficient N over k; zero outside 0..N."""
        if isinstance(N, int) and isinstance(k, int):
            if k < 0 or k > N:
                return arb(0)
            if N <= EXACT_BINOMIAL:
                return arb(comb(N, k))
        N, k = self.real(N), self.real(k)
        return (N + 1).gamma() / ((k + 1).gamma() * (N - k + 1).gamma())

    def rising(self, r: Any, k: Any) -> Ball:
        """Rising factorial r (r+1) ... (r+k-1) = Gamma(r + k) / Gamma(r)."""
        r = self.real(r)
        return (r + k).gamma() / r.gamma()

    def gamma_q(self, a: Any, x: Any) -> Ball:
        """Regularised upper incomplete gamma function Q(a, x). Source: DLMF 8.2.4."""
        return self.real(x).gamma_upper(self.real(a), regularized=1)

    def gamma_p(self, a: Any, x: Any) -> Ball:
        """Regularised lower incomplete gamma function P(a, x) = 1 - Q(a, x).

        Directly where that is quick: Arb's own function for small a, then a series of positive terms. Else one minus
        Arb's upper function, and the series after all where that leaves too few bits.
        """
        a, x = self.real(a), self.real(x)
        if not x < a:
            return 1 - self.gamma_q(a, x)
        if a < DIRECT_GAMMA_P:
            direct = x.gamma_lower(a, regularized=1)
            if direct.rel_accuracy_bits() > self.prec // 2:
                return direct
        terms = terms_needed(a, x, self.prec)
        if terms > FEW_TERMS:
            value = 1 - self.gamma_q(a, x)
            if terms > MANY_TERMS or not value.is_finite():
                return value
            usual = (self.prec + (magnitude(value) or 0)) // 2 - 32
            if value.rel_accuracy_bits() > max(8, usual):
                return value
        return lower_gamma(a, x, self.prec)

    def beta_p(self, x: Any, a: Any, b: Any) -> Ball:
        """Regularised incomplete beta function I_x(a, b); see :mod:`verify.arithmetic.beta_series`."""
        return incomplete_beta(self.real(x), a, b, self.prec)

    def beta_q(self, x: Any, a: Any, b: Any) -> Ball:
        """1 - I_x(a, b) = I_{1-x}(b, a). Source: DLMF 8.17.4."""
        return self.beta_p(1 - self.real(x), b, a)

    def erfc(self, x: Ball) -> Ball:
        """Complementary error function."""
        return arb(x).erfc()

    def erfcx(self, x: Ball) -> Ball:
        """Scaled complementary error function exp(x^2) erfc(x) for x > 0; far out by its enveloping series.

        Source: DLMF 7.12.1 and 7.12(i): the error is less than the first term left out, and has its sign.
        """
        x = arb(x)
        square = 2 * x * x
        if not (x > 0 and square > 2 * self.prec):
            return (x * x).exp() * x.erfc()
        total, term, k = arb(0), arb(1), 0
        tiny = arb(2) ** -self.prec
        while not abs(term) < tiny:
            total += term
            k += 1
            term = -term * (2 * k - 1) / square
        return (total + term.union(arb(0))) / (x * arb.pi().sqrt())

    def function(self, name: str, *args: Ball) -> Ball:
        """Evaluate a named function of a formula (the names of :mod:`verify.arithmetic.evaluate`).

        Raises
        ------
        UnknownFunction
            For a function without an enclosure.
        """
        if name not in REAL_FUNCTIONS:
            raise UnknownFunction(f"no enclosure of the function {name} is known")
        return REAL_FUNCTIONS[name](*args)


def _power_across_zero(x: Ball, k: int) -> Ball:
    """Positive whole power of a ball that contains zero: from its ends, since x^k is monotone on either side."""
    low, high = x.lower() ** k if x.lower() != 0 else arb(0), x.upper() ** k if x.upper() != 0 else arb(0)
    return low.union(high).union(arb(0))


def _ball_of(x: Fraction) -> Ball:
    return arb(fmpq(x.numerator, x.denominator))


def _remembered(known: dict[int, tuple[Any, Ball]], x: Fraction, compute: Callable[[Fraction], Ball]) -> Ball:
    """Compute a value and remember it by the identity of its parameter, which the entry keeps alive.

    A law asks for the same few again and again.
    """
    if len(known) >= MOST_REMEMBERED:
        known.clear()
    value = compute(x)
    known[id(x)] = (x, value)
    return value


@contextmanager
def balls(prec: int) -> Iterator[Balls]:
    """Set Arb's precision for a block and hand out its arithmetic.

    Examples
    --------
    >>> with balls(64) as A:
    ...     print(to_enclosure(A.real(Fraction(1, 3))).text(10))
    0.3333333333
    """
    before = ctx.prec
    ctx.prec = prec
    try:
        yield Balls(prec)
    finally:
        ctx.prec = before


def to_fraction(x: Ball) -> Fraction:
    """Return the exact rational value of a ball of radius zero (such as a midpoint or an end)."""
    mantissa, exponent = x.man_exp()
    return _scaled(int(mantissa), int(exponent))


def _scaled(man: int, exp: int) -> Fraction:
    """Return man * 2^exp as a rational."""
    return Fraction(man << exp) if exp >= 0 else Fraction(man, 1 << -exp)


def to_enclosure(x: Ball, *, low: Fraction | None = None, high: Fraction | None = None) -> Enclosure:
    """Return a ball as an enclosure with rational ends, cut to [low, high] where those are known bounds.

    Raises
    ------
    UndecidedError
        When the ball is not finite and no bounds are given.
    """
    if not x.is_finite():
        if low is None or high is None:
            raise UndecidedError("a number could not be enclosed at this precision: its ball is not finite")
        return Enclosure(low, high)
    lower, upper = _end(x.lower(), up=False), _end(x.upper(), up=True)
    if low is not None:
        lower, upper = max(lower, low), max(upper, low)
    if high is not None:
        lower, upper = min(lower, high), min(upper, high)
    return Enclosure(lower, upper)


def _end(x: Ball, *, up: bool) -> Fraction:
    """One end as a rational; an end too close to zero for a rational of sensible size is moved outward."""
    mantissa, exponent = x.man_exp()
    man, exp = int(mantissa), int(exponent)
    if exp + man.bit_length() >= SMALLEST_EXPONENT:
        return _scaled(man, exp)
    tiny = Fraction(1, 1 << -SMALLEST_EXPONENT)
    return (tiny if up else Fraction(0)) if man > 0 else (Fraction(0) if up else -tiny)


def magnitude(x: Ball) -> int | None:
    """Exponent e with 2^(e-1) <= abs(x) < 2^e for the midpoint of a ball; None where that is 0.

    Examples
    --------
    >>> with balls(64) as A:
    ...     print(magnitude(A.real(Fraction(1, 20))), magnitude(A.real(5)), magnitude(A.real(0)))
    -4 3 None
    """
    mantissa, exponent = x.mid().man_exp()
    man = int(mantissa)
    return int(exponent) + man.bit_length() if man else None


def accuracy_bits(x: Ball) -> int:
    """Bits of relative accuracy that a ball guarantees (large when exact, negative when it contains zero)."""
    return int(x.rel_accuracy_bits())


def midpoint(x: Ball) -> Ball:
    """Midpoint of a ball, as a ball of radius zero."""
    return x.mid()


def radius(x: Ball) -> Ball:
    """Radius of a ball, as a ball of radius zero."""
    return arb(x.rad())


def around(x: Ball, r: Ball) -> Ball:
    """Ball around a midpoint with a given radius."""
    return arb(x.mid(), arb(r).abs_upper())


def min_abs(x: Ball, y: Ball) -> Ball:
    """The smaller of two absolute values, by their midpoints: a guide for searches, not a proof."""
    x, y = abs(x), abs(y)
    return x if x.mid() < y.mid() else y


def complex_ball(x: Any, y: Any = 0) -> Any:
    """Complex ball x + i y."""
    return acb(x, y)
