"""Recheck a certificate:  python -I -S recheck.py FILE.cert.json [--case CASE.case.toml].

A certificate states the numbers of an optimal test: its cutoffs, its randomisation fractions, its true size. This
file, with nothing but Python's standard library, proves them again from the definitions. It shares no code with the
program that wrote the certificate. It replays and never searches: cutoffs are given to it, and it shows that they
solve the side conditions. FORMAT.md publishes the same rules as formulas. Read from top to bottom: files and numbers
(1 to 4), laws (5, 6), the question and its density (7, 8), the test and its side conditions (9, 10), the verdict.

YOU TRUST Python's whole numbers, fractions, JSON reader and expression parser, and the four operations of its decimal
numbers when told to round down or up; this file; and what is printed with every verdict: the theorem that makes the
side conditions sufficient, the steps of the derivation with their grades, and, where there is no closed form, the
numbers themselves. The density is looked at in a few points only (8).

EXIT STATUS 0 accepted; 1 rejected; 2 malformed; 3 undecided, or over the limit of work; 4 accepted, but with the
numbers themselves on trust (laws without a closed form).
"""

from __future__ import annotations

import ast
import hashlib
import json
import operator
import re
import sys
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from decimal import MAX_EMAX, MIN_EMIN, ROUND_CEILING, ROUND_FLOOR, Context, Decimal, InvalidOperation, Overflow
from fractions import Fraction
from functools import lru_cache
from math import ceil, floor, isqrt, lcm
from typing import Any

TYPE = "https://in-toto.io/Statement/v1"
PREDICATE = "tag:sidecheck.invalid,2026:certificate/v1"
LIMIT = 12_000_000  # units of work; one unit is about one operation on numbers of 80 digits
FILE_LIMIT = 20_000_000  # bytes
work = {"left": LIMIT}

# ---- 1. Outcomes ---------------------------------------------------------------------------------------------------


class StopError(Exception):
    """The check ends here: an exit status and the reason."""


class ImpreciseError(Exception):
    """The intervals are too wide to decide: another round with more digits follows."""


def require(condition: object, message: str, status: int = 1) -> None:
    """Reject a false statement."""
    if not condition:
        raise StopError(status, message)


def form(condition: object, message: str) -> None:
    """Refuse a wrong form."""
    require(condition, message, 2)


def within(condition: object, what: str) -> None:
    """Give up beyond the limit of work."""
    require(condition, f"over the limit: {what}", 3)


def matched(pattern: str | re.Pattern[str], text: Any, what: str) -> re.Match[str]:
    """Read a text of a known form."""
    found = re.fullmatch(pattern, text) if isinstance(text, str) and len(text) < LONGEST else None
    if found is None:
        raise StopError(2, f"{what}: {text!r:.80}")
    return found


def spend(units: int) -> None:
    """Count work, so that a hostile file cannot keep the reader waiting."""
    work["left"] -= units
    within(work["left"] >= 0, f"more than {LIMIT} units of work")


# ---- 2. The file: canonical bytes, numbers, shape ------------------------------------------------------------------

PLAIN = r"(?!-0$)-?(?!0\.00000)(?:0|[1-9]\d{0,20})(?:\.\d*[1-9])?"
DECIMAL = re.compile(rf"{PLAIN}|-?[1-9](?:\.\d*[1-9])?e(-?[1-9]\d{{0,4}})")
RATIONAL = re.compile(r"-?(0|[1-9]\d*)(/[1-9]\d*)?")
LONGEST = 4200  # characters of a number


def canonical(value: Any) -> bytes:
    """RFC 8785 bytes, for text, counts, truth values, lists and objects with ASCII keys."""
    return json.dumps(value, sort_keys=True, separators=(",", ":"), ensure_ascii=False).encode()


