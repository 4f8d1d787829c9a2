"""Recheck a certificate:  python -I -S recheck.py FILE.cert.json [--case CASE.case.toml].

One file, standard library only, sharing no code with the program that wrote the certificate. It replays, it never
searches: the cutoffs are given to it. The rules are published as formulas in FORMAT.md, with the section numbers below.

Exit status: 0 accepted; 1 rejected; 2 malformed; 3 over the resource limit; 4 accepted, with the numbers themselves
taken on trust (laws without a closed form). What is taken on trust is listed on standard output in every case.
"""

# ruff: noqa: D102, D103, N818
from __future__ import annotations

import hashlib
import json
import re
import sys
from collections.abc import Iterator
from fractions import Fraction
from itertools import pairwise
from math import gcd, isqrt
from typing import Any

TYPE = "https://in-toto.io/Statement/v1"
PREDICATE = "tag:sidecheck.invalid,2026:certificate/v1"
LIMIT = 12_000_000  # units of work; one unit is about one multiplication of 256-bit numbers
FILE_LIMIT = 20_000_000  # bytes
work = {"left": LIMIT}


class Rejected(Exception):
    """A statement of the certificate is false, or could not be shown."""


class Malformed(Exception):
    """The file does not have the published form."""


class TooMuch(Exception):
    """Checking this file needs more than the resource limit."""


class Imprecise(Exception):
    """The intervals are too wide to decide; another round with more bits follows."""


def require(condition: object, message: str) -> None:
    if not condition:
        raise Rejected(message)


def form(condition: object, message: str) -> None:
    if not condition:
        raise Malformed(message)


def spend(units: int) -> None:
    work["left"] -= units
    if work["left"] < 0:
        raise TooMuch(f"more than {LIMIT} units of work")


# ---- [1] Interval arithmetic ---------------------------------------------------------------------------------------


class I:  # noqa: E742
    """The real numbers from a * 2**e to b * 2**e, with integers a <= b.

    Every operation returns an interval that contains all results of the exact operation: integers are exact, and where
    digits are dropped (>> and //, which round down) the lower end is rounded down and the upper end up: -(-b >> k).
    """

    __slots__ = ("a", "b", "e")
    bits: int = 256
    a: int
    b: int
    e: int

    def __init__(self, a: Any, b: Any, e: int = 0) -> None:
        spend(1 + (I.bits >> 10))
        over = max(a.bit_length(), b.bit_length()) - I.bits
        if over > 0:
            a, b, e = a >> over, -(-b >> over), e + over
        if a == b == 0:
            e = -(10**9)
        self.a, self.b, self.e = a, b, e

    def top(self) -> int:
        return max(self.a.bit_length(), self.b.bit_length()) + self.e

    def __add__(self, other: Any) -> I:
        x, y = self, interval(other)
        e = max(min(x.e, y.e), max(x.top(), y.top()) - 3 * I.bits)
        return I(down(x.a, x.e - e) + down(y.a, y.e - e), up(x.b, x.e - e) + up(y.b, y.e - e), e)

    def __neg__(self) -> Any:
        return I(-self.b, -self.a, self.e)

    def __sub__(self, other: Any) -> Any:
        return self + -interval(other)

    def __rsub__(self, other: Any) -> Any:
        return interval(other) + -self

    def __mul__(self, other: Any) -> I:
        x, y = self, interval(other)
        products = (x.a * y.a, x.a * y.b, x.b * y.a, x.b * y.b)
        return I(min(products), max(products), x.e + y.e)

    def __truediv__(self, other: Any) -> Any:
        x, y = self, interval(other)
        if y.a <= 0 <= y.b:
            raise Imprecise("division by an interval that contains 0")
        k = max(0, I.bits + 2 + max(y.a.bit_length(), y.b.bit_length()) - max(x.a.bit_length(), x.b.bit_length()))
        ends = [(p << k, q) for p in (x.a, x.b) for q in (y.a, y.b)]
        return I(min(p // q for p, q in ends), max(-(-p // q) for p, q in ends), x.e - y.e - k)

    def __rtruediv__(self, other: Any) -> Any:
        return interval(other) / self

    __radd__, __rmul__ = __add__, __mul__

    def ends(self) -> tuple[Fraction, Fraction]:
        """Return both ends as fractions."""
        if self.a == self.b == 0:
            return Fraction(0), Fraction(0)
        if abs(self.e) > 400_000:
            raise TooMuch("a number of more than 400000 bits")
        unit = Fraction(2) ** self.e
        return self.a * unit, self.b * unit


def down(a: int, k: int) -> int:
    return a << k if k >= 0 else a >> -k


def up(b: int, k: int) -> int:
    return -down(-b, k)


def interval(x: Any) -> I:
    """Enclose a fraction: (p << k) // q <= 2**k p/q <= -((-p << k) // q)."""
    if isinstance(x, I):
        return x
    p, q = x.numerator, x.denominator
    if q & (q - 1) == 0:
        return I(p, p, 1 - q.bit_length())
    k = max(0, I.bits + 2 + q.bit_length() - p.bit_length())
    return I((p << k) // q, -((-p << k) // q), -k)


def ends(x: Any) -> tuple[Fraction, Fraction]:
    return x.ends() if isinstance(x, I) else (Fraction(x), Fraction(x))


def less(x: Any, y: Any) -> bool:
    """Whether x < y; an overlap that leaves it open raises Imprecise."""
    if not isinstance(x, I) and not isinstance(y, I):
        return bool(x < y)
    gap = interval(y - x)
    if gap.a > 0 or gap.b <= 0:
        return gap.a > 0
    raise Imprecise("two overlapping intervals")


def hull(x: Any, y: Any) -> I:
    """Enclose everything from the lower end of x to the upper end of y."""
    x, y = interval(x), interval(y)
    e = max(min(x.e, y.e), max(x.top(), y.top()) - 3 * I.bits)
    return I(down(x.a, x.e - e), up(y.b, y.e - e), e)


fixed_constants: dict[tuple[str, int], tuple[int, int]] = {}


def ln2(w: int) -> tuple[int, int]:
    """Integers l <= 2**w log 2 <= h: log 2 = 2 atanh(1/3), see `atanh`."""
    if ("ln2", w) not in fixed_constants:
        z = (1 << w) // 3
        fixed_constants["ln2", w] = (2 * atanh(z, w)[0], 2 * atanh(z + 1, w)[1])
    return fixed_constants["ln2", w]


def atanh(z: Any, w: int) -> tuple[int, int]:
    """Integers l <= 2**w atanh(z / 2**w) <= h for an integer 0 <= z <= 2**w * 2/5.

    atanh z = sum over j of z**(2j+1) / (2j+1), all terms >= 0: a partial sum rounded down is a lower bound. The
    terms left
    out are at most q (1 + z**2 + z**4 + ...) = q / (1 - z**2) <= q * 25/21 < 2 q, where q >= z**(2j+1) belongs to
    the first of
    them: adding 2 q to the sum rounded up gives an upper bound.
    """
    low = high = 0
    p = q = z
    j = 1
    while q > 1:
        low, high = low + p // j, high - (-q // j)
        p, q, j = p * z * z >> 2 * w, -(-q * z * z >> 2 * w), j + 2
        spend(1 + (w >> 10))
    return low, high + 2 * q


def pi() -> I:
    """Enclose pi = 16 atan(1/5) - 4 atan(1/239) (Machin).

    atan(1/n) = sum of (-1)**j / ((2j+1) n**(2j+1)) alternates with falling terms: the error of a partial sum is
    below the
    first term left out (below 1 unit at the stop), and each of the fewer than w terms loses less than 1 unit to
    rounding.
    """
    w = I.bits + 20
    if ("pi", w) not in fixed_constants:
        total = 0
        for factor, n in ((16, 5), (-4, 239)):
            p, j = (1 << w) // n, 1
            while p:
                total += factor * (p // j if j % 4 == 1 else -(p // j))
                p, j = p // (n * n), j + 2
        fixed_constants["pi", w] = (total - 40 * w, total + 40 * w)
    low, high = fixed_constants["pi", w]
    return I(low, high, -w)


def exp(x: Any) -> I:
    """Enclose exp over an interval [a, b]; exp increases, and exp(b) <= exp(a) (1 + d + d**2) for 0 <= d = b - a
    <= 1.
    """
    x = interval(x)
    if x.top() > 36:
        raise TooMuch("an exponential of a number beyond 2**36")
    w = I.bits + 24 + 2 * isqrt(I.bits) + max(0, x.top())
    low, high, k = exp_point(down(x.a, x.e + w), w)
    d = up(x.b, x.e + w) - down(x.a, x.e + w)
    if d >> w:
        raise Imprecise("the exponential of a wide interval")
    return I(low << w, high * ((1 << w) + d + (d * d >> w) + 1), k - 2 * w)


def exp_point(X: int, w: int) -> tuple[int, int, int]:
    """Integers (l, h, k) with l <= 2**w exp(X / 2**w - k log 2) <= h.

    k = X // h2 - 1 (h2 the upper bound of log 2) leaves r = X/2**w - k log 2 between 0 and 2 log 2 + tiny. With u
    = r / 2**s
    < 1/2, exp(u) = sum of u**j / j!, terms >= 0: rounding down and stopping early is a lower bound; the terms
    after one of
    size t are at most t (u + u**2 + ...) <= t, so adding t again gives an upper bound. Then s squarings, rounded
    likewise.
    """
    l2, h2 = ln2(w)
    k = X // h2 - 1
    r = sorted((X - k * l2, X - k * h2))
    form(r[0] >= 0, "exp: reduction")
    s = isqrt(w) // 2 + 3
    low, high = 1 << w, 1 << w
    t, v = low, high
    u0, u1 = r[0] >> s, -(-r[1] >> s)
    j = 1
    while v > 1:
        t, over = (t * u0 >> w) // j, -v * u1 >> w
        v = -(over // j)
        low, high, j = low + t, high + v, j + 1
        spend(1 + (w >> 10))
    high += v
    for _ in range(s):
        low, high = low * low >> w, -(-high * high >> w)
    return low, high, k


def log(x: Any) -> I:
    """Enclose log over [a, b], a > 0: log increases, and log(b) <= log(a) + (b - a) / a (log is concave)."""
    x = interval(x)
    if x.a <= 0:
        raise Imprecise("the logarithm of an interval that reaches 0")
    low = log_point(x.a, x.e)
    return low if x.a == x.b else hull(low, low + I(x.b - x.a, x.b - x.a) / I(x.a, x.a))


def log_point(a: Any, e: int) -> I:
    """Enclose log(a 2**e): a 2**e = m 2**n with 2/3 <= m <= 4/3, and log m = 2 atanh((m-1)/(m+1)), |(m-1)/(m+1)|
    <= 1/5.
    """
    n = a.bit_length()
    if 3 * a < 1 << (n + 1):
        n -= 1
    w = max(I.bits + 24, n)
    top, bottom = (a << w) - (1 << (w + n)), a + (1 << n)
    sign = 1 if top >= 0 else -1
    z = abs(top) // bottom
    low, high = atanh(z, w)[0], atanh(z + 1, w)[1]
    part = I(2 * low, 2 * high, -w)
    low, high = ln2(w)
    whole: I = I(low, high, -w) * Fraction(n + e)
    return whole + (part if sign > 0 else -part)


def sqrt(x: Any) -> Any:
    """Enclose the square root: isqrt rounds down; one more is an upper bound. Squares of fractions give fractions."""
    if not isinstance(x, I):
        require(x >= 0, "the square root of a negative number")
        p, q = isqrt(x.numerator), isqrt(x.denominator)
        if (p * p, q * q) == (x.numerator, x.denominator):
            return Fraction(p, q)
    x = interval(x)
    if x.a < 0:
        raise Imprecise("the square root of an interval that reaches below 0")
    k = 2 * I.bits + (x.e & 1)
    return I(isqrt(x.a << k), isqrt(x.b << k) + 1, (x.e - k) >> 1)


def power(x: Any, y: Any) -> Any:
    """X ** y: exact or by repeated multiplication for whole y, else exp(y log x)."""
    if isinstance(y, I) or y.denominator != 1:
        return sqrt(x) if y == Fraction(1, 2) else exp(y * log(x))
    n = abs(int(y))
    if not isinstance(x, I):
        size = n * max(x.numerator.bit_length(), x.denominator.bit_length())
        if size < 60_000 and (x or y >= 0):
            return x ** int(y)
        require(x != 0, "division by 0")
        x = interval(x)
    result = Fraction(1)
    for bit in bin(n)[2:]:
        result = result * result * x if bit == "1" else result * result
    return result if y >= 0 else 1 / result


# ---- [2] Closed expressions ----------------------------------------------------------------------------------------

TOKEN = re.compile(r"\s*(?:((?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d{1,4})?)|([A-Za-z_]\w*)|(\*\*|[-+*/^(),]))")


def whole(x: Any, limit: int = 20_000) -> int:
    require(
        not isinstance(x, I) and x.denominator == 1 and x >= 0, "a factorial or binomial of other than a whole number"
    )
    if x > limit:
        raise TooMuch("a factorial of a large number")
    return int(x)


def factorial(x: Any) -> Any:
    result, n = 1, whole(x)
    spend(n)
    for k in range(2, n + 1):
        result *= k
    return Fraction(result)


def binomial(x: Any, y: Any) -> Any:
    k = whole(y)
    result = Fraction(1)
    for j in range(k):
        result = result * (x - j) / (j + 1)
    return result


def gamma_function(a: Any) -> Any:
    """Gamma(a) = x**a exp(-x) / gamma_kernel(a, x) at x = a."""
    if not isinstance(a, I) and a.denominator == 1:
        return factorial(a - 1)
    return exp(a * log(a) - a) / gamma_kernel(a, a)


def absolute(x: Any) -> Any:
    return -x if less(x, Fraction(0)) else x


FUNCTIONS: dict[str, tuple[int, Any]] = {
    "exp": (1, exp), "log": (1, log), "ln": (1, log), "sqrt": (1, sqrt), "factorial": (1, factorial),
    "gamma": (1, gamma_function),
    "binomial": (2, binomial), "abs": (1, absolute), "Abs": (1, absolute),
    "beta": (2, lambda a, b: gamma_function(a) * gamma_function(b) / gamma_function(a + b)),
    "loggamma": (1, lambda a: log(gamma_function(a))),
    "cosh": (1, lambda x: (exp(x) + exp(-x)) / 2), "sinh": (1, lambda x: (exp(x) - exp(-x)) / 2),
    "tanh": (1, lambda x: 1 - 2 / (exp(2 * x) + 1)),
}  # fmt: skip


class Expression:
    """A reader by recursive descent: sum, product, sign, power, atom. Numbers stay fractions as long as they can."""

    def __init__(self, text: str, names: Any) -> None:
        form(isinstance(text, str) and len(text) < 4000, "an expression that is no text, or too long")
        self.names, self.place, self.depth = names, 0, 0
        self.tokens, at = [], 0
        while text[at:].strip():
            match = TOKEN.match(text, at)
            if match is None:
                raise Malformed(f"cannot read {text!r:.80}")
            self.tokens.append(match.groups())
            at = match.end()
        self.tokens.append((None, None, None))

    def value(self) -> Any:
        result = self.sum()
        form(self.tokens[self.place] == (None, None, None), "an expression with something behind its end")
        return result

    def take(self, *signs: Any) -> Any:
        if self.tokens[self.place][2] in signs:
            self.place += 1
            return self.tokens[self.place - 1][2]
        return None

    def sum(self) -> Any:
        self.depth += 1
        form(self.depth < 100, "an expression nested too deeply")
        result = self.product()
        while sign := self.take("+", "-"):
            result = result + self.product() if sign == "+" else result - self.product()
        self.depth -= 1
        return result

    def product(self) -> Any:
        result = self.signed()
        while sign := self.take("*", "/"):
            other = self.signed()
            require(sign == "*" or isinstance(other, I) or other != 0, "division by 0")
            result = result * other if sign == "*" else result / other
        return result

    def signed(self) -> Any:
        sign = 1
        while taken := self.take("-", "+"):
            sign = -sign if taken == "-" else sign
        base = self.atom()
        if self.take("**", "^"):
            base = power(base, self.signed())
        return base if sign > 0 else -base

    def atom(self) -> Any:
        number, name, _ = self.tokens[self.place]
        if number or name:
            self.place += 1
        if number:
            form(len(number) < 4000, "a number that is too long")
            return Fraction(number)
        if name:
            return self.named(name)
        form(self.take("("), "an expression that breaks off")
        result = self.sum()
        form(self.take(")"), "a bracket that is not closed")
        return result

    def named(self, name: str) -> Any:
        if not self.take("("):
            form(name in self.names or name in ("pi", "E"), f"unknown name {name}")
            return self.names[name] if name in self.names else pi() if name == "pi" else exp(Fraction(1))
        form(name in FUNCTIONS, f"unknown function {name}")
        arguments = [self.sum()]
        while self.take(","):
            arguments.append(self.sum())
        form(self.take(")") and len(arguments) == FUNCTIONS[name][0], f"the arguments of {name}")
        return FUNCTIONS[name][1](*arguments)


def evaluate(text: str, names: Any = None) -> Any:
    return Expression(text, names or {}).value()


# ---- [3] The file and its numbers ----------------------------------------------------------------------------------


def unique(pairs: Any) -> Any:
    form(len({key for key, _ in pairs}) == len(pairs), "a key that stands twice")
    return dict(pairs)


def small_integer(text: str) -> int:
    form(len(text) < 16, "a count of more than 15 digits")
    return int(text)


def refuse(text: str) -> None:
    raise Malformed(f"a bare number that is no count: {text[:40]}")


def canonical(value: Any) -> bytes:
    """RFC 8785 bytes, for text, counts, truth values, lists and objects with ASCII keys."""
    return json.dumps(value, sort_keys=True, separators=(",", ":"), ensure_ascii=False).encode()


def read(data: bytes) -> Any:
    if len(data) > FILE_LIMIT:
        raise TooMuch(f"a file of more than {FILE_LIMIT} bytes")
    try:
        value = json.loads(
            data.decode(), object_pairs_hook=unique, parse_float=refuse, parse_constant=refuse, parse_int=small_integer
        )
        form(canonical(value) == data, "bytes that are not the canonical form (RFC 8785)")
    except RecursionError:
        raise TooMuch("nesting too deep") from None
    except (ValueError, UnicodeError) as error:
        raise Malformed(f"not JSON in UTF-8: {error}") from None
    return value


def fields(value: Any, *names: str, optional: Any = ()) -> Any:
    form(isinstance(value, dict), f"an object was expected with the keys {', '.join(names)}")
    keys = set(value)
    form(set(names) <= keys, f"missing: {', '.join(sorted(set(names) - keys))}")
    form(keys <= {*names, *optional}, f"unknown: {', '.join(sorted(keys - {*names, *optional}))}")
    return value


NUMBER = re.compile(r"(-?)(0|[1-9]\d*)(?:\.(\d*[1-9]))?(?:e(-?[1-9]\d{0,5}))?")
RATIONAL = re.compile(r"-?(0|[1-9]\d*)(/[1-9]\d*)?")


def rational(text: str) -> Fraction:
    form(isinstance(text, str) and len(text) < 4200 and RATIONAL.fullmatch(text), f"not a fraction: {text!r:.60}")
    value = Fraction(text)
    form(str(value) == text, f"a fraction that is not in lowest terms: {text:.60}")
    return value


def decimal(text: str) -> Fraction:
    form(isinstance(text, str) and len(text) < 4200 and NUMBER.fullmatch(text), f"not a decimal number: {text!r:.60}")
    if abs(int(text.partition("e")[2] or 0)) > 20_000:
        raise TooMuch("a decimal exponent beyond 20000")
    return Fraction(text)


def claimed(value: Any) -> tuple[Fraction, Fraction]:
    """Return the two ends of a claimed number: equal for an exact one, apart for an enclosure."""
    if isinstance(value, str):
        return (rational(value),) * 2
    fields(value, "lower", "upper")
    low, high = decimal(value["lower"]), decimal(value["upper"])
    form(low < high, "an enclosure whose ends are not in order")
    form(value == {"lower": spelled(low), "upper": spelled(high)}, "a number that is not spelled in the canonical way")
    return low, high


def grid(x: Fraction, digits: int, upward: bool = False) -> Fraction:
    """Round a fraction to so many significant decimal digits, down or up."""
    if x == 0:
        return Fraction(0)
    bits = abs(x.numerator).bit_length() - x.denominator.bit_length()  # 2**(bits-1) < abs(x) < 2**(bits+1)
    unit = Fraction(10) ** ((bits - 1) * 30103 // 100_000 - digits)
    while abs(x) >= unit * 10**digits:
        unit *= 10
    return unit * (-(-x // unit) if upward else x // unit)


def spelled(x: Any) -> str:
    """Spell a decimal fraction: plainly from 1e-5 to below 1e21, and whole numbers; else with an exponent."""
    twos = (x.denominator & -x.denominator).bit_length() - 1
    fives = ((x.denominator >> twos).bit_length() - 1) * 1000 // 2322
    while 5**fives < x.denominator >> twos:
        fives += 1
    exponent = max(twos, fives)
    form(10**exponent % x.denominator == 0, "not a decimal fraction")
    figures = str(abs(int(x * 10**exponent)))
    lead = len(figures) - 1 - exponent
    sign = "-" if x < 0 else ""
    if -5 <= lead <= 20 or x == 0:
        figures = figures.rjust(exponent + 1, "0")
        text = figures[: len(figures) - exponent] + "." + figures[len(figures) - exponent :]
        return sign + (text.rstrip("0").rstrip(".") if "." in text else text)
    figures = figures.rstrip("0")
    return sign + figures[0] + ("." + figures[1:] if figures[1:] else "") + f"e{lead}"


# ---- [4] Lattice laws: masses from their definition ----------------------------------------------------------------

PARAMETERS = {  # the parameters of each law, and the power of n by which each grows for the sum of n independent copies
    "Poisson": {"mean": 1},
    "binomial": {"trials": 1, "probability": 0},
    "negative binomial": {"size": 1, "probability": 0},
    "gamma": {"shape": 1, "rate": 0},
    "normal": {"mean": 1, "variance": 1},
    "inverse Gaussian": {"mean": 1, "shape": 2},
}


def over_one(x: Any) -> tuple[int, int, int]:
    """Write a number as (low, high, denominator) with whole numbers."""
    if not isinstance(x, I):
        return x.numerator, x.numerator, x.denominator
    return (x.a, x.b, 1 << -x.e) if x.e <= 0 else (x.a << x.e, x.b << x.e, 1)


class Counts:
    """Masses on 0, 1, 2, ... with w(k+1) / w(k) = theta (s + g k) / (k + 1) and g = 0, -1 or 1.

    g = 0, s = 1, theta = mean: Poisson. g = -1, s = trials, theta = p/(1-p): binomial. g = 1, s = size, theta =
    1-p: negative
    binomial. P(V = k) = w(k) / (sum of all w): no factorial, exponential or power is needed. The mean is s theta /
    (1 - g theta).
    """

    def __init__(self, theta: Any, s: Any, g: Any) -> None:
        self.theta, self.s, self.g = theta, s, g
        self.last = int(s) if g < 0 else None
        self.mean = s * theta / (1 - g * theta)

    def step(self, k: int, way: int) -> Any:
        """Whole numbers nl, dl, nh, dh with nl/dl <= w(k + way) / w(k) <= nh/dh."""
        tl, th, td = self.whole_theta
        sl, sh, sd = self.whole_s
        j = k if way > 0 else k - 1
        gj = self.g * j * sd
        low, high, under = tl * (sl + gj), th * (sh + gj), td * sd * (j + 1)
        return (low, under, high, under) if way > 0 else (under, high, under, low)

    def bound(self, way: int, nh: Any, dh: Any) -> Any:
        """Bound w(j + way) / w(j) for all further j by one fraction, given nh/dh at the current place k.

        Upward (s + g k)/(k + 1) falls to g when s >= g (always for g <= 0); for g = 1 and s < 1 it rises to 1, so
        theta bounds
        the ratio. Downward k / (s + g (k-1)) falls with k when g <= 0 or s >= 1; otherwise no bound is used.
        """
        _, th, td = self.whole_theta
        if self.g > 0 and self.whole_s[0] < self.whole_s[2]:
            return (th, td) if way > 0 and th * dh >= nh * td else (nh, dh) if way > 0 else (1, 1)
        return nh, dh

    def walk(self, start: Any, way: int, must: Any, unit: int) -> Iterator[tuple[int, Any, Any]]:
        """Yield (k, low, high) for the weights after ``start``, whose weight is ``unit``; at last a bound for all
        the others.

        Once the ratio stays below rho < 1, the weights after one of size w sum to at most w rho / (1 - rho).
        """
        k, low, high, small = start, unit, unit, unit >> I.bits
        while True:
            if k == (self.last if way > 0 else 0):
                return
            nl, dl, nh, dh = self.step(k, way)
            if k % 16 == 0:
                spend(16 + (high.bit_length() >> 4))
                p, q = self.bound(way, nh, dh)
                if p < q and (must is None or (k - must) * way > 0) and (rest := high * p // (q - p) + 1) <= small:
                    yield k + way, 0, rest
                    return
            low, high, k = low * nl // dl, -(-high * nh // dh), k + way
            yield k, low, high

    def atoms(self, lo: Any, hi: Any) -> Iterator[tuple[int, Any, Any]]:
        """Yield (k, low, high): the weights on a common scale, as fixed-point numbers."""
        self.whole_theta, self.whole_s = over_one(self.theta), over_one(self.s)
        t, s = ends(self.theta)[0], ends(self.s)[0]
        mode = max(0, (t * s - 1) // (1 - self.g * t))
        start = min(max(mode, lo or 0), mode if hi is None else hi)
        start = max(0, start if self.last is None else min(start, self.last))
        unit = 1 << (I.bits + 40)
        yield start, unit, unit
        yield from self.walk(start, 1, hi, unit)
        yield from self.walk(start, -1, lo, unit)

    def exact_atoms(self, hi: Any) -> Iterator[tuple[int, Any]]:
        """Yield (k, weight) as fractions with w(0) = 1, up to the last one or to hi."""
        require(not isinstance(self.theta, I) and not isinstance(self.s, I), "left undecided: this law is not rational")
        if (hi if self.last is None else self.last) > 20_000:
            raise TooMuch("exact masses of more than 20000 lattice points")
        weight, k = Fraction(1), 0
        while weight and (self.last is not None or k <= hi):
            spend(8 + (weight.denominator.bit_length() >> 3))
            yield k, weight
            weight, k = weight * self.theta * (self.s + self.g * k) / (k + 1), k + 1

    def exact_total(self) -> Any:
        """(1 - theta)**-s for the negative binomial of whole size; None where the sum ends by itself."""
        require(self.g != 0, "left undecided: this law has no rational masses")
        require(self.g < 0 or self.s.denominator == 1, "left undecided: this law has no rational masses")
        return None if self.g < 0 else power(1 - self.theta, -self.s)

    def log_likelihood(self, y: Any) -> Any:
        if self.g == 0:
            return y * log(self.theta) - self.theta
        return y * log(self.theta) + self.s / self.g * log(1 - self.g * self.theta)

    def log_mass(self, y: Any) -> Any:
        if y > 5000:
            raise TooMuch("a support that begins far from 0")
        return log(self.relative(0, y)) + self.log_likelihood(0)

    def relative(self, y: Any, z: Any) -> Any:
        """w(z) / w(y) for whole y <= z."""
        result = Fraction(1)
        for k in range(int(y), int(z)):
            result = result * self.theta * (self.s + self.g * k) / (k + 1)
        return result


class Table:
    """Masses w_v theta**v / C(theta)**n: the n-fold power of sum of w_y theta**y, exactly, by powers of one large
    integer.
    """

    def __init__(self, theta: Any, weights: Any, first: Any, n: int, total: Any, mean: Any, top: Any) -> None:
        self.theta, self.first, self.weights_of_one = theta, first, weights
        scale = 1
        for w in weights:
            scale = scale * w.denominator // gcd(scale, w.denominator)
        numbers = [int(w * scale) for w in weights]
        self.finite = total is None
        length = n * (len(weights) - 1) + 1 if self.finite else min(len(weights), top - n * first + 1)
        self.numbers, self.origin = convolve(numbers, n, length), n * first
        powers = [w * power(theta, Fraction(first + j)) for j, w in enumerate(weights)] if self.finite else []
        self.log_total = log(sum(powers, Fraction(0)) if self.finite else total)
        if self.finite:
            mean = sum(((first + j) * v for j, v in enumerate(powers)), Fraction(0)) / sum(powers, Fraction(0))
        self.mean = None if mean is None else mean * n
        self.total = None if self.finite else power(total * scale / power(theta, Fraction(first)), Fraction(n))
        self.last = self.origin + length - 1 if self.finite else None

    def atoms(self, lo: Any, hi: Any) -> Iterator[tuple[int, Any, Any]]:
        tl, th, td = over_one(self.theta)
        low = high = 1 << (I.bits + 40)
        for j, number in enumerate(self.numbers):
            spend(1 + (number.bit_length() >> 6) + (I.bits >> 8))
            yield self.origin + j, number * low, number * high
            low, high = low * tl // td, -(-high * th // td)

    def exact_atoms(self, hi: Any) -> Iterator[tuple[int, Any]]:
        require(not isinstance(self.theta, I), "left undecided: this law is not rational")
        p = Fraction(1)
        for j, number in enumerate(self.numbers):
            spend(8 + (p.denominator.bit_length() >> 3))
            yield self.origin + j, number * p
            p *= self.theta

    def exact_total(self) -> Any:
        require(self.finite or not isinstance(self.total, I), "left undecided: this law has no rational masses")
        return self.total

    def log_likelihood(self, y: Any) -> Any:
        return y * log(self.theta) - self.log_total

    def log_mass(self, y: Any) -> Any:
        return log(self.weights_of_one[int(y) - self.first]) + self.log_likelihood(y)

    def relative(self, y: Any, z: Any) -> Any:
        y, z = int(y) - self.first, int(z) - self.first
        require(0 <= y < z < len(self.weights_of_one), "an atom outside the table of weights")
        return self.weights_of_one[z] / self.weights_of_one[y] * power(self.theta, Fraction(z - y))


def convolve(numbers: Any, n: int, length: int) -> list[int]:
    """Coefficients 0..length-1 of the n-th power of a polynomial with whole coefficients >= 0.

    The polynomial is written as one integer in base 2**size with 2**size > (sum of coefficients)**n, which no
    coefficient of
    the power exceeds, so the digits do not run into each other; digits beyond ``length`` are cut after each product.
    """
    size = n * sum(numbers).bit_length() + 1
    words = length * size >> 6
    spend(words + isqrt(words) ** 3 >> 7)
    cut = (1 << size * length) - 1
    packed = sum(c << (size * j) for j, c in enumerate(numbers[:length]))
    result = 1
    for bit in bin(n)[2:]:
        result = result * result & cut
        if bit == "1":
            result = result * packed & cut
    mask = (1 << size) - 1
    data = result.to_bytes((size * length + 7) // 8 + 8, "little")
    return [
        int.from_bytes(data[size * j // 8 : size * (j + 1) // 8 + 1], "little") >> (size * j % 8) & mask
        for j in range(length)
    ]


def sums(law: Any, lo: Any, hi: Any, exact: Any) -> Any:
    """Sum the weights: at lo, at hi, strictly between them (lo or hi None: to the end), the same times k - lo, and all.

    Interval sums are whole numbers on one common scale, so only their quotients have a meaning.
    """
    if lo is not None and hi is not None and hi - lo > LIMIT:
        raise TooMuch(f"a window of {hi - lo} lattice points")
    low, high = [0] * 5, [0] * 5
    triples = ((k, w, w) for k, w in law.exact_atoms(lo if hi is None else hi)) if exact else law.atoms(lo, hi)
    for k, w, v in triples:
        low[4] += w
        high[4] += v
        if (lo is None or k >= lo) and (hi is None or k <= hi):
            place = 0 if k == lo else 1 if k == hi else 2
            low[place] += w
            high[place] += v
            if place == 2 and lo is not None:
                low[3] += w * (k - lo)
                high[3] += v * (k - lo)
    if exact:
        found: list[Any] = [Fraction(x) for x in low]
        total = law.exact_total()
    else:
        found = [I(a, b) for a, b in zip(low, high, strict=True)]
        total = getattr(law, "total", None)
        total = None if total is None else total * Fraction(1 << (I.bits + 40))
    if total is not None:
        if hi is None:  # the weights end before the support does: what lies above lo is all but the rest
            found[2] = total - (found[4] - found[2])
        found[4] = total
    return found


def window_fractions(rows: Any, betas: Any, lo: Any, hi: Any, mean: Any) -> Any:
    """Solve for the weights (d_lo, d_hi) of the window's ends; the window function is 1 between them and 0 outside.

    One-sided: d m(end) + inner = beta W. Two limits: d_lo m_i(lo) + d_hi m_i(hi) = beta_i W_i - inner_i, i = 1, 2
    (Cramer's
    rule). Point null (one law, first moment about lo): d_hi (hi - lo) m(hi) = beta (mean - lo) W - moment, then d_lo.
    """
    right = [beta * row[4] - row[2] for row, beta in zip(rows, betas, strict=True)]
    if lo is None or hi is None:
        d = right[0] / rows[0][0 if hi is None else 1]
        return (d, None) if hi is None else (None, d)
    if lo == hi:
        d = right[0] / rows[0][0]
        other = right[1] / rows[1][0] if len(rows) == 2 else d * (1 + (mean - lo))
        if isinstance(d, I) or isinstance(other, I):
            raise Imprecise("one atom: only exact numbers decide")
        require(d == other, "one atom cannot meet both side conditions")
        return d, d
    if len(rows) == 1:
        d_hi = (betas[0] * (mean - lo) * rows[0][4] - rows[0][3]) / (rows[0][1] * (hi - lo))
        return (right[0] - d_hi * rows[0][1]) / rows[0][0], d_hi
    (a, b, *_), (c, d, *_) = rows
    det = a * d - b * c
    return (right[0] * d - right[1] * b) / det, (a * right[1] - c * right[0]) / det


# ---- [5] Continuous laws -------------------------------------------------------------------------------------------


def gamma_series(a: Any, x: Any) -> Any:
    """Enclose S(a, x) = sum over k >= 0 of x**k / (a (a+1) ... (a+k)), a, x > 0: the lower incomplete gamma over
    x**a exp(-x).

    Fixed-point sum of positive terms t(k+1) = t(k) x / (a+k+1), rounded down with (low x, high a) and up with
    (high x, low a).
    Once rho = x/(a+k+1) < 1, the terms after t are at most t rho / (1 - rho), since the ratios fall.
    """
    xi, ai = interval(x), interval(a)
    if xi.a <= 0 or ai.a <= 0:
        raise Imprecise("an incomplete gamma function at 0")
    q = max(0, -xi.e, -ai.e)
    if q > 200_000 or max(xi.top(), ai.top()) > 60:
        raise TooMuch("an incomplete gamma function of a huge number")
    xl, xh, al, ah = (v << (s.e + q) for s, v in ((xi, xi.a), (xi, xi.b), (ai, ai.a), (ai, ai.b)))
    low = high = t = v = 1 << (I.bits + 40)
    k = 0
    while True:
        k += 1
        under, over = al + (k << q), ah + (k << q)
        if k % 8 == 1:
            spend(8 + (I.bits + q >> 5))
            if xh < under and (rest := v * xh // (under - xh) + 1) << I.bits <= high:
                return I(low, high + rest, -I.bits - 40) / ai
        t, v = t * xl // over, -(-v * xh // under)
        low, high = low + t, high + v


gamma_scales: dict[Any, tuple[Fraction, I]] = {}


def gamma_kernel(a: Any, x: Any) -> Any:
    """Enclose x**a exp(-x) / Gamma(a), without a gamma function.

    Gamma(a) = lower(a, X) + upper(a, X) for any X, lower(a, X) = X**a exp(-X) S(a, X), and with c = max(a-1, 0), X > c,
    0 < upper(a, X) = X**(a-1) exp(-X) times the integral over s > 0 of (1 + s/X)**(a-1) exp(-s) <= X**a exp(-X) /
    (X - c),
    because (1 + s/X)**(a-1) <= exp(c s/X). X = a + sqrt(2 a L) + L with L near bits * log 2 makes this remainder
    negligible.
    """
    key = (*ends(a), I.bits)
    if key not in gamma_scales:
        if interval(a).top() > 50:
            raise TooMuch("a gamma law of a huge shape")
        A, L = int(ends(a)[1]) + 1, I.bits * 7 // 10 + 20
        X = Fraction(A + isqrt(2 * A * L) + 1 + L)
        gamma_scales[key] = X, gamma_series(a, X) + hull(Fraction(0), 1 / (X - max(A - 1, 0)))
    X, scale = gamma_scales[key]
    I.bits += 64
    try:
        shape = exp(a * log(x / X) + X - x)
    finally:
        I.bits -= 64
    return shape / scale


class Gamma:
    """Density rate**shape y**(shape-1) exp(-rate y) / Gamma(shape) on y > 0."""

    positive = True

    def __init__(self, shape: Any, rate: Any) -> None:
        self.shape, self.rate, self.mean = shape, rate, shape / rate

    def cdf(self, y: Any) -> Any:
        x = self.rate * y
        return gamma_kernel(self.shape, x) * gamma_series(self.shape, x)

    def density(self, y: Any) -> Any:
        return gamma_kernel(self.shape, self.rate * y) / y

    def partial_mean(self, y: Any) -> Any:
        """E[Y; Y <= y] = mean * P(a + 1, x), and P(a + 1, x) = P(a, x) - x**a exp(-x) / Gamma(a + 1)."""
        return self.mean * (self.cdf(y) - gamma_kernel(self.shape, self.rate * y) / self.shape)

    def log_likelihood(self, y: Any) -> Any:
        return self.shape * log(self.rate) - self.rate * y


def normal_cdf(z: Any) -> Any:
    """Phi(z) = 1/2 + sign(z)/2 * P(1/2, z**2 / 2), P the regularised lower incomplete gamma function; Phi increases."""
    if isinstance(z, I):
        low, high = z.ends()
        return hull(normal_cdf(low), normal_cdf(high))
    if z == 0:
        return Fraction(1, 2)
    x, half = interval(z * z / 2), Fraction(1, 2)
    part = gamma_kernel(half, x) * gamma_series(half, x) / 2
    return half + part if z > 0 else half - part


class Normal:
    """Density exp(-(y - mean)**2 / (2 variance)) / sqrt(2 pi variance)."""

    positive = False

    def __init__(self, mean: Any, variance: Any) -> None:
        self.mean, self.variance = mean, variance

    def cdf(self, y: Any) -> Any:
        return normal_cdf((y - self.mean) / interval(sqrt(self.variance)))

    def density(self, y: Any) -> Any:
        return exp(-(y - self.mean) * (y - self.mean) / (2 * self.variance)) / sqrt(2 * pi() * self.variance)

    def partial_mean(self, y: Any) -> Any:
        """E[Y; Y <= y] = mean * cdf - variance * density (integrate by parts)."""
        return self.mean * self.cdf(y) - self.variance * self.density(y)

    def log_likelihood(self, y: Any) -> Any:
        return -(y - self.mean) * (y - self.mean) / (2 * self.variance) - log(self.variance) / 2


class InverseGaussian:
    """Density sqrt(shape / (2 pi y**3)) exp(-shape (y - mean)**2 / (2 mean**2 y)) on y > 0."""

    positive = True

    def __init__(self, mean: Any, shape: Any) -> None:
        self.mean, self.shape = mean, shape

    def parts(self, y: Any) -> Any:
        """Phi(u) and exp(2 shape/mean) Phi(-v); the second factor is tiny where the first is huge, hence the extra
        bits.
        """
        size = 2 * self.shape / self.mean
        extra = int(ends(size)[1] * 3 / 2) + 32
        if extra > 40_000:
            raise TooMuch("an inverse Gaussian law with a huge shape over mean")
        I.bits += extra
        try:
            root = sqrt(interval(self.shape / y))
            first, second = normal_cdf(root * (y / self.mean - 1)), exp(size) * normal_cdf(-root * (y / self.mean + 1))
        finally:
            I.bits -= extra
        return first, second

    def cdf(self, y: Any) -> Any:
        first, second = self.parts(y)
        return first + second

    def density(self, y: Any) -> Any:
        d = y - self.mean
        return sqrt(self.shape / (2 * pi() * y * y * y)) * exp(-self.shape * d * d / (2 * self.mean * self.mean * y))

    def partial_mean(self, y: Any) -> Any:
        """E[Y; Y <= y] = mean (Phi(u) - exp(2 shape/mean) Phi(-v)): both sides vanish at 0 and have the derivative
        y density(y).
        """
        first, second = self.parts(y)
        return self.mean * (first - second)

    def log_likelihood(self, y: Any) -> Any:
        d = y - self.mean
        return log(self.shape) / 2 - self.shape * d * d / (2 * self.mean * self.mean * y)


def newton(laws: Any, betas: Any, boxes: Any) -> Any:
    """One interval Newton step for the ends of the window on the boxes of the claim; return the enclosures of the ends.

    F(c) = window probabilities minus betas (point null: also the first moment minus beta * mean), m the midpoint,
    J an interval
    matrix that contains every derivative of F on the box X (rows: -density at the lower end, +density at the upper
    end, times y for
    a moment). For x in X, F(x) = F(m) + A(x) (x - m), where A(x) is the integral of F' along the segment,
    continuous in x, and in J
    since the set J is convex. If det J does not contain 0 and N = m - J**-1 F(m) lies in X, then x -> m - A(x)**-1
    F(m) maps X
    continuously into N, so by Brouwer it has a fixed point x, and there F(x) = 0; every zero in X is such a point,
    so it lies in N.
    N is enclosed by Cramer's rule. That there is no other zero anywhere is the theorem (FORMAT.md [6]).
    """
    low, high = boxes
    middles = [None if box is None else (box[0] + box[1]) / 2 for box in boxes]
    areas = [None if box is None else hull(*box) for box in boxes]
    if low is None or high is None:
        at, sign = (0, -1) if high is None else (1, 1)
        value = laws[0].cdf(middles[at]) if sign > 0 else 1 - laws[0].cdf(middles[at])
        step = middles[at] - (value - betas[0]) / (sign * laws[0].density(areas[at]))
        return (step, None) if high is None else (None, step)
    values = [law.cdf(middles[1]) - law.cdf(middles[0]) - beta for law, beta in zip(laws, betas, strict=True)]
    rows = [[-law.density(areas[0]), law.density(areas[1])] for law in laws]
    if len(laws) == 1:
        law = laws[0]
        values.append(law.partial_mean(middles[1]) - law.partial_mean(middles[0]) - betas[0] * law.mean)
        rows.append([areas[0] * rows[0][0], areas[1] * rows[0][1]])
    (a, b), (c, d) = rows
    det = a * d - b * c
    return middles[0] - (values[0] * d - values[1] * b) / det, middles[1] - (a * values[1] - c * values[0]) / det


# ---- [6] The question: density, hypothesis, law --------------------------------------------------------------------

FORMS = {
    "outside null": "inside",
    "interval null": "outside",
    "point null": "outside",
}  # form -> where the test rejects


class Question:
    """The problem as the certificate states it. Limits and law parameters are evaluated anew at each working
    precision.
    """

    def __init__(self, predicate: Any) -> None:
        p = fields(predicate["problem"], "title", "source", "density", "null", "alternative", "alpha", "n", "digits")
        self.density = fields(
            p["density"],
            "variable",
            "support",
            "parameter",
            "space",
            "constants",
            optional=("formula", "kernel", "weights"),
        )
        form(
            len({"formula", "kernel", "weights"} & set(self.density)) == 1,
            "one of formula, kernel and weights is needed",
        )
        self.t, self.n, self.digits = self.density["parameter"], p["n"], p["digits"]
        form(type(self.n) is int and self.n >= 1, "n is a whole number from 1")
        form(type(self.digits) is int and 2 <= self.digits <= 1000, "digits is a whole number from 2 to 1000")
        self.form, self.bounds, self.null_below = hypothesis(p["null"], self.t)
        self.alphas, self.law, self.derivation = p["alpha"], predicate["law"], predicate["derivation"]
        form(
            isinstance(self.alphas, list) and len(self.alphas) == len(self.bounds), "one level for each limit is needed"
        )
        fields(self.law, "name", "parameters", "scale", "shift", optional=("weights", "first"))
        self.test = predicate["test"]
        texts = " ".join([*(str(value) for key, value in self.density.items() if key != "constants"), *self.bounds])
        for name in self.density["constants"]:
            form(re.search(rf"\b{re.escape(name)}\b", texts), f"the constant {name} is not used")
        self.inner = self.form == "one-sided" or FORMS[self.form] == "inside"

    def names(self, t: Any = None) -> Any:
        names = {key: evaluate(text) for key, text in self.density["constants"].items()}
        return names if t is None else {**names, self.t: t}

    def limits(self) -> Any:
        return [evaluate(text, self.names()) for text in self.bounds]

    def levels(self) -> Any:
        return [evaluate(text) for text in self.alphas]

    def affine(self) -> Any:
        """V = scale * Y + shift, with Y the sum of n copies."""
        return evaluate(self.law["scale"], self.names()), evaluate(self.law["shift"], self.names()) * self.n

    def law_at(self, t: Any, n: int, top: Any = 10**6) -> Any:
        name, given = self.law["name"], self.law["parameters"]
        if name == "lattice":
            fields(
                given,
                "base",
                *(("total", "mean") if "total" in given and self.form == "point null" else ()),
                optional=("total",),
            )
            value = {key: evaluate(text, self.names(t)) for key, text in given.items()}
            weights = [rational(w) for w in self.law["weights"]]
            form(
                len(weights) > 1 and min(weights) >= 0 and weights[0] > 0 and type(self.law["first"]) is int, "weights"
            )
            require(less(0, value["base"]), "a base that is not positive")
            return Table(value["base"], weights, self.law["first"], n, value.get("total"), value.get("mean"), top)
        fields(given, *PARAMETERS[name])
        form("weights" not in self.law and "first" not in self.law, "weights belong to a lattice law")
        values = [evaluate(given[key], self.names(t)) * n**grows for key, grows in PARAMETERS[name].items()]
        x, y = values if len(values) == 2 else (values[0], Fraction(1, 2))
        require(name == "normal" or less(0, x), "a law parameter that is not positive")
        require(less(0, y), "a law parameter that is not positive")
        if name in ("binomial", "negative binomial"):
            require(less(y, 1), "a probability that is not below 1")
        if name == "binomial":
            require(not isinstance(x, I) and x.denominator == 1, "a number of trials that is not whole")
        return MAKERS[name](x, y)


MAKERS = {
    "Poisson": lambda mean, _: Counts(mean, Fraction(1), 0),
    "binomial": lambda trials, p: Counts(p / (1 - p), trials, -1),
    "negative binomial": lambda size, p: Counts(1 - p, size, 1),
    "gamma": Gamma,
    "normal": Normal,
    "inverse Gaussian": InverseGaussian,
}


def hypothesis(text: str, t: Any) -> Any:
    """Read the null hypothesis: its form, its limits as texts, and whether a one-sided null lies below its limit."""
    form(isinstance(text, str) and re.fullmatch(r"[A-Za-z_]\w*", t or ""), "the null hypothesis")
    e = r"([^<>=]+?)"
    shapes = (
        (rf"{t} <= {e} or {t} >= {e}", "outside null", True),
        (rf"{e} <= {t} <= {e}", "interval null", True),
        (rf"{t} = {e}", "point null", True),
        (rf"{t} <= {e}", "one-sided", True),
        (rf"{t} >= {e}", "one-sided", False),
    )
    for shape, name, below in shapes:
        match = re.fullmatch(shape, text)
        if match and " or " not in "".join(match.groups()):
            return name, list(match.groups()), below
    raise Malformed("a null hypothesis that is not of a known form")


OTHER = {
    "outside null": "{0} < {t} < {1}",
    "interval null": "{t} < {0} or {t} > {1}",
    "point null": "{t} != {0}",
    "one-sided": "{t} > {0}",
}


def check_statement(q: Any, problem: Any) -> None:
    """The alternative is the complement; the limits ascend and lie in the space; the levels lie between 0 and 1."""
    other = OTHER[q.form].format(*q.bounds, t=q.t)
    if not q.null_below:
        other = other.replace(">", "<")
    require(problem["alternative"] == other, "an alternative that is not the complement of the null hypothesis")
    limits, (low, high) = q.limits(), bounds_of(q.density["space"], q.t, q.names())
    require(len(limits) == 1 or less(limits[0], limits[1]), "limits that do not ascend")
    for limit in limits:
        require(
            (low is None or less(low, limit)) and (high is None or less(limit, high)),
            "a limit outside the parameter space",
        )
    for level in q.levels():
        require(less(0, level) and less(level, 1), "a level outside (0, 1)")


# ---- [7] A look at the density: does the stated law belong to the stated formula? ----------------------------------


def bounds_of(text: str, name: str, names: Any) -> Any:
    """Read the ends of a support or a parameter space: "reals", "t > a", "a < t < b", "reals in (a, b)", "integers
    a..b" ...
    """
    form(isinstance(text, str), "a support or space that is no text")
    text, e = re.sub(r"^(reals|integers)\s*(?=.)", name + " ", text.strip()), r"([^<>=]+?)"
    for shape, low, high in (
        (rf"(?:reals|integers|{name} )", 0, 0),
        (rf"{name} +in +[(\[](.+),(.+)[)\]]", 1, 2),
        (rf"{name} +(.+?)\.\.(.+)", 1, 2),
        (rf"{e} *<=? *{name} *<=? *{e}", 1, 2),
        (rf"{name} *>=? *{e}", 1, 0),
        (rf"{name} *<=? *{e}", 0, 1),
    ):
        match = re.fullmatch(shape, text)
        if match:
            return tuple(evaluate(match.group(i), names) if i else None for i in (low, high))
    raise Malformed(f"cannot read {text!r}")


def places(low: Any, high: Any) -> list[Fraction]:
    """Two rational places strictly between two ends (None: no end)."""
    low, high = (None if x is None else Fraction(sum(ends(x))) / 2 for x in (low, high))
    if low is not None and high is not None:
        return [low + (high - low) * Fraction(k, 16) for k in (5, 12)]
    if low is None and high is None:
        return [Fraction(-1, 3), Fraction(5, 2)]
    return [low + Fraction(3, 4), low + 3] if low is not None else [high - 3, high - Fraction(3, 4)]


def agree(x: Any, y: Any, what: str) -> None:
    """Whether two numbers agree: their difference contains 0 and is narrower than 2**-60 (relative to 1 + the
    larger one).
    """
    low, high = ends(x - y)
    require(low <= 0 <= high, what)
    if (high - low) * 2**60 > 1 + max(map(abs, ends(x))):
        raise Imprecise(what)


def check_density(q: Any) -> None:
    """Compare log f(x; t) - log f(x; u) with the stated law, and with Q(t), T(x), A(t), at several x, t and u.

    In a one-parameter family this is (Q(t) - Q(u)) T(x) - (A(t) - A(u)), and h(x) and the change of variable cancel, so
    it equals the log likelihood ratio of the law of Y = (T - shift) / scale. Points, not all values: a look, not a
    proof.
    """
    ts, xs = looked_at(q)
    statistic = [evaluate(q.derivation["statistic"], {**q.names(), q.density["variable"]: x}) for x in xs]
    scale, shift = evaluate(q.law["scale"], q.names()), evaluate(q.law["shift"], q.names())
    ys = [(v - shift) / scale for v in statistic]
    Q = [evaluate(q.derivation["natural_parameter"], q.names(t)) for t in ts]
    laws = [q.law_at(t, 1) for t in ts]
    ends_of_support = [
        y for x in bounds_of(q.density["support"], q.density["variable"], q.names()) for y in y_at(q, x, scale, shift)
    ]
    if isinstance(laws[0], (Counts, Table)):
        check_masses(q, xs, ys, ts[0], laws[0], ends_of_support)
    else:
        check_slopes(
            q,
            xs,
            ts[0],
            laws[0],
            lambda x: (evaluate(q.derivation["statistic"], {**q.names(), q.density["variable"]: x}) - shift) / scale,
        )
        for y in ends_of_support:
            require(laws[0].positive, "the support does not end where the law of the statistic does")
            agree(y, Fraction(0), "the support does not begin or end where the law of the statistic does")
    xs, ys, statistic = xs[:4], ys[:4], statistic[:4]
    logs = [[log(density_value(q, x, t)) for x in xs] for t in ts]
    for i in range(1, len(ts)):
        seen = [a - b for a, b in zip(logs[i], logs[0], strict=True)]
        stated = [laws[i].log_likelihood(y) - laws[0].log_likelihood(y) for y in ys]
        derived = [(Q[i] - Q[0]) * v for v in statistic]
        if "formula" in q.density:
            A = [evaluate(q.derivation["log_normaliser"], q.names(t)) for t in (ts[i], ts[0])]
            derived = [v - (A[0] - A[1]) for v in derived]
        else:
            seen, stated, derived = ([v - row[0] for v in row] for row in (seen, stated, derived))
        for a, b, c in zip(seen, stated, derived, strict=True):
            agree(a, b, "the density does not belong to the stated law")
            agree(a, c, "the density does not have the stated natural parameter, statistic and log-normaliser")
        rising = less(Q[0], Q[i]) == less(ts[0], ts[i])
        require(rising == q.derivation["rising"], "the natural parameter does not run in the stated direction")


def looked_at(q: Any) -> Any:
    """Parameter values (the limits and two more) and places x (for lattice laws the first ones of the support)."""
    names = q.names()
    ts = q.limits()
    ts += [t for t in places(*bounds_of(q.density["space"], q.t, names)) if t not in ts]
    low, high = bounds_of(q.density["support"], q.density["variable"], names)
    if not q.density["support"].startswith("integers"):
        inside = places(low, high)
        return ts, [inside[0], sum(inside) / 2, inside[1], inside[1] + (inside[1] - inside[0]) / 3]
    form(
        "weights" not in q.density or len(q.density["weights"]) == high - low + 1, "one weight for each place is needed"
    )
    start = low if low is not None else (high - 5 if high is not None else Fraction(-2))
    count = 6 if "weights" not in q.law else min(1000, len(q.law["weights"]))
    count = count if high is None else min(count, int(high - start) + 1)
    xs = [start + k for k in range(count)]
    return ts, [x for x in xs if "weights" not in q.density or rational(q.density["weights"][int(x - start)])]


def density_value(q: Any, x: Any, t: Any) -> Any:
    if "weights" in q.density:
        first = bounds_of(q.density["support"], q.density["variable"], q.names())[0]
        return rational(q.density["weights"][int(x - first)]) * power(t, x)
    return evaluate(
        q.density["formula" if "formula" in q.density else "kernel"], {**q.names(t), q.density["variable"]: x}
    )


def y_at(q: Any, x: Any, scale: Any, shift: Any) -> Any:
    """Y at an end of the support; nothing where there is no end or T is not finite there."""
    try:
        return (
            []
            if x is None
            else [(evaluate(q.derivation["statistic"], {**q.names(), q.density["variable"]: x}) - shift) / scale]
        )
    except (ZeroDivisionError, Imprecise, Rejected):
        return []


def check_masses(q: Any, xs: Any, ys: Any, t: Any, law: Any, ends_of_support: Any) -> None:
    """Lattice laws: masses and support are those of the stated law, where T is one-to-one on the places looked at."""
    require(all(not isinstance(y, I) and y.denominator == 1 for y in ys), "a lattice statistic off its lattice")
    first = law.first if isinstance(law, Table) else 0
    last = first + len(law.weights_of_one) - 1 if isinstance(law, Table) else law.last
    if isinstance(law, Table) and "formula" not in q.density:
        missing = set(range(first, last + 1)) - {int(y) for y in ys}
        require(all(law.weights_of_one[y - first] == 0 for y in missing), "a weight at a place without mass")
    if len(set(ys)) < len(ys):
        return
    require(
        all(y in (first, last) for y in ends_of_support), "the support does not end where the law of the statistic does"
    )
    order = sorted(zip(ys, xs, strict=True))
    if "formula" in q.density:
        y, x = order[0]
        agree(log(density_value(q, x, t)), law.log_mass(y), "the density is not normalised like the stated law")
    for (y, x), (z, u) in pairwise(order):
        ratio = density_value(q, u, t) / density_value(q, x, t)
        agree(ratio, law.relative(y, z), "the masses of the density are not those of the stated law")


def check_slopes(q: Any, xs: Any, t: Any, law: Any, y_of: Any) -> None:
    """Continuous laws: f(x; t) against the slope of the law's cdf along Y(x), by a central difference of step 2**-40.

    Where T runs in one direction at all places looked at (and near the ends of the support), the two are equal;
    where it turns,
    nothing is compared, and that f integrates to 1 rests on the derivation alone.
    """
    step = Fraction(1, 2**40)
    turns = {less(y_of(x - step), y_of(x + step)) for x in [*xs, *far_places(q)]}
    if len(turns) > 1:
        return
    sign = 1 if turns == {True} else -1
    for x in xs:
        slope = sign * (law.cdf(y_of(x + step)) - law.cdf(y_of(x - step))) / (2 * step * density_value(q, x, t))
        near = max(map(abs, ends(slope - 1))) < Fraction(1, 2**30)
        require(near, "the density does not have the distribution of the stated law")


def far_places(q: Any) -> list[Any]:
    low, high = bounds_of(q.density["support"], q.density["variable"], q.names())
    low, high = (None if x is None else Fraction(sum(ends(x))) / 2 for x in (low, high))
    far, near = Fraction(2**16), Fraction(1, 2**16)
    if low is not None and high is not None:
        return [low + (high - low) * near, high - (high - low) * near]
    if low is None and high is None:
        return [-far, far]
    return [low + near, low + far] if low is not None else [(high or 0) - near, (high or 0) - far]


# ---- [8] The test: cutoffs, fractions, expectations ----------------------------------------------------------------


def confirm(claim: Any, low: Any, high: Any, digits: int, what: str) -> None:
    """The claim is the outward rounding of [low, high] to so many digits: no tighter, no wider, and exact where it
    is exact.

    A number that lies on the decimal grid, or that cannot be told from it, may also be claimed with one unit on
    either side.
    """
    ask = claimed(claim)
    if ask[0] == ask[1]:
        if isinstance(low, I) or isinstance(high, I):
            raise Imprecise(f"{what}: only exact numbers decide")
        require(ask[0] == low == high, f"{what} is not the stated number")
        return
    (a, b), (c, d) = ends(low), ends(high)
    if a == d == grid(a, digits):
        tiny = abs(a) / 10 ** (digits + 20)
        a, d = a - tiny, d + tiny
    lower, upper = grid(a, digits), grid(d, digits, upward=True)
    if ask != (lower, upper):
        require(ask[0] <= b and c <= ask[1], f"{what} lies outside the stated enclosure")
        if lower != grid(b, digits) or upper != grid(c, digits, upward=True):
            raise Imprecise(f"{what}: rounding")
        raise Rejected(f"{what} does not have the stated enclosure: {spelled(lower)}, {spelled(upper)}")


def decide(rule: Any, *arguments: Any, exact: Any = None, start: Any = 128) -> Any:
    """Run a rule at rising precision until it does not raise Imprecise; then in exact fractions, where these exist."""
    reason = ""
    for factor in (1, 2, 4, 8):
        I.bits = start * factor
        try:
            return rule(*arguments)
        except Imprecise as open_question:
            reason = str(open_question)
        if exact and factor == exact[1]:
            break
    if exact:
        return exact[0](*arguments)
    raise Rejected(f"left undecided: {reason}")


class LatticeTest:
    """phi = 1 strictly inside (or outside) the window, gamma at its ends; psi = phi inside, 1 - phi outside the
    window.
    """

    def __init__(self, q: Any, exact: Any) -> None:
        self.q, self.exact = q, exact
        self.scale, self.shift = q.affine()
        self.flip = less(self.scale, 0)
        names = ("c", "gamma", "y") if q.form == "one-sided" else ("c1", "c2", "gamma1", "gamma2", "y1", "y2")
        fields(q.test, "form", "rejects", *names)
        self.keys = [k for k in names if k[0] == "y"]
        for key in self.keys:
            form(type(q.test[key]) is int, "a lattice point is a whole number")
        points = [q.test[k] for k in self.keys]
        if q.form == "one-sided":
            above = (q.test["rejects"] == "above") != self.flip
            self.window = (points[0], None) if above else (None, points[0])
        else:
            require(points == sorted(points, reverse=self.flip), "cutoffs that are not in order")
            self.window = (points[1], points[0]) if self.flip else tuple(points)
        self.laws: list[Any] = []
        self.rows: list[list[Any]] = []
        for t in q.limits():
            self.add(t)

    def add(self, t: Any) -> None:
        lo, hi = self.window
        law = self.q.law_at(t, self.q.n, hi if hi is not None else lo)
        self.laws.append(law)
        first, last = getattr(law, "origin", 0), law.last
        require(
            all(first <= y and (last is None or y <= last) for y in self.window if y is not None),
            "a cutoff off the support",
        )
        self.rows.append(sums(law, lo, hi, self.exact))

    def solve(self) -> None:
        q, (lo, hi) = self.q, self.window
        for key in self.keys:
            c = self.scale * q.test[key] + self.shift
            confirm(q.test["c" + key[1:]], c, c, q.digits, f"the cutoff c{key[1:]}")
        betas = [a if q.inner else 1 - a for a in q.levels()]
        found = window_fractions(self.rows, betas, lo, hi, self.laws[0].mean)
        for d in found:
            require(d is None or (less(0, d) and not less(1, d)), "a fraction outside (0, 1]: this is not the test")
        pairs = [(d if q.inner else 1 - d) for d in (found[::-1] if self.flip else found) if d is not None]
        for key, gamma in zip(self.keys, pairs, strict=True):
            confirm(q.test["gamma" + key[1:]], gamma, gamma, q.digits, "the fraction gamma" + key[1:])

    def psi(self, gammas: Any) -> Any:
        """Weights of the window's lower and upper end from the fractions in the order of the claim."""
        d = [g if self.q.inner else 1 - g for g in gammas]
        d = d[::-1] if self.flip else d
        return (
            (d[0], 0)
            if self.window[1] is None
            else (0, d[0])
            if self.window[0] is None
            else (d[0], 0 if self.window[0] == self.window[1] else d[1])
        )

    def size(self, i: int, gammas: Any) -> Any:
        """E phi under the i-th law."""
        d, row = self.psi(gammas), self.rows[i]
        inside = (row[2] + d[0] * row[0] + d[1] * row[1]) / row[4]
        return inside if self.q.inner else 1 - inside

    def moment(self, gammas: Any) -> Any:
        """E[V phi] for the point null: lo * E psi + E[(Y - lo) psi] inside, so mean minus that for Y phi."""
        d, row = self.psi(gammas), self.rows[0]
        lo, hi = (y or 0 for y in self.window)
        inside = row[2] + d[0] * row[0] + d[1] * row[1]
        part = (lo * inside + row[3] + d[1] * (hi - lo) * row[1]) / row[4]
        return self.scale * (self.laws[0].mean - part) + self.shift * (1 - inside / row[4])

    def claims(self) -> Any:
        return [claimed(self.q.test["gamma" + key[1:]]) for key in self.keys]

    def extremes(self, what: str) -> Any:
        """The claimed fractions at which E phi, or E[V phi], is smallest and largest over the claim: linear in
        each of them.
        """
        claims = self.claims()
        signs = [1] * len(claims)
        if what == "V phi":
            signs = [-1 if less(self.scale * self.q.test[key] + self.shift, 0) else 1 for key in self.keys]
        small = [c[0] if s > 0 else c[1] for c, s in zip(claims, signs, strict=True)]
        return small, [c[1] if s > 0 else c[0] for c, s in zip(claims, signs, strict=True)]

    rounded = "gamma"

    def all_means(self) -> Any:
        return self.scale * self.laws[0].mean + self.shift


class ContinuousTest:
    """phi = 1 between the cutoffs (or beyond them): no fractions."""

    rounded = "c"

    def __init__(self, q: Any) -> None:
        self.q = q
        self.scale, self.shift = q.affine()
        self.flip = less(self.scale, 0)
        self.keys = ["c"] if q.form == "one-sided" else ["c1", "c2"]
        fields(q.test, "form", "rejects", *self.keys)
        self.above = (q.test["rejects"] == "above") != self.flip
        self.laws = [q.law_at(t, q.n) for t in q.limits()]

    def add(self, t: Any) -> None:
        self.laws.append(self.q.law_at(t, self.q.n))

    def claims(self) -> Any:
        return [claimed(self.q.test[key]) for key in self.keys]

    def on_y(self, values: Any) -> Any:
        """Values on the scale of V, in the order of the claim, as (lower end, upper end) of the window on the
        scale of Y.
        """
        ys = [(v - self.shift) / self.scale for v in values]
        if len(ys) == 1:
            return (ys[0], None) if self.above else (None, ys[0])
        return tuple(ys[::-1] if self.flip else ys)

    def solve(self) -> None:
        q, claims = self.q, self.claims()
        require(
            all(a < b for a, b in claims), "left undecided: a cutoff of a continuous law that is claimed to be exact"
        )
        lows, highs = self.on_y([c[0] for c in claims]), self.on_y([c[1] for c in claims])
        boxes = [None if a is None else sorted_box(a, b, self.flip) for a, b in zip(lows, highs, strict=True)]
        for box in boxes:
            require(box is None or not self.laws[0].positive or less(0, box[0]), "a cutoff outside the support")
        low, high = boxes
        require(low is None or high is None or less(low[1], high[0]), "cutoffs that are not in order")
        betas = [a if q.inner else 1 - a for a in q.levels()]
        steps = newton(self.laws, betas, boxes)
        found = [self.scale * y + self.shift for y in (steps[::-1] if self.flip else steps) if y is not None]
        for key, claim, c in zip(self.keys, claims, found, strict=True):
            a, b = ends(c)
            require(a <= claim[1] and claim[0] <= b, f"the cutoff {key} lies outside the stated enclosure")
            if not claim[0] <= a <= b <= claim[1]:
                raise Imprecise(f"the Newton step for {key} leaves the box")
            confirm(q.test[key], c, c, q.digits, f"the cutoff {key}")

    def measure(self, law: Any, values: Any, whole: Any, part: Any) -> Any:
        lo, hi = self.on_y(values)
        at = [Fraction(0) if y is None or (law.positive and not less(0, y)) else part(law, y) for y in (lo, hi)]
        inside = (whole if hi is None else at[1]) - at[0]
        return inside if self.q.inner else whole - inside

    def size(self, i: int, values: Any) -> Any:
        return self.measure(self.laws[i], values, Fraction(1), lambda law, y: law.cdf(y))

    def moment(self, values: Any) -> Any:
        """E[V phi] = scale E[Y phi] + shift E phi, with E[Y; Y <= y] from the law."""
        first = self.measure(self.laws[0], values, self.laws[0].mean, lambda law, y: law.partial_mean(y))
        return self.scale * first + self.shift * self.size(0, values)

    def extremes(self, what: str) -> Any:
        """The claimed cutoffs at which E phi, or E[V phi], is smallest and largest: each is monotone in each cutoff."""
        claims = self.claims()
        grow = (
            [1 if self.q.test["rejects"] == "below" else -1]
            if len(claims) == 1
            else [-1, 1]
            if self.q.inner
            else [1, -1]
        )
        if what == "V phi":
            grow = [
                -g if less(c[1], 0) else g for g, c in zip(grow, claims, strict=True) if less(c[1], 0) or less(0, c[0])
            ]
        small = [c[0] if g > 0 else c[1] for c, g in zip(claims, grow, strict=True)]
        return small, [c[1] if g > 0 else c[0] for c, g in zip(claims, grow, strict=True)]

    def all_means(self) -> Any:
        return self.scale * self.laws[0].mean + self.shift


def sorted_box(a: Any, b: Any, flip: bool) -> Any:
    return (b, a) if flip else (a, b)


def check_numbers(q: Any, predicate: Any, exact: Any = False) -> None:
    continuous = q.law["name"] in ("gamma", "normal", "inverse Gaussian")
    test = ContinuousTest(q) if continuous else LatticeTest(q, exact)
    test.solve()
    check_conditions(q, test, predicate["side_conditions"])
    if continuous:
        decide(lambda: check_rounding(q, ContinuousTest(q), predicate["rounding"]), start=160)
    else:
        check_rounding(q, test, predicate["rounding"])


def check_conditions(q: Any, test: Any, conditions: Any) -> None:
    """Each side condition: where, its exact target, and the range of the expectation over all numbers within the
    claim.
    """
    wanted = [(b, a, "phi") for b, a in zip(q.bounds, q.alphas, strict=True)]
    if q.form == "point null":
        wanted.append((q.bounds[0], q.alphas[0], "V phi"))
    form(isinstance(conditions, list) and len(conditions) == len(wanted), "the side conditions")
    for i, (condition, (at, level, of)) in enumerate(zip(conditions, wanted, strict=True)):
        fields(condition, "at", "of", "target", "expectation")
        require(
            (condition["at"], condition["of"]) == (at, of), "a side condition that is not that of the null hypothesis"
        )
        target = evaluate(level) * (test.all_means() if of == "V phi" else 1)
        confirm(condition["target"], target, target, q.digits, "the target of a side condition")
        small, large = ((test.size(i, v) if of == "phi" else test.moment(v)) for v in test.extremes(of))
        confirm(condition["expectation"], small, large, q.digits, "the expectation in a side condition")


def fixed(x: Any, decimals: int) -> str:
    """Round to nearest (ties away from 0) with a fixed number of decimals, and spell it."""
    scaled = (abs(x) * 10**decimals * 2 + 1) // 2
    text = str(scaled).rjust(decimals + 1, "0")
    return ("-" if x < 0 and scaled else "") + text[:-decimals] + "." + text[-decimals:]


def check_rounding(q: Any, test: Any, rounding: Any) -> None:
    """True expectations, and the size, when the numbers are printed to k = 1, 2, ... decimals."""
    fields(rounding, "tolerance", "decimals", "rows")
    rows, tolerance = rounding["rows"], rational(rounding["tolerance"])
    form(isinstance(rows, list) and 1 <= len(rows) <= 60 and tolerance > 0, "the rows of the rounding table")
    levels, middle = q.levels(), None
    if q.form == "outside null":
        middle = len(levels)
        test.add(sum(q.limits()) / 2)
    first = 0
    for k, row in enumerate(rows, 1):
        fields(row, "decimals", "numbers", "expectations", "size")
        form(row["decimals"] == k and len(row["expectations"]) == len(levels), "the rows of the rounding table")
        texts = [fixed(low, k) for low, _ in test.claims()]
        require(
            texts == [fixed(high, k) for _, high in test.claims()],
            "left undecided: a number on the edge of its rounding",
        )
        names = [test.rounded + key[1:] for key in test.keys]
        require(row["numbers"] == dict(zip(names, texts, strict=True)), "numbers that are not rounded to nearest")
        values = [Fraction(text) for text in texts]
        found = [test.size(i, values) for i in range(len(levels))]
        for claim, e in zip(row["expectations"], found, strict=True):
            confirm(claim, e, e, min(q.digits, 15), "an expectation in the rounding table")
        check_size(row, found, None if middle is None else test.size(middle, values))
        if all(less(-tolerance, e - a) and less(e - a, tolerance) for e, a in zip(found, levels, strict=True)):
            first = first or k
    require(rounding["decimals"] == first, "the smallest sufficient number of decimals")


def check_size(row: Any, found: Any, middle: Any) -> None:
    """The size is the largest expectation at the limits.

    Power is monotone (one-sided), falls and then rises (rejecting outside) or rises and then falls (rejecting
    inside), by
    variation diminishing. In the last case the peak lies between the limits as soon as the middle has more power
    than both.
    """
    pairs = [claimed(value) for value in row["expectations"]]
    require(
        claimed(row["size"]) == (max(p[0] for p in pairs), max(p[1] for p in pairs)), "the size in the rounding table"
    )
    require(middle is None or all(less(e, middle) for e in found), "left undecided: where the power is largest")


# ---- [9] What is taken on trust; the verdict -----------------------------------------------------------------------

BOOK = "Lehmann and Romano 2005"
THEOREMS = {
    "one-sided": f"{BOOK}, Corollary 3.4.1: a one-sided test of this form is uniformly most powerful",
    "outside null": f"{BOOK}, Theorem 3.7.1: a test of this form with these side conditions is uniformly most powerful",
    "interval null": f"{BOOK}, section 4.2: a test of this form with these side conditions is "
    "uniformly most powerful unbiased",
    "point null": f"{BOOK}, section 4.2: a test of this form with these side conditions is "
    "uniformly most powerful unbiased",
}
STEPS = {"support", "nonnegativity", "normalisation", "factorisation", "monotonicity", "law"}
TRUSTED_NUMBERS = "the numbers: this law has no closed form here, and its quadrature or inversion is not replayed"


def trusted(q: Any, predicate: Any) -> list[str]:
    """The list of what is taken on trust, which the certificate has to state in the same words."""
    steps = predicate["derivation"]["steps"]
    listed = [f"theorem: {THEOREMS[q.form]}"]
    listed += [f"derivation, step {step['name']}: {step['grade']}" for step in steps]
    if q.law["name"] == "lattice" and "total" in q.law["parameters"]:
        listed.append("the table of weights: its normaliser, and its mean where one is stated")
    if q.law["name"] not in (*PARAMETERS, "lattice"):
        listed.append(TRUSTED_NUMBERS)
    listed.append("the double-precision numbers: they are reported by another library and compared here, not computed")
    return listed


def check_derivation(q: Any, steps: Any) -> None:
    grades = ("proved", "enclosed", "checked numerically")
    form(isinstance(steps, list), "the steps of the derivation")
    for step in steps:
        fields(step, "name", "grade", "statement", "reason")
        require(step["grade"] in grades, f"the step {step['name']} is {step['grade']}")
    names = [step["name"] for step in steps]
    needed = STEPS if q.law["name"] in PARAMETERS else STEPS - {"law"}
    require(
        needed <= set(names) and len(set(names)) == len(names), "a step of the derivation is missing, or stands twice"
    )
    ranks = [grades.index(step["grade"]) for step in steps if step["name"] != "numerical look"]
    require(q.derivation["grade"] == grades[max(ranks)], "the grade of a derivation is that of its weakest step")


def check_direction(q: Any) -> None:
    """One-sided: with Q rising, large V speaks for large t; the test rejects on the side of the alternative."""
    require(q.test.get("form") == q.form, "the form of the test is not that of the null hypothesis")
    side = FORMS.get(q.form) or ("above" if q.derivation["rising"] == q.null_below else "below")
    require(q.test.get("rejects") == side, "the test rejects on the wrong side")


def check_double(q: Any, section: Any) -> None:
    """Digits of agreement: the largest d <= 17 with |x - c| <= 10**-d |c| / 2 for every c of the claim (0 when
    there is none).
    """
    fields(section, "opinions", "flags", "condition")
    for opinion in section["opinions"]:
        fields(opinion, "route", "numbers", "digits", "note")
        form(isinstance(opinion["digits"], dict), "digits of agreement")
        require(set(opinion["digits"]) <= set(opinion["numbers"]), "digits of a number that is not reported")
        for key, text in opinion["numbers"].items():
            form(key in q.test and key not in ("form", "rejects"), f"an opinion on {key}")
            if text is not None and key in opinion["digits"]:
                require(
                    agreement(decimal(text), *claimed(q.test[key])) == opinion["digits"][key], f"the agreement of {key}"
                )
    for flag in section["flags"]:
        fields(flag, "kind", "number", "text")


def agreement(x: Any, low: Any, high: Any) -> int:
    worst, size = max(abs(x - low), abs(x - high)), min(abs(low), abs(high))
    return max((d for d in range(18) if 2 * worst * 10**d <= size), default=0)


def check(statement: Any) -> Any:
    """Check a whole certificate; return the question and the list of what is taken on trust."""
    fields(statement, "_type", "subject", "predicateType", "predicate")
    form((statement["_type"], statement["predicateType"]) == (TYPE, PREDICATE), "not a certificate of this version")
    form(isinstance(statement["subject"], list) and len(statement["subject"]) == 1, "one subject is needed")
    fields(fields(statement["subject"][0], "name", "digest")["digest"], "sha256")
    predicate = fields(
        statement["predicate"], "problem", "derivation", "law", "test", "side_conditions", "rounding",
        "double_precision", "versions", "issued", "assumptions", "seal",
    )  # fmt: skip
    rest = {key: value for key, value in predicate.items() if key != "seal"}
    require(
        predicate["seal"] == hashlib.sha256(canonical(rest)).hexdigest(), "the seal does not fit: something was changed"
    )
    fields(predicate["derivation"], "grade", "natural_parameter", "statistic", "log_normaliser", "rising", "steps")
    q = Question(predicate)
    check_derivation(q, predicate["derivation"]["steps"])
    require(predicate["assumptions"] == trusted(q, predicate), "the list of what is taken on trust is not complete")
    decide(check_statement, q, predicate["problem"])
    check_direction(q)
    check_double(q, predicate["double_precision"])
    if TRUSTED_NUMBERS in predicate["assumptions"]:
        return q, predicate["assumptions"]
    decide(check_density, q, start=192)
    exact = any(isinstance(q.test.get(key), str) for key in ("gamma", "gamma1", "gamma2"))
    lattice = q.law["name"] not in ("gamma", "normal", "inverse Gaussian")
    if exact:
        check_numbers(q, predicate, exact=True)
    else:
        fallback = (lambda *a: check_numbers(a[0], a[1], exact=True), 4) if lattice else None
        decide(check_numbers, q, predicate, exact=fallback, start=q.digits * 10 // 3 + 160)
    return q, predicate["assumptions"]


def check_case(statement: Any, path: Any) -> None:
    """The certificate is about this case file: its digest, and the problem as it stands there."""
    import tomllib

    with open(path, "rb") as file:
        data = file.read()
    require(
        hashlib.sha256(data).hexdigest() == statement["subject"][0]["digest"]["sha256"], "the case file is another one"
    )
    case, problem = tomllib.loads(data.decode()), statement["predicate"]["problem"]

    def plain(value: Any) -> str:
        return re.sub(r"\s", "", str(value)).replace("^", "**")

    for key in ("formula", "kernel", "variable", "parameter"):
        text = plain(case["density"].get(key))
        require(not text.isascii() or text == plain(problem["density"].get(key)), f"the case file has another {key}")
    require(int(case["problem"]["n"]) == problem["n"], "the case file has another n")


def verdict(data: bytes, case: Any = None) -> tuple[int, list[str]]:
    """Return the exit status and the lines to print for the bytes of a certificate."""
    work["left"] = LIMIT
    try:
        statement = read(data)
        q, assumptions = check(statement)
        if case:
            check_case(statement, case)
    except (Rejected, ZeroDivisionError) as reason:
        return 1, [f"REJECTED: {reason}"]
    except (TooMuch, RecursionError, MemoryError, OverflowError) as reason:
        return 3, [f"OVER THE LIMIT: {reason}"]
    except (Malformed, KeyError, TypeError, ValueError, IndexError, AttributeError) as reason:
        return 2, [f"MALFORMED: {type(reason).__name__}: {reason}"]
    trust = TRUSTED_NUMBERS in assumptions
    return 4 if trust else 0, [
        f"ACCEPTED{', WITH THE NUMBERS TAKEN ON TRUST,' if trust else ''} under {len(assumptions)} assumptions",
        f"sha256 {hashlib.sha256(data).hexdigest()}",
        f"{q.form}, n = {q.n}, law {q.law['name']}, {q.digits} digits",
        *(f"- on trust: {line}" for line in assumptions),
    ]


def main(arguments: list[str]) -> int:
    """Read the file named on the command line, print the verdict, and return the exit status."""
    files, case = arguments[:1], arguments[2:] if arguments[1:2] == ["--case"] else None
    if len(files) != 1 or files[0].startswith("-") or (len(arguments) > 1 and (case is None or len(case) != 1)):
        print("usage: python -I -S recheck.py FILE.cert.json [--case CASE.case.toml]", file=sys.stderr)
        return 2
    try:
        with open(files[0], "rb") as file:
            status, lines = verdict(file.read(FILE_LIMIT + 1), case and case[0])
    except OSError as reason:
        status, lines = 2, [f"MALFORMED: {reason}"]
    print("\n".join(lines))
    return status


if __name__ == "__main__":
    sys.set_int_max_str_digits(0)
    sys.exit(main(sys.argv[1:]))