def unique(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    """Refuse a key that stands twice."""
    form(len(dict(pairs)) == len(pairs), "a key that stands twice")
    return dict(pairs)


def count(text: str) -> int:
    """Read the only bare numbers there are."""
    return int(matched(r"-?\d{1,15}", text, "a bare number that is no count")[0])


def read(data: bytes) -> Any:
    """Parse the bytes, which must be the canonical form of what they say."""
    within(len(data) <= FILE_LIMIT, f"a file of more than {FILE_LIMIT} bytes")
    try:
        value = json.loads(data, object_pairs_hook=unique, parse_float=count, parse_constant=count, parse_int=count)
        form(canonical(value) == data, "bytes that are not the canonical form (RFC 8785)")
    except ValueError as error:
        raise StopError(2, f"not JSON in UTF-8: {error}") from None
    return value


@lru_cache(4096)
def rational(text: str) -> Fraction:
    """Read an exact number: -?int(/posint)?, in lowest terms."""
    value = Fraction(matched(RATIONAL, text, "no fraction")[0])
    form(str(value) == text, f"not in lowest terms: {text:.60}")
    return value


@lru_cache(4096)
def decimal(text: str) -> Fraction:
    """Read a decimal number in its one spelling: plain from 1e-5 to below 1e21, else d.ddde-N."""
    found = matched(DECIMAL, text, "a decimal number that is not spelled canonically")
    exponent = int(found[1] or 0)
    form(not found[1] or not -5 <= exponent <= 20, f"not spelled canonically: {text!r:.60}")
    within(abs(exponent) <= 20_000, "a decimal exponent beyond 20000")
    return Fraction(text)


def claimed(value: Any) -> tuple[Fraction, Fraction]:
    """Return the two ends of a number: equal for an exact one (a fraction), apart for {"lower": ..., "upper": ...}."""
    if isinstance(value, str):
        return rational(value), rational(value)
    form(isinstance(value, dict) and set(value) == {"lower", "upper"}, "neither a fraction nor two ends")
    low, high = decimal(value["lower"]), decimal(value["upper"])
    form(low < high, "an enclosure whose ends are not in order")
    return low, high


def reported(value: Any) -> None:
    """Check the form of a number that another library reported."""
    form(value is None or isinstance(value, str), "a reported number is text or null")


STATEMENT = {  # every key; "?" marks those that may be missing, "*" stands for names that the file chooses
    "_type": str, "predicateType": str, "subject": [{"name": str, "digest": {"sha256": str}}], "predicate": {
        "problem": {
            "title": str, "source": str, "null": str, "alternative": str, "alpha": [str], "n": int, "digits": int,
            "density": {
                "variable": str, "parameter": str, "support": str, "space": str, "constants": {"*": str},
                "formula?": str, "kernel?": str, "weights?": [rational]}},
        "derivation": {
            "grade": str, "natural_parameter": str, "statistic": str, "log_normaliser": str, "rising": bool,
            "steps": [{"name": str, "grade": str, "statement": str, "reason": str}]},
        "law": {"name": str, "parameters": {"*": str}, "scale": str, "shift": str, "weights?": [rational],
            "first?": int},
        "test": {"form": str, "rejects": str, "c?": claimed, "c1?": claimed, "c2?": claimed, "gamma?": claimed,
            "gamma1?": claimed, "gamma2?": claimed, "y?": int, "y1?": int, "y2?": int},
        "side_conditions": [{"at": str, "of": str, "target": claimed, "expectation": claimed}],
        "rounding": {"tolerance": rational, "decimals": int, "rows": [
            {"decimals": int, "numbers": {"*": str}, "expectations": [claimed], "size?": claimed}]},
        "double_precision": {
            "opinions": [{"route": str, "numbers": {"*": reported}, "digits": {"*": int}, "note": str}],
            "flags": [{"kind": str, "number": str, "text": str}], "condition": str},
        "versions": {"*": str}, "issued": str, "assumptions": [str], "seal": str},
}  # fmt: skip


def shaped(value: Any, shape: Any, path: str = "certificate") -> None:
    """Require a shape: an object with these keys, a list of such things, a type, or whatever a function lets pass."""
    if isinstance(shape, dict):
        known = {key.rstrip("?"): part for key, part in shape.items()}
        form(isinstance(value, dict) and (set(value) <= set(known) or "*" in known), f"{path}: another key")
        missing = {key for key in shape if key[-1] not in "?*"} - set(value)
        form(not missing, f"{path}: missing {sorted(missing)}")
        for key, part in value.items():
            shaped(part, known[key] if key in known else known["*"], f"{path}.{key}")
    elif isinstance(shape, list):
        form(isinstance(value, list), f"{path}: a list was expected")
        for i, part in enumerate(value):
            shaped(part, shape[0], f"{path}.{i}")
    elif isinstance(shape, type):
        form(type(value) is shape, f"{path}: {shape.__name__} was expected")
    else:
        shape(value)


# ---- 3. Interval arithmetic ----------------------------------------------------------------------------------------

TRAPS = [InvalidOperation, Overflow]  # anything else that has no answer; division by 0 is looked for before
down = Context(80, ROUND_FLOOR, MIN_EMIN, MAX_EMAX, traps=TRAPS)  # the same operations, rounded down
up = Context(80, ROUND_CEILING, MIN_EMIN, MAX_EMAX, traps=TRAPS)  # and rounded up, to so many significant digits


@contextmanager
def more_digits(extra: int) -> Iterator[None]:
    """Work with more digits inside a block."""
    down.prec = up.prec = down.prec + extra
    try:
        yield
    finally:
        down.prec = up.prec = down.prec - extra


class Interval:
    """The real numbers from ``low`` to ``high``.

    Every operation returns an interval that contains all results of the exact operation: the lower end is rounded
    down and the upper end up. Comparisons of decimal numbers are exact. Fractions stay exact until an interval meets
    them.
    """

    __slots__ = ("high", "low")

    def __init__(self, low: Decimal, high: Decimal) -> None:
        spend(1 + (down.prec >> 8))
        self.low, self.high = low, high

    def __add__(self, other: Number | Decimal | int) -> Interval:
        y = interval(other)
        return Interval(down.add(self.low, y.low), up.add(self.high, y.high))

    def __neg__(self) -> Interval:
        return Interval(self.high.copy_negate(), self.low.copy_negate())

    def __sub__(self, other: Number | Decimal | int) -> Interval:
        return self + -interval(other)

    def __rsub__(self, other: Number | Decimal | int) -> Interval:
        return -self + other

    def __mul__(self, other: Number | Decimal | int) -> Interval:
        y = interval(other)
        if self.low >= 0 and y.low >= 0:
            return Interval(down.multiply(self.low, y.low), up.multiply(self.high, y.high))
        pairs = [(a, b) for a in (self.low, self.high) for b in (y.low, y.high)]
        return Interval(min(down.multiply(a, b) for a, b in pairs), max(up.multiply(a, b) for a, b in pairs))

    def __truediv__(self, other: Number | Decimal | int) -> Interval:
        y = interval(other)
        if y.low <= 0 <= y.high:
            raise ImpreciseError("division by an interval that contains 0")
        pairs = [(a, b) for a in (self.low, self.high) for b in (y.low, y.high)]
        return Interval(min(down.divide(a, b) for a, b in pairs), max(up.divide(a, b) for a, b in pairs))

    def __rtruediv__(self, other: Number | Decimal | int) -> Interval:
        return interval(other) / self

    __radd__, __rmul__ = __add__, __mul__


Number = Fraction | Interval


def interval(x: Number | Decimal | int) -> Interval:
    """Enclose a number."""
    if isinstance(x, Interval):
        return x
    if isinstance(x, Decimal):
        return Interval(x, x)
    return Interval(down.divide(x.numerator, x.denominator), up.divide(x.numerator, x.denominator))


def ends(x: Number | int) -> tuple[Fraction, Fraction]:
    """Return both ends as fractions."""
    if not isinstance(x, Interval):
        return Fraction(x), Fraction(x)
    within(all(not end or abs(end.adjusted()) < 120_000 for end in (x.low, x.high)), "a number of 120000 digits")
    return Fraction(x.low), Fraction(x.high)


def less(x: Number | int, y: Number | int) -> bool:
    """Whether x < y; an overlap that leaves it open raises ImpreciseError."""
    if not isinstance(x, Interval) and not isinstance(y, Interval):
        return x < y
    gap = interval(y) - x
    if gap.low > 0 or gap.high <= 0:
        return gap.low > 0
    raise ImpreciseError("two overlapping intervals")


def hull(low: Number, high: Number) -> Interval:
    """Enclose everything from the lower end of one number to the upper end of another."""
    return Interval(interval(low).low, interval(high).high)


# ---- 4. Functions, each remainder with its proof -------------------------------------------------------------------


def series(a: Number, x: Number) -> Interval:
    """Enclose S(a, x) = sum over k >= 0 of x**k / (a (a+1) ... (a+k)), a > 0, x >= 0 (DLMF 8.7.1).

    A sum of terms t >= 0 with t(k) = t(k-1) x / (a+k). Once rho = x / (a+k) < 1, the terms after t(k-1) are at most
    t(k-1) rho / (1 - rho), since the ratios fall.
    """
    x, a = interval(x), interval(a)
    if x.low < 0 or a.low <= 0:
        raise ImpreciseError("an incomplete gamma function at 0")
    low = high = t = v = Decimal(1)
    k = 0
    while True:
        k += 1
        under, over = down.add(a.low, k), up.add(a.high, k)
        if k % 8 == 1:
            spend(32 + (down.prec * isqrt(down.prec) >> 7))
            left = down.subtract(under, x.high)
            if left > 0 and (rest := up.divide(up.multiply(v, x.high), left)) <= down.scaleb(high, -down.prec):
                return Interval(low, up.add(high, rest)) / a
        t, v = down.divide(down.multiply(t, x.low), over), up.divide(up.multiply(v, x.high), under)
        low, high = down.add(low, t), up.add(high, v)


def exp(x: Number) -> Interval:
    """Enclose exp: exp(x) = exp(x / 2**s)**(2**s), exp(u) = 1 + u S(1, u) for u >= 0, and exp(-x) = 1 / exp(x)."""
    x = interval(x)
    if x.low < 0:
        low = 1 / exp(-Interval(x.low, min(x.high, Decimal(0))))
        return low if x.high <= 0 else hull(low, exp(Interval(Decimal(0), x.high)))
    within(x.high < 2**36, "an exponential of a number beyond 2**36")
    s = isqrt(3 * down.prec) + int(x.high).bit_length()
    with more_digits(s // 3 + 8):
        u = x / (1 << s)
        total = 1 + u * series(Fraction(1), u)
        for _ in range(s):
            total = total * total
    return total


def log(x: Number) -> Interval:
    """Enclose log: for any y and d = x exp(-y) - 1 > -1, log x = y + log(1 + d) lies in y + [d / (1 + d), d]."""
    x = interval(x)
    if x.low <= 0:
        raise ImpreciseError("the logarithm of an interval that reaches 0")
    y = interval(down.ln(x.low))
    d = x * exp(-y) - 1
    return y + hull(d / (1 + d), d)


def power(x: Number, y: Number) -> Number:
    """Compute x**y: for whole y by multiplication, exact roots of fractions exactly, else exp(y log x)."""
    if isinstance(y, Fraction) and y.denominator == 2 and isinstance(x, Fraction):
        require(x >= 0, "the square root of a negative number")
        root = Fraction(isqrt(x.numerator), isqrt(x.denominator))
        x, y = (root, 2 * y) if root * root == x else (x, y)
    if isinstance(y, Interval) or y.denominator != 1:
        return exp(y * log(x))
    n = abs(int(y))
    if isinstance(x, Fraction) and n * max(x.numerator.bit_length(), x.denominator.bit_length()) < 60_000:
        return x ** int(y)
    result = base = interval(x)
    for bit in bin(n)[3:]:
        result = result * result * base if bit == "1" else result * result
    return (result if y > 0 else 1 / result) if n else Fraction(1)


def sqrt(x: Number) -> Number:
    """Enclose the square root."""
    return power(x, Fraction(1, 2))


def whole(x: Number, limit: int = 20_000) -> int:
    """Return a whole number >= 0 as such."""
    require(isinstance(x, Fraction) and x.denominator == 1 and x >= 0, "a count that is no whole number")
    within(ends(x)[0] <= limit, f"a count beyond {limit}")
    return int(ends(x)[0])


def rising(x: Number, k: int) -> Number:
    """Multiply x (x+1) ... (x+k-1) = Gamma(x+k) / Gamma(x)."""
    if k > 2000:
        return gamma(x + k) / gamma(x)
    result: Number = Fraction(1)
    for j in range(k):
        spend(1)
        result = result * (x + j)
    return result


@lru_cache(256)
def gamma_scale(a: Number, digits: int) -> tuple[Fraction, Interval]:
    """Return a number X and an enclosure of Gamma(a) X**-a exp(X).

    Gamma(a) = lower(a, X) + upper(a, X), lower(a, X) = X**a exp(-X) S(a, X), and with c = max(a-1, 0), X > c, 0 <
    upper(a, X) = X**(a-1) exp(-X) times the integral over s > 0 of (1 + s/X)**(a-1) exp(-s) <= X**a exp(-X) / (X -
    c), as (1 + s/X)**(a-1) <= exp(c s/X). X = a + sqrt(2 a L) + L, L near digits * log 10, makes it negligible.
    """
    within(interval(a).high < 2**50, "a gamma law of a huge shape")
    A, L = int(ends(a)[1]) + 1, digits * 12 // 5 + 20
    X = Fraction(A + isqrt(2 * A * L) + 1 + L)
    return X, series(a, X) + hull(Fraction(0), 1 / (X - max(A - 1, 0)))


def gamma_kernel(a: Number, x: Number) -> Interval:
    """Enclose x**a exp(-x) / Gamma(a) = (x/X)**a exp(X-x) / (Gamma(a) X**-a exp(X)); P(a, x) is this times S(a, x)."""
    X, scale = gamma_scale(a, down.prec)
    with more_digits(20):
        shape = exp(a * log(x / X) + X - x)
    return shape / scale


def gamma(a: Number) -> Number:
    """Gamma(a) = (a-1)! for small whole a, else x**a exp(-x) over `gamma_kernel` at x = a."""
    if isinstance(a, Fraction) and a.denominator == 1 and a <= 2000:
        return rising(Fraction(1), whole(a - 1))
    return exp(a * log(a) - a) / gamma_kernel(a, a)


@lru_cache(256)
def pi(digits: int) -> Number:
    """Enclose pi = Gamma(1/2)**2."""
    return power(gamma(Fraction(1, 2)), Fraction(2))


def normal_cdf(z: Number) -> Number:
    """Phi(z) = 1/2 + sign(z)/2 * P(1/2, z**2 / 2) (DLMF 7.11.1), and Phi increases."""
    half, (low, high) = Fraction(1, 2), ends(z)
    if low == high == 0:
        return half
    if low <= 0 <= high:
        return hull(normal_cdf(low), normal_cdf(high))
    x = interval(z * z / 2)
    part = gamma_kernel(half, x) * series(half, x) / 2
    return half + part if low > 0 else half - part


# ---- 5. Closed expressions -----------------------------------------------------------------------------------------

LITERAL = re.compile(r"(\d+\.?\d*|\.\d+)([eE][-+]?\d{1,4})?")
FUNCTIONS: dict[str, tuple[int, Callable[..., Number]]] = {
    "exp": (1, exp), "log": (1, log), "ln": (1, log), "sqrt": (1, sqrt), "gamma": (1, gamma),
    "factorial": (1, lambda n: gamma(Fraction(whole(n) + 1))), "loggamma": (1, lambda a: log(gamma(a))),
    "binomial": (2, lambda x, k: rising(x - k + 1, whole(k)) / rising(Fraction(1), whole(k))),
    "beta": (2, lambda a, b: gamma(a) * gamma(b) / gamma(a + b)),
    "abs": (1, lambda x: -x if less(x, 0) else x), "Abs": (1, lambda x: -x if less(x, 0) else x),
    "cosh": (1, lambda x: (exp(x) + exp(-x)) / 2), "sinh": (1, lambda x: (exp(x) - exp(-x)) / 2),
    "tanh": (1, lambda x: 1 - 2 / (exp(2 * x) + 1)),
}  # fmt: skip
OPERATIONS: dict[type[ast.operator], Callable[[Any, Any], Number]] = {
    ast.Add: operator.add, ast.Sub: operator.sub, ast.Mult: operator.mul, ast.Div: operator.truediv, ast.Pow: power,
}  # fmt: skip


@lru_cache(256)
def parsed(text: str) -> ast.expr:
    """Parse an expression: arithmetic in Python's own grammar."""
    form(len(text) < 4000 and text.isascii() and text.isprintable(), "an expression of other signs, or too long")
    try:
        return ast.parse(text, mode="eval").body
    except (SyntaxError, ValueError, RecursionError, MemoryError):
        raise StopError(2, f"cannot read {text!r:.80}") from None


def evaluate(text: str, names: dict[str, Number] | None = None) -> Number:
    """Evaluate an expression; numbers stay fractions as long as they can."""
    text = text.strip().replace("^", "**")

    def value(node: ast.expr) -> Number:
        match node:
            case ast.Constant():
                literal = text[node.col_offset : node.end_col_offset]
                form(LITERAL.fullmatch(literal), f"not a number: {literal!r:.40}")
                return Fraction(literal)
            case ast.Name(id=name):
                if names and name in names:
                    return names[name]
                form(name in ("pi", "E"), f"unknown name {name}")
                return pi(down.prec) if name == "pi" else exp(Fraction(1))
            case ast.UnaryOp(op=ast.USub() | ast.UAdd() as sign, operand=inner):
                return -value(inner) if isinstance(sign, ast.USub) else value(inner)
            case ast.BinOp(left=left, op=operation, right=right) if type(operation) in OPERATIONS:
                result = OPERATIONS[type(operation)](value(left), value(right))
                size = 0 if isinstance(result, Interval) else max(map(int.bit_length, result.as_integer_ratio()))
                within(size < 400_000, "a number of more than 400000 bits")
                return result
            case ast.Call(func=ast.Name(id=name), args=arguments, keywords=[]):
                form(name in FUNCTIONS and len(arguments) == FUNCTIONS[name][0], f"the function {name}")
                return FUNCTIONS[name][1](*map(value, arguments))
        raise StopError(2, f"not arithmetic: {text!r:.80}")

    return value(parsed(text))


# ---- 6. Laws of the sum Y of n statistics --------------------------------------------------------------------------
#
# psi is the window function of a test: on a lattice 1 strictly inside the window, d at its ends, 0 outside; for a
# continuous law 1 between the ends and 0 beyond. Each law gives, for one or two numbers (the d, or the ends), E psi
# and E[Y psi], and `slopes`: the derivative s of E psi by each number and the y where it acts, so that the derivative
# of E[Y psi] is y s.


class Lattice:
    """Masses P(k) = c_k theta**k s (s+g) ... (s+(k-1)g) / k! / Z, all c_k = 1 except in a table.

    Poisson            g =  0   s = 1        theta = mean        Z = exp(theta)
    binomial           g = -1   s = trials   theta = p/(1-p)     Z = (1 - p)**-s
    negative binomial  g =  1   s = size     theta = 1 - p       Z = p**-s
    table of weights   g =  1   s = 1        theta = base        Z = C**n
    """

    def __init__(
        self, theta: Number, s: Number, g: int, Z: Number, mean: Number, last: int | None = None,
        table: Sequence[int] = (), first: int = 0,
    ) -> None:  # fmt: skip
        self.theta, self.s, self.g, self.Z, self.mean = theta, s, g, Z, mean
        self.first, self.last, self.table = first, last, table

    def weight(self, k: int) -> int:
        """c_k."""
        return 1 if not self.table else self.table[k - self.first] if k - self.first < len(self.table) else 0

    def mass(self, k: int, weight: int | None = None) -> Number:
        """P(k), or with another weight in the place of c_k."""
        if k < self.first or (self.last is not None and k > self.last):
            return Fraction(0)
        start = self.s if self.g > 0 else self.s - k + 1
        product = Fraction(1) if self.table else (rising(start, k) if self.g else 1) / rising(Fraction(1), k)
        return (self.weight(k) if weight is None else weight) * product * power(self.theta, Fraction(k)) / self.Z

    def height(self, y: Number) -> Number:
        """Return the mass at y, which must be a point of the lattice."""
        require(isinstance(y, Fraction) and y.denominator == 1, "a lattice statistic off its lattice")
        return self.mass(int(ends(y)[0]))

    def open(self, lo: int | None, hi: int | None, exact: bool) -> None:
        """Sum up the masses of a window (lo or hi None: to the end) by P(k+1)/P(k), rounded down and up, or exactly."""
        start = self.first if lo is None or hi is None else lo
        stop = hi if hi is not None else lo if lo is not None else start
        within(stop - start <= LIMIT, f"a window of {stop - start} lattice points")
        unit = self.mass(start, 1)
        if exact and isinstance(unit, Interval):
            raise StopError(3, "intervals do not decide, and this law is not rational")
        sides: list[list[Any]] = []
        for side, c in enumerate((down,) if exact else (down, up)):
            plain: Any = (operator.add, operator.mul, operator.truediv)
            add, mul, div = plain if exact else (c.add, c.multiply, c.divide)
            given: list[Any] = [Fraction(1), Fraction(0), self.theta, self.s]
            given = given if exact else [(interval(x).low, interval(x).high)[side] for x in given]
            u, zero, theta, s = given
            row: list[Any] = [zero] * 4  # P(lo), P(hi), the mass between, the same times k - start
            for k in range(start, stop + 1):
                weight, place = self.weight(k), 0 if k == lo else 1 if k == hi else 2
                mass = mul(u, weight) if self.table else u
                row[place] = add(row[place], mass)
                if place == 2:
                    row[3] = add(row[3], mul(mass, k - start))
                u = div(mul(mul(u, theta), add(s, self.g * k)), k + 1)
                spend(
                    2 + (Fraction(u).numerator.bit_length() >> 4 if exact else c.prec >> 7) + (weight.bit_length() >> 6)
                )
            sides.append(row)
        found = [unit * (a if exact else Interval(a, b)) for a, b in zip(sides[0], sides[-1], strict=True)]
        self.inside = found[2] if hi is not None else 1 - found[0] - found[2]
        self.moment = found[3] + start * found[2]  # of no meaning, and not used, where lo or hi is None
        self.ends = [(y, found[i]) for i, y in enumerate((lo, hi)) if y is not None]

    def psi(self, d: Sequence[Number]) -> tuple[Number, Number]:
        """Return E psi and E[Y psi]."""
        parts = [x * mass for x, (_, mass) in zip(d, self.ends, strict=True)]
        first = sum((y * part for part, (y, _) in zip(parts, self.ends, strict=True)), self.moment)
        return sum(parts, self.inside), first

    def slopes(self, _: Sequence[Number]) -> list[tuple[Number, Number]]:
        """E psi grows by P(y) with the fraction at y."""
        return [(mass, Fraction(y)) for y, mass in self.ends]


@lru_cache(256)
def power_of(w: tuple[Fraction, ...], n: int, length: int) -> tuple[list[int], int]:
    """Return the first coefficients of q = p**n, p = sum of w_j z**j, over a common denominator: for k >= 1

    k w_0 q_k = sum over 1 <= j <= k of (j (n + 1) - k) w_j q_(k-j), from p q' = n p' q (Knuth, TAOCP 2, section 4.7).
    """
    q = [w[0] ** n]
    for k in range(1, length):
        spend(len(w[: k + 1]) * (2 + (q[-1].numerator.bit_length() >> 7)))
        terms = ((j * (n + 1) - k) * c * q[k - j] for j, c in enumerate(w[: k + 1]) if c and j)
        q.append(sum(terms, Fraction(0)) / (k * w[0]))
    scale = lcm(*(c.denominator for c in q))
    return [int(c * scale) for c in q], scale


def table_law(given: dict[str, Number], w: tuple[Fraction, ...], first: int, n: int, top: int | None) -> Lattice:
    """Return the law of n copies of Y with masses w_j base**(first+j) / C; C and E Y are sums, or given with a table

    that is the beginning of an endless one, and has to reach the cutoffs (up to Y = top).
    """
    theta, end, length = given["base"], n * first + n * (len(w) - 1), n * (len(w) - 1) + 1
    form(len(w) > 1 and min(w) >= 0 and w[0] > 0, "weights >= 0 that start above 0")
    require(less(0, theta), "a base that is not positive")
    if endless := "total" in given:
        total, mean = given["total"], given.get("mean", Fraction(0))
        length = len(w) if top is None else top - n * first + 1
        form(length <= len(w), "a table of weights that does not reach the cutoffs")
    else:
        masses = [(first + j, c * power(theta, Fraction(first + j))) for j, c in enumerate(w)]
        total = sum((mass for _, mass in masses), Fraction(0))
        mean = sum((y * mass for y, mass in masses), Fraction(0)) / total
    table, scale = power_of(w, n, length)
    Z = scale * power(total, Fraction(n))
    return Lattice(theta, Fraction(1), 1, Z, n * mean, None if endless else end, table, n * first)


@dataclass
class Smooth:
    """A continuous law: below(y) = (P(Y <= y), E[Y; Y <= y]); above: psi = 1 above a single end, else below it."""

    mean: Number
    positive: bool
    density: Callable[[Number], Number]
    below: Callable[[Number], tuple[Number, Number]]
    above: bool = False

    def height(self, y: Number) -> Number:
        """Return the density at y, which must lie inside the support."""
        require(y == 0 or not self.positive or less(0, y), "a statistic outside the support of its law")
        if y == 0 and self.positive:
            raise StopError(3, "a place looked at where the statistic touches the end of its law")
        return self.density(y)

    def psi(self, ys: Sequence[Number]) -> tuple[Number, Number]:
        """Return E psi and E[Y psi]."""
        zero = (Fraction(0), Fraction(0))
        if len(set(ys)) < len(ys):
            return zero
        at = [zero if self.positive and not less(0, y) else self.below(y) for y in ys]
        if len(ys) == 1:
            at = [at[0], (Fraction(1), self.mean)] if self.above else [zero, at[0]]
        return at[-1][0] - at[0][0], at[-1][1] - at[0][1]

    def slopes(self, ys: Sequence[Number]) -> list[tuple[Number, Number]]:
        """E psi grows by the density with the upper end, and falls by it with the lower."""
        signs = (-1, 1) if len(ys) == 2 else (-1,) if self.above else (1,)
        return [(sign * self.density(y), y) for sign, y in zip(signs, ys, strict=True)]


def gamma_law(shape: Number, rate: Number) -> Smooth:
    """Density rate**shape y**(shape-1) exp(-rate y) / Gamma(shape) on y > 0, P(Y <= y) = P(a, x) with x = rate y.

    E[Y; Y <= y] = mean P(a+1, x), and P(a+1, x) = P(a, x) - x**a exp(-x) / Gamma(a+1) (DLMF 8.8.5).
    """

    def below(y: Number) -> tuple[Number, Number]:
        kernel = gamma_kernel(shape, rate * y)
        cdf = kernel * series(shape, rate * y)
        return cdf, shape / rate * (cdf - kernel / shape)

    return Smooth(shape / rate, True, lambda y: gamma_kernel(shape, rate * y) / y, below)


def normal_law(mean: Number, variance: Number) -> Smooth:
    """Density exp(-(y-m)**2 / (2v)) / sqrt(2 pi v); E[Y; Y <= y] = m P(Y <= y) - v density (integrate by parts)."""

    def density(y: Number) -> Number:
        d = y - mean
        return exp(-d * d / (2 * variance)) / sqrt(2 * pi(down.prec) * variance)

    def below(y: Number) -> tuple[Number, Number]:
        cdf = normal_cdf((y - mean) / sqrt(variance))
        return cdf, mean * cdf - variance * density(y)

    return Smooth(mean, False, density, below)


def inverse_gaussian(mean: Number, shape: Number) -> Smooth:
    """Density sqrt(l / (2 pi y**3)) exp(-l (y-m)**2 / (2 m**2 y)) on y > 0; with u, v = sqrt(l/y) (y/m -+ 1),

    P(Y <= y) = Phi(u) + exp(2l/m) Phi(-v), E[Y; Y <= y] = m (Phi(u) - exp(2l/m) Phi(-v)): both sides vanish at 0 and
    have the same derivative. One factor is tiny where the other is huge, hence the extra digits.
    """

    def density(y: Number) -> Number:
        d = (y - mean) / mean
        return sqrt(shape / (2 * pi(down.prec) * y * y * y)) * exp(-shape * d * d / (2 * y))

    def below(y: Number) -> tuple[Number, Number]:
        size = 2 * shape / mean
        extra = ceil(ends(size)[1] / 2) + 10
        within(extra <= 12_000, "an inverse Gaussian law with a huge shape over mean")
        with more_digits(extra):
            u, root = y / mean, sqrt(shape / y)
            one, two = normal_cdf(root * (u - 1)), exp(size) * normal_cdf(-root * (u + 1))
        return one + two, mean * (one - two)

    return Smooth(mean, True, density, below)


Law = Lattice | Smooth
LAWS: dict[str, tuple[dict[str, int], Callable[..., Law]]] = {  # parameters with the power of n by which each grows
    "Poisson": ({"mean": 1}, lambda m: Lattice(m, Fraction(1), 0, exp(m), m)),
    "binomial": ({"trials": 1, "probability": 0}, lambda N, p: Lattice(
        p / (1 - p), N, -1, power(1 - p, -N), N * p, whole(N, 10**15))),
    "negative binomial": ({"size": 1, "probability": 0}, lambda r, p: Lattice(
        1 - p, r, 1, power(p, -r), r * (1 - p) / p)),
    "gamma": ({"shape": 1, "rate": 0}, gamma_law),
    "normal": ({"mean": 1, "variance": 1}, normal_law),
    "inverse Gaussian": ({"mean": 1, "shape": 2}, inverse_gaussian),
}  # fmt: skip
CONTINUOUS = ("gamma", "normal", "inverse Gaussian")

# ---- 7. The question -----------------------------------------------------------------------------------------------

BEST = "Lehmann and Romano 2005, {}: a test of this form with these side conditions is {}most powerful{}".format
UMP, BETWEEN = (BEST(f"Theorem {place}", "uniformly ", "") for place in ("3.4.1", "3.7.1"))
UNBIASED = BEST("section 4.2", "uniformly ", " unbiased")
TWO = BEST("Theorem 3.6.1", "", " at every alternative among the tests with these two expectations at the limits")
NULLS = (  # null hypothesis; form; where the test rejects (one-sided: if Q rises); alternative; theorem
    ("{t} <= {0} or {t} >= {1}", "outside null", "inside", "{0} < {t} < {1}", BETWEEN),
    ("{0} <= {t} <= {1}", "interval null", "outside", "{t} < {0} or {t} > {1}", UNBIASED),
    ("{t} = {0}", "point null", "outside", "{t} != {0}", UNBIASED),
    ("{t} <= {0}", "one-sided", "above", "{t} > {0}", UMP),
    ("{t} >= {0}", "one-sided", "below", "{t} < {0}", UMP),
)


def hypothesis(text: str, t: str) -> tuple[list[str], str, str, str, str]:
    """Read a null hypothesis: limits as texts, form, where the test rejects, alternative, theorem."""
    for shape, name, side, other, theorem in NULLS:
        if found := re.fullmatch(shape.format("([^<>=]+?)", "([^<>=]+?)", t=t), text):
            return list(found.groups()), name, side, other.format(*found.groups(), t=t), theorem
    raise StopError(2, f"a null hypothesis of no known form: {text!r:.80}")


def bounds(text: str, name: str, names: dict[str, Number]) -> list[Number | None]:
    """Read the ends of a support or space: "reals", "t > a", "a < t < b", "reals in (a, b)", "integers a..b"."""
    plain, e = re.sub(r"^(reals|integers)\b\s*", name + " ", text.strip()).strip(), r"[^<>=]+?"
    for shape in (
        rf"(?:(?P<a>{e}) *(?P<after><=?) *)?{name}(?: *(?P<before><=?) *(?P<b>{e}))?",
        rf"{name} *(?P<after>>=?) *(?P<a>{e})",
        rf"{name} +(?:in +[(\[])?(?P<a>.+?)(?:\.\.|,)(?P<b>.+?)[)\]]?",
    ):
        if found := re.fullmatch(shape, plain):
            part = found.groupdict().get
            low, high = (evaluate(end, names) if end else None for end in (part("a"), part("b")))
            if text.strip().startswith("integers"):  # the first one after a, and the last before b
                low = low + 1 if low is not None and part("after") in ("<", ">") else low
                high = high - 1 if high is not None and part("before") == "<" else high
            return [low, high]
    raise StopError(2, f"cannot read {text!r:.80}")


class Question:
    """The problem as the certificate states it; numbers are evaluated anew at each working precision."""

    def __init__(self, predicate: dict[str, Any]) -> None:
        problem = predicate["problem"]
        self.density, self.n, self.digits, self.alphas = (problem[k] for k in ("density", "n", "digits", "alpha"))
        self.law, self.derivation, self.test = (predicate[key] for key in ("law", "derivation", "test"))
        self.t, self.x = self.density["parameter"], self.density["variable"]
        form(all(re.fullmatch(r"[A-Za-z_]\w*", name) for name in (self.t, self.x)), "a name that is no word")
        kinds = [kind for kind in ("formula", "kernel", "weights") if kind in self.density]
        form(len(kinds) == 1, "one of formula, kernel and weights is needed")
        self.kind = kinds[0]
        form(self.n >= 1 and 2 <= self.digits <= 1000, "n is from 1, and digits from 2 to 1000")
        self.limit_texts, self.form, self.side, self.other, self.theorem = hypothesis(problem["null"], self.t)
        form(len(self.alphas) == len(self.limit_texts), "one level for each limit is needed")
        form(self.law["name"] == "lattice" or not {"weights", "first"} & set(self.law), "weights of no lattice law")
        self.tails = [""] if self.form == "one-sided" else ["1", "2"]
        self.inner = self.form in ("one-sided", "outside null")  # the test rejects inside its window
        self.lattice = self.law["name"] not in CONTINUOUS
        kind = "gamma" if "gamma" + self.tails[0] in self.test else "c"  # the numbers that a reader rounds
        form(set(self.test) >= {kind + tail for tail in self.tails}, "the numbers of a test")
        self.claims = {kind + tail: claimed(self.test[kind + tail]) for tail in self.tails}
        used = " ".join(map(str, [*(self.density[k] for k in (self.kind, "support", "space")), *self.limit_texts]))
        unused = [name for name in self.density["constants"] if not re.search(rf"\b{re.escape(name)}\b", used)]
        form(not unused, f"constants that are not used: {unused}")

    def value(self, text: str, /, **values: Number) -> Number:
        """Evaluate an expression in the constants, and in values of variable or parameter."""
        return evaluate(text, {key: evaluate(constant) for key, constant in self.density["constants"].items()} | values)

    def ends_of(self, key: str) -> list[Number | None]:
        """Return the two ends of the support, or of the space."""
        constants = {name: self.value(name) for name in self.density["constants"]}
        return bounds(self.density[key], self.x if key == "support" else self.t, constants)

    def f(self, x: Number, t: Number) -> Number:
        """Return the density of one observation, or its kernel."""
        if self.kind == "weights":
            place = ends(x - (self.ends_of("support")[0] or 0))[0]
            return rational(self.density["weights"][int(place)]) * power(t, x)
        return self.value(self.density[self.kind], **{self.x: x, self.t: t})

    def stated(self, name: str, at: Number) -> Number:
        """T(x), Q(t) or A(t)."""
        return self.value(self.derivation[name], **{self.x if name == "statistic" else self.t: at})

    def y(self, x: Number) -> Number:
        """Y = (T(x) - shift) / scale."""
        return (self.stated("statistic", x) - self.value(self.law["shift"])) / self.value(self.law["scale"])

    def limits(self) -> list[Number]:
        """Return the limits of the null hypothesis."""
        return [self.value(text) for text in self.limit_texts]

    def levels(self) -> list[Number]:
        """Return one level for each limit."""
        return [evaluate(text) for text in self.alphas]

    def law_at(self, t: Number, n: int, top: int | None = None) -> Law:
        """Return the law of the sum of n copies of Y at a parameter value; of a table without end, up to Y = top."""
        given = {key: self.value(text, **{self.t: t}) for key, text in self.law["parameters"].items()}
        if self.law["name"] != "lattice":
            grows, make = LAWS[self.law["name"]]
            form(set(given) == set(grows), f"the parameters are {', '.join(grows)}")
            for key, x in given.items():
                require((make is normal_law and key == "mean") or less(0, x), "a law parameter that is not positive")
                require(key != "probability" or less(x, 1), "a probability that is not below 1")
            return make(*(given[key] * n**k for key, k in grows.items()))
        mean = {"mean"} if "total" in given and self.form == "point null" else set()
        form(set(given) == {"base"} | ({"total"} & set(given)) | mean, "the parameters of a lattice law")
        return table_law(given, tuple(map(rational, self.law["weights"])), self.law["first"], n, top)


def check_question(q: Question, problem: dict[str, Any]) -> None:
    """The alternative is the complement; the limits ascend and lie in the space; the levels lie between 0 and 1."""
    require(problem["alternative"] == q.other, "an alternative that is not the complement of the null hypothesis")
    limits, (low, high) = q.limits(), q.ends_of("space")
    require(len(limits) == 1 or less(limits[0], limits[1]), "limits that do not ascend")
    for limit in limits:
        inside = (low is None or less(low, limit)) and (high is None or less(limit, high))
        require(inside, "a limit outside the parameter space")
    require(all(less(0, level) and less(level, 1) for level in q.levels()), "a level outside (0, 1)")


# ---- 8. A look at the density: does the stated law belong to the stated formula? -----------------------------------


def places(low: Number | None, high: Number | None) -> list[Fraction]:
    """Six rational places strictly between two ends (None: no end), the last two near the ends or far out."""
    a, b = (None if x is None else sum(ends(x), Fraction(0)) / 2 for x in (low, high))
    us = [Fraction(k, 23) for k in (5, 11, 16, 20)] + [Fraction(1, 2**16), 1 - Fraction(1, 2**16)]
    if a is not None and b is not None:
        return [a + (b - a) * u for u in us]
    steps = [u / (1 - u) for u in us]
    return [s - 1 / s if a is None and b is None else a + s if a is not None else (b or 0) - s for s in steps]


def near_one(ratio: Number | int, what: str, slack: Fraction = Fraction(0)) -> None:
    """Require a ratio that is 1 as far as it is known, and known to 18 digits."""
    low, high = ends(ratio)
    require(low - slack <= 1 <= high + slack, what)
    if high - low > Fraction(1, 10**18):
        raise ImpreciseError(what)


def check_density(q: Question) -> None:
    """Compare density f, law g of one Y = (T - shift) / scale, and Q, T, A at several places x and values t, u:

        f(x;t) = g(y;t) abs(dy/dx)      (0 < f <= where T is not one-to-one here; on a lattice without the last factor)
        f(x;t) / f(x;u) = g(y;t) / g(y;u) = exp((Q(t) - Q(u)) T(x) - (A(t) - A(u)))

    a kernel: up to a factor. Q runs in the stated direction, and the support ends where the law does. A table is
    looked at everywhere. This finds slips; it looks at points. That f is a density for all t, and of this family, is
    the derivation's, and on trust.
    """
    ts = [*q.limits(), *(t for t in places(*q.ends_of("space"))[:3:2] if t not in q.limits())]
    laws = [q.law_at(t, 1) for t in ts]
    one, kernel, slack = laws[0], q.kind != "formula", Fraction(0 if q.lattice else 1, 10**9)
    xs, slopes, one_to_one = lattice_places(q, one) if isinstance(one, Lattice) else smooth_places(q)
    seen = [(x, q.f(x, ts[0]), one.height(q.y(x))) for x in xs]
    full = [(x, f, g) for x, f, g in seen if f != 0 and g != 0]
    require(all(less(0, f) for _, f, _ in full), "a density below 0")
    require(all((f == 0) == (g == 0) for _, f, g in seen) or not one_to_one, "a place with a mass by the law or f only")
    ratios = [f / (g * slope) for (_, f, g), slope in zip(seen, slopes, strict=True) if f != 0 and g != 0]
    for ratio in ratios:
        if one_to_one:
            near_one(ratio / (ratios[0] if kernel else 1), "the density is not that of the stated law", slack)
        else:
            require(kernel or less(ratio, 1 + Fraction(1, 10**8)), "more mass in the density than in the stated law")
    for t, law in zip(ts[1:], laws[1:], strict=True):
        rise = q.stated("natural_parameter", t) - q.stated("natural_parameter", ts[0])
        free = Fraction(0) if kernel else q.stated("log_normaliser", t) - q.stated("log_normaliser", ts[0])
        rows = []
        for x, f, g in full[:4]:
            ratio = q.f(x, t) / f
            tilt = exp(rise * q.stated("statistic", x) - free)
            rows.append((ratio / (law.height(q.y(x)) / g), ratio / tilt))
        for a, b in rows:
            near_one(a / (rows[0][0] if kernel else 1), "the density does not belong to the stated law")
            near_one(b / (rows[0][1] if kernel else 1), "the density has not the stated Q, T and log-normaliser")
        require((less(0, rise) == less(ts[0], t)) == q.derivation["rising"], "Q does not run in the stated direction")


def lattice_places(q: Question, law: Lattice) -> tuple[list[Fraction], list[Number], bool]:
    """All places of a table, or six; dy/dx = 1, and whether T is one-to-one there. The support ends with the law."""
    low, high = (None if x is None else ends(x)[0] for x in q.ends_of("support"))
    many = len(law.table) or 6
    if low is not None and high is not None:
        form(len(q.density.get("weights", ())) in (0, high - low + 1), "one weight for each place")
        many = min(many, int(high - low) + 1)
    xs = [low + k if low is not None else (high or Fraction(0)) - k for k in range(many)]
    ys = {q.y(x) for x in xs}
    if len(ys) < len(xs):
        return xs, [Fraction(1)] * len(xs), False
    filled = {law.first + j for j, number in enumerate(law.table) if number}
    limits = {q.y(x) for x in (low, high) if x is not None}
    require(filled <= ys, "a weight at a place without mass")
    require(law.table or limits == {law.first, law.last} - {None}, "the support does not end where the law of Y does")
    return xs, [Fraction(1)] * len(xs), True


def smooth_places(q: Question) -> tuple[list[Fraction], list[Number], bool]:
    """Four places; abs(dy/dx) to 9 digits (a central difference), and whether T runs in one direction at six.

    The support must end where the law of Y does, if T is finite there.
    """
    low, high = q.ends_of("support")
    xs, step = places(low, high), Fraction(1, 10**12)
    for end in (end for end in (low, high) if end is not None):
        try:
            y = q.y(end)
        except (ZeroDivisionError, ImpreciseError, StopError):
            continue  # T is not finite there
        near_one(2 if q.law["name"] == "normal" else 1 + y, "the support does not end where the law of Y does")
    slopes = [(q.y(x + step) - q.y(x - step)) / (2 * step) for x in xs]
    falls = [less(slope, 0) for slope in slopes]
    return xs[:4], [-s if fall else s for s, fall in zip(slopes, falls, strict=True)][:4], len(set(falls)) == 1


def check_ledger(q: Question) -> None:
    """The ledger's sentences on T, Q and a named law say, in the same words or by value, what the blocks say."""
    said = {step["name"]: step["statement"] for step in q.derivation["steps"]}
    found = matched(
        r".* with T\(x\) = (.+), Q\(\w+\) = (.+), h\(x\) = .+", said["factorisation"], "T and Q in the ledger"
    )
    x: dict[str, Number] = {q.x: places(*q.ends_of("support"))[1]}
    t = {q.t: q.limits()[0]}
    pairs = [(found[1], q.derivation["statistic"], x), (found[2], q.derivation["natural_parameter"], t)]
    if q.law["name"] in LAWS:
        found = matched(r"T (?:has the|= (.+) with Y of) law ([\w ]+)\((.+)\)", said["law"], "the law in the ledger")
        listed = dict(part.split(" = ") for part in re.split(r", (?=\w+ = )", found[3]))
        same = (found[2], set(listed)) == (q.law["name"], set(q.law["parameters"]))
        require(same, "the ledger names another law")
        pairs += [(listed[key], text, t) for key, text in q.law["parameters"].items()]
        line, scale, shift = found[1] or "Y", q.law["scale"], q.law["shift"]
        pairs += [(line, shift, {"Y": Fraction(0)}), (line, f"({scale}) + ({shift})", {"Y": Fraction(1)})]
    for mine, theirs, values in pairs:
        if mine != theirs:
            near_one(1 + q.value(mine, **values) - q.value(theirs, **values), "the ledger says something else")


# ---- 9. The test: cutoffs, fractions, expectations -----------------------------------------------------------------


def grid(x: Number, digits: int, upward: bool = False) -> Fraction:
    """Round an end of a number to so many significant decimal digits: the lower end down, or the upper end up."""
    end = ends(x)[upward]
    context = Context(digits, ROUND_CEILING if upward else ROUND_FLOOR, MIN_EMIN, MAX_EMAX, traps=TRAPS)
    return Fraction(context.divide(end.numerator, end.denominator))


def confirm(claim: Any, low: Number, high: Number, digits: int, what: str) -> None:
    """The claim is the outward rounding of [low, high] to so many digits: no tighter, no wider, exact where exact.

    A number that lies on the decimal grid may also be claimed with one unit on either side.
    """
    ask, (a, b), (c, d) = claimed(claim), ends(low), ends(high)
    if ask[0] == ask[1]:
        if a < b or c < d:
            raise ImpreciseError(f"{what}: only exact numbers decide")
        require(ask[0] == a == d, f"{what} is not the stated number")
        return
    if a == d == grid(a, digits):
        a, d = a - abs(a) / 10 ** (digits + 20), d + abs(a) / 10 ** (digits + 20)
    lower, upper = grid(a, digits), grid(d, digits, upward=True)
    if ask != (lower, upper):
        require(ask[0] <= b and c <= ask[1], f"{what} lies outside the stated enclosure")
        if lower != grid(b, digits) or upper != grid(c, digits, upward=True):
            raise ImpreciseError(f"{what}: rounding")
        raise StopError(1, f"{what} does not have the stated enclosure")


class Test:
    """The test phi, with the numbers of the claim or others in their place.

    psi = phi where the test rejects inside its window (or on one side), else 1 - phi. Its numbers x (part 6, in
    ascending order) and those v of the claim are bound by v = s x + h: gamma = d or 1 - d, and c = scale y + shift.
    """

    def __init__(self, q: Question, exact: bool = False) -> None:
        self.q, self.exact, self.scale, self.shift = q, exact, q.value(q.law["scale"]), q.n * q.value(q.law["shift"])
        flip = less(self.scale, 0)
        self.turn = slice(None, None, -1 if flip else 1)  # from the order of V to that of Y, and back
        kinds = ("gamma", "c", "y") if q.lattice else ("c",)
        form(set(q.test) == {"form", "rejects"} | {kind + i for kind in kinds for i in q.tails}, "numbers of a test")
        self.claims = list(q.claims.values())
        self.s, self.h = self.scale, self.shift
        if q.lattice:
            self.s, self.h = (Fraction(1), Fraction(0)) if q.inner else (Fraction(-1), Fraction(1))
        self.above = (q.test["rejects"] == "above") != flip
        self.points = [q.test["y" + i] for i in q.tails][self.turn] if q.lattice else []
        require(self.points == sorted(self.points), "cutoffs that are not in order")
        self.laws = [self.law_at(t) for t in q.limits()]

    def law_at(self, t: Number) -> Law:
        """Return the law of Y at a parameter value, ready for this window."""
        law = self.q.law_at(t, self.q.n, max(self.points, default=0))
        if isinstance(law, Smooth):
            law.above = self.above
            return law
        for y in self.points:
            require(law.first <= y and (law.last is None or y <= law.last), "a cutoff off the support")
        lo, hi = self.points[0], self.points[-1]
        if self.q.form == "one-sided":
            law.open(lo if self.above else None, None if self.above else hi, self.exact)
        else:
            law.open(lo, hi, self.exact)
        return law

    def x_of(self, values: Sequence[Number]) -> list[Number]:
        """Carry numbers of the claim to those of psi; equal ones stay equal."""
        known = {v: (v - self.h) / self.s for v in values}
        return [known[v] for v in values][self.turn]

    def expect(self, law: Law, values: Sequence[Number], of: str = "phi") -> Number:
        """E phi, or E[V phi] = scale E[Y phi] + shift E phi."""
        inside, first = law.psi(self.x_of(values))
        if not self.q.inner:
            inside, first = 1 - inside, law.mean - first
        return inside if of == "phi" else self.scale * first + self.shift * inside

    def solve(self) -> None:
        """Confirm cutoffs and fractions: those x for which the side conditions hold.

        The conditions F(x) = 0 are E_i psi = beta_i at the limits, with beta = alpha or 1 - alpha, and for the point
        null also E[Y psi] = beta E Y. F' are the slopes. On a lattice F is linear, and x = -F(0) / F'. For a
        continuous law let X be the box of the claim, m its middle, J the interval matrix of all F' on X. For x in X,
        F(x) = F(m) + A(x) (x - m), where A(x) is the integral of F' along the segment, continuous in x, and in J as J
        is convex. If det J does not contain 0 and N = m - J**-1 F(m) lies in X, then x -> m - A(x)**-1 F(m) maps X
        continuously into N, so by Brouwer it has a fixed point, and there F = 0; every zero in X is such a point, so
        it lies in N. `confirm` accepts a claim only if it is N rounded outward, so that N lies in X. That there is no
        other zero anywhere is the theorem (FORMAT.md).
        """
        q = self.q
        betas = [level if q.inner else 1 - level for level in q.levels()]
        m: list[Number] = [Fraction(0) for _ in q.tails]
        if not q.lattice:
            low, high = (self.x_of([claim[end] for claim in self.claims]) for end in (0, 1))
            m = self.x_of([(low + high) / 2 for low, high in self.claims])
            X = [hull(b, a) if self.turn.step < 0 else hull(a, b) for a, b in zip(low, high, strict=True)]
            require(q.law["name"] == "normal" or less(0, X[0]), "a cutoff outside the support")
            require(len(X) == 1 or less(X[0], X[1]), "cutoffs that are not in order")
        self.slopes = [law.slopes(m if q.lattice else X) for law in self.laws]
        at = [law.psi(m) for law in self.laws]
        F = [inside - beta for (inside, _), beta in zip(at, betas, strict=True)]
        J = [[slope for slope, _ in row] for row in self.slopes]
        if q.form == "point null":
            F.append(at[0][1] - betas[0] * self.laws[0].mean)
            J.append([slope * y for slope, y in self.slopes[0]])
        found = zero_of(F, J, m, self.points)[self.turn]
        for i, name, x in zip(q.tails, q.claims, found, strict=True):
            value = self.s * x + self.h
            if q.lattice:
                c = self.scale * q.test["y" + i] + self.shift
                confirm(q.test["c" + i], c, c, q.digits, f"the cutoff c{i}")
                require(less(0, x) and not less(1, x), "a fraction outside (0, 1]: this is not the test")
            confirm(q.test[name], value, value, q.digits, name)

    def extremes(self, i: int, of: str) -> list[Number]:
        """Return the smallest and largest expectation within the claim: monotone in each number, by its slope."""
        pairs = []
        for claim, (slope, y) in zip(self.claims, self.slopes[i][self.turn], strict=True):
            slope = (slope if self.q.inner else -slope) * self.s * (1 if of == "phi" else self.scale * y + self.shift)
            pairs.append(claim[::-1] if less(slope, 0) else claim)
        return [self.expect(self.laws[i], [pair[end] for pair in pairs], of) for end in (0, 1)]


def zero_of(F: list[Number], J: list[list[Number]], m: list[Number], points: list[int]) -> list[Number]:
    """Return m - J**-1 F by Cramer's rule. One atom (both ends on one point) has one number for both equations."""
    if len(m) == 1:
        return [m[0] - F[0] / J[0][0] if F[0] != 0 else m[0]]
    (a, b), (c, d) = J
    if points and points[0] == points[1]:
        x = -F[0] / a
        rest = c * x + F[1]
        if isinstance(rest, Interval):
            raise ImpreciseError("one atom: only exact numbers decide")
        require(rest == 0, "one atom cannot meet both side conditions")
        return [x, x]
    det = a * d - b * c
    return [m[0] - (F[0] * d - F[1] * b) / det, m[1] - (a * F[1] - c * F[0]) / det]


# ---- 10. Side conditions, rounding ---------------------------------------------------------------------------------


def decide(rule: Callable[[bool], None], digits: int, exact: bool = False) -> None:
    """Run a rule with ever more digits until none is lacking; then, where these exist, in fractions."""
    reason = ""
    for factor in (1, 2, 4) if exact else (1, 2, 4, 8):
        down.prec = up.prec = digits * factor
        try:
            return rule(False)
        except ImpreciseError as still_open:
            reason = str(still_open)
    if not exact:
        raise StopError(3, reason)
    return rule(True)


def check_numbers(q: Question, predicate: dict[str, Any]) -> None:
    """Solve and compare: in fractions at once where a claim is exact, else in intervals of sufficient precision."""

    def numbers(exact: bool) -> None:
        test = Test(q, exact)
        test.solve()
        check_conditions(q, test, predicate["side_conditions"])
        if q.lattice:
            check_rounding(q, test, predicate["rounding"])

    if any(isinstance(claim, str) for key, claim in q.test.items() if key.startswith("gamma")):
        numbers(True)
    else:
        decide(numbers, q.digits + 48, exact=q.lattice)
    if not q.lattice:
        decide(lambda _: check_rounding(q, Test(q), predicate["rounding"]), 48)


def check_conditions(q: Question, test: Test | None, conditions: list[dict[str, Any]]) -> None:
    """Each side condition: where, its exact target, and the range of the expectation within the claim (or on trust)."""
    wanted = [(i, at, "phi") for i, at in enumerate(q.limit_texts)]
    wanted += [(0, q.limit_texts[0], "V phi")] if q.form == "point null" else []
    form(len(conditions) == len(wanted), "the number of side conditions")
    for condition, (i, at, of) in zip(conditions, wanted, strict=True):
        require((condition["at"], condition["of"]) == (at, of), "another side condition than the null's")
        target = q.levels()[i]
        if test:
            target *= test.scale * test.laws[0].mean + test.shift if of == "V phi" else 1
            low, high = test.extremes(i, of)
            confirm(condition["expectation"], low, high, q.digits, "the expectation in a side condition")
        if test or of == "phi":
            confirm(condition["target"], target, target, q.digits, "the target of a side condition")


def fixed(x: Fraction, decimals: int) -> str:
    """Round to nearest (ties away from 0) with a fixed number of decimals, and spell it."""
    units = floor(abs(x) * 10**decimals + Fraction(1, 2))
    text = str(units).rjust(decimals + 1, "0")
    return ("-" if x < 0 and units else "") + text[:-decimals] + "." + text[-decimals:]


def check_size(row: dict[str, Any], found: list[Number], middle: Number | None) -> None:
    """The size is the largest expectation at the limits; left out only where the power in the middle may be lower."""
    if "size" not in row:
        shown = middle is None or all(ends(e)[1] < ends(middle)[0] for e in found)
        require(not shown, "a size that is left out although it is that at the limits")
    elif middle is not None and any(less(middle, e) for e in found):
        raise StopError(3, "where the power is largest")


def check_rounding(q: Question, test: Test | None, rounding: dict[str, Any]) -> None:
    """True expectations (or on trust), and the size, when the numbers are printed to k = 1, 2, ... decimals.

    The size is the largest expectation at the limits: power is monotone (one-sided), falls and then rises
    (rejecting outside) or rises and then falls (rejecting inside), by variation diminishing (Karlin 1968). In the
    last case no power beyond a limit exceeds the one at it, as soon as the middle has at least the power of both. A
    row without a size says less: that this is not shown.
    """
    rows, tolerance, levels, first = rounding["rows"], rational(rounding["tolerance"]), q.levels(), 0
    form(1 <= len(rows) <= 60 and tolerance > 0, "the rows of the rounding table")
    middle = test.law_at(sum(q.limits(), Fraction(0)) / 2) if test and q.form == "outside null" else None
    for k, row in enumerate(rows, 1):
        stated = row["expectations"]
        form(row["decimals"] == k and len(stated) == len(levels), "the rows of the rounding table")
        texts = {name: fixed(low, k) for name, (low, _) in q.claims.items()}
        if texts != {name: fixed(high, k) for name, (_, high) in q.claims.items()}:
            raise StopError(3, "a number on the edge of its rounding")
        require(row["numbers"] == texts, "numbers that are not rounded to nearest")
        lows, highs = zip(*map(claimed, stated), strict=True)
        require("size" not in row or claimed(row["size"]) == (max(lows), max(highs)), "the size in the rounding table")
        if test:
            values = [Fraction(text) for text in texts.values()]
            found = [test.expect(law, values) for law in test.laws]
            for claim, e in zip(stated, found, strict=True):
                confirm(claim, e, e, min(q.digits, 15), "an expectation in the rounding table")
            check_size(row, found, None if middle is None else test.expect(middle, values))
            gaps = [e - level for e, level in zip(found, levels, strict=True)]
            if not first and all(less(-tolerance, gap) and less(gap, tolerance) for gap in gaps):
                first = k
    require(not test or rounding["decimals"] == first, "the smallest sufficient number of decimals")


# ---- 11. What is taken on trust, what is reported ------------------------------------------------------------------

STEPS = {"support", "nonnegativity", "normalisation", "factorisation", "monotonicity"}
GRADES = ("proved", "enclosed", "checked numerically")
TRUSTED_NUMBERS = "the numbers: this law has no closed form here, and its quadrature or inversion is not replayed"
REPORTED = "the double-precision numbers: they are reported by another library and compared here, not computed"


def trusted(q: Question) -> list[str]:
    """What is taken on trust; the certificate has to state it in the same words."""
    listed = [f"theorem: {q.theorem if len(set(q.alphas)) == 1 else TWO}"]
    listed += [f"derivation, step {step['name']}: {step['grade']}" for step in q.derivation["steps"]]
    if q.law["name"] == "lattice" and "total" in q.law["parameters"]:
        listed.append("the table of weights: its normaliser, and its mean where one is stated")
    if q.law["name"] not in (*LAWS, "lattice"):
        listed.append(TRUSTED_NUMBERS)
    return [*listed, REPORTED]


def check_derivation(q: Question) -> None:
    """Every step is there once, none refuted or open, and the whole has the grade of the weakest; the test's form fits.

    One-sided with Q rising, large V speaks for large t.
    """
    steps = q.derivation["steps"]
    for step in steps:
        require(step["grade"] in GRADES, f"the step {step['name']} is {step['grade']}")
    names = {step["name"] for step in steps}
    needed = STEPS | {"law"} if q.law["name"] in LAWS else STEPS
    require(needed <= names and len(names) == len(steps), "a step of the derivation is missing, or stands twice")
    weakest = max(GRADES.index(step["grade"]) for step in steps if step["name"] != "numerical look")
    require(q.derivation["grade"] == GRADES[weakest], "the grade of a derivation is that of its weakest step")
    side = q.side if q.derivation["rising"] else {"above": "below", "below": "above"}.get(q.side, q.side)
    require((q.test["form"], q.test["rejects"]) == (q.form, side), "the test has not the form that the null asks for")


def check_double(q: Question, opinions: list[dict[str, Any]]) -> None:
    """Digits of agreement of a double x: the largest d <= 16 with |x - c| <= 10**-d |c| for all claimed c, or 0."""
    for opinion in opinions:
        numbers, digits = opinion["numbers"], opinion["digits"]
        form(all(re.fullmatch("(c|gamma)[12]?", key) and key in q.test for key in numbers), "an opinion on what")
        form(set(digits) == {key for key, x in numbers.items() if x is not None}, "the agreement of each number")
        for key, stated in digits.items():
            (low, high), x = claimed(q.test[key]), decimal(numbers[key])
            form(abs(x) < 2**1023, "a double that is too large")
            worst, size = max(abs(Fraction(float(x)) - end) for end in (low, high)), min(abs(low), abs(high))
            agreed = max((d for d in range(17) if worst * 10**d <= size), default=0)
            require(agreed == stated, f"the agreement of {key}")


# ---- 12. The command -----------------------------------------------------------------------------------------------


def check(statement: Any) -> Question:
    """Check a whole certificate; return its question."""
    shaped(statement, STATEMENT)
    form((statement["_type"], statement["predicateType"]) == (TYPE, PREDICATE), "not a certificate of this version")
    form(len(statement["subject"]) == 1, "one subject is needed")
    predicate = statement["predicate"]
    rest = {**statement, "predicate": {key: value for key, value in predicate.items() if key != "seal"}}
    require(predicate["seal"] == hashlib.sha256(canonical(rest)).hexdigest(), "the seal does not fit: a change")
    q = Question(predicate)
    check_derivation(q)
    require(predicate["assumptions"] == trusted(q), "the list of what is taken on trust is not complete")
    decide(lambda _: check_question(q, predicate["problem"]), 40)
    check_double(q, predicate["double_precision"]["opinions"])
    if TRUSTED_NUMBERS not in predicate["assumptions"]:
        decide(lambda _: check_ledger(q), 60)
        decide(lambda _: check_density(q), 60)
        check_numbers(q, predicate)
    else:
        decide(lambda _: check_conditions(q, None, predicate["side_conditions"]), q.digits + 48)
        check_rounding(q, None, predicate["rounding"])
    return q


def check_case(q: Question, statement: Any, data: bytes) -> None:
    """The certificate is about this case file: its digest, and every entry of the problem as it stands there."""
    import tomllib

    digest = hashlib.sha256(data).hexdigest()
    require(digest == statement["subject"][0]["digest"]["sha256"], "the case file is another one")
    signs = str.maketrans({"\u2264": "<=", "\u2265": ">=", "\u2212": "-", "\u00d7": "*", "\u00b7": "*", "\u00a0": " "})
    case = tomllib.loads(data.decode("utf-8-sig").translate(signs), parse_float=str)
    mine, density, problem = q.density, case["density"], case["problem"]
    names = {key: evaluate(str(density["constants"][key])) for key in mine["constants"]}
    null = re.sub(r"\s*(<=|>=|=)\s*", r" \1 ", problem["null"].strip())
    limits, *kind = hypothesis(null, q.t)
    alpha = problem["alpha"] if isinstance(problem["alpha"], list) else [problem["alpha"]] * len(q.alphas)
    weights = [str(Fraction(str(w))) for w in density.get("weights", [])]
    words: list[tuple[Any, ...]] = [
        (kind[:2], [q.form, q.side], "null hypothesis"),
        (weights, mine.get("weights", []), "table of weights"),
    ]
    for key in ("formula", "kernel", "variable", "parameter"):
        words.append((*(re.sub(r"\s", "", str(d.get(key))).replace("^", "**") for d in (mine, density)), key))
    words += [("integers" in mine[key], "integers" in density[key], key) for key in ("support", "space")]
    for one, other, what in words:
        require(one == other, f"the case file has another {what}")
    for there, here, what in (
        ([Fraction(str(problem["n"]))], [Fraction(q.n)], "n"),
        (names.values(), [q.value(key) for key in names], "constant"),
        (bounds(density["support"], q.x, names), q.ends_of("support"), "support"),
        (bounds(density["space"], q.t, names), q.ends_of("space"), "space"),
        ([evaluate(text, names) for text in limits], q.limits(), "null hypothesis"),
        ([evaluate(str(level)) for level in alpha], q.levels(), "alpha"),
    ):
        for x, y in zip(there, here, strict=True):
            low, high = (0, 0 if x is y else 1) if x is None or y is None else ends(x - y)
            require(low <= 0 <= high and (x is None) == (y is None), f"the case file has another {what}")


WORDS = {1: "REJECTED", 2: "MALFORMED", 3: "UNDECIDED"}
REASONS: dict[type[Exception], int] = {  # the first that fits; false numbers may divide by 0, other forms lack keys
    ZeroDivisionError: 1, ImpreciseError: 3, RecursionError: 3, MemoryError: 3, Overflow: 3, OverflowError: 3,
    KeyError: 2, TypeError: 2, ValueError: 2, IndexError: 2, AttributeError: 2,
}  # fmt: skip


def verdict(data: bytes, case: Any = None) -> tuple[int, list[str]]:
    """Return the exit status and the lines to print for a certificate's bytes, and perhaps its case file's path."""
    work["left"] = LIMIT
    try:
        statement = read(data)
        q = check(statement)
        if case:
            with open(case, "rb") as file:
                check_case(q, statement, file.read())
    except StopError as stop:
        return stop.args[0], [f"{WORDS[stop.args[0]]}: {stop.args[1]}"]
    except tuple(REASONS) as reason:
        status = next(status for kind, status in REASONS.items() if isinstance(reason, kind))
        return status, [f"{WORDS[status]}: {reason}"]
    trust = trusted(q)
    on_trust = TRUSTED_NUMBERS in trust
    return 4 if on_trust else 0, [
        f"ACCEPTED{', WITH THE NUMBERS TAKEN ON TRUST,' if on_trust else ''} under {len(trust)} assumptions",
        f"sha256 {hashlib.sha256(data).hexdigest()}",
        f"{q.form}, n = {q.n}, law {q.law['name']}, {q.digits} digits",
        *(f"- on trust: {line}" for line in trust),
    ]


def main(arguments: list[str]) -> int:
    """Read the file named on the command line, print the verdict, and return the exit status."""
    if len(arguments) not in (1, 3) or arguments[0].startswith("-") or arguments[1:2] not in ([], ["--case"]):
        print("usage: python -I -S recheck.py FILE.cert.json [--case CASE.case.toml]", file=sys.stderr)
        return 2
    try:
        with open(arguments[0], "rb") as file:
            status, lines = verdict(file.read(FILE_LIMIT + 1), arguments[2] if arguments[2:] else None)
    except OSError as reason:
        status, lines = 2, [f"MALFORMED: {reason}"]
    print("\n".join(lines))
    return status


if __name__ == "__main__":
    sys.set_int_max_str_digits(0)
    sys.exit(main(sys.argv[1:]))
