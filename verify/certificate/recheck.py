"""Recheck a certificate:  python -I -S recheck.py FILE.cert.json [--case CASE.case.toml].

WHY. A certificate states the numbers of an optimal test: its cutoffs, its randomisation fractions, its true size.
This one file, with nothing but Python's standard library, confirms them from the definitions. It shares no code
with the program that wrote the certificate. It replays and never searches: cutoffs are given to it, and it shows
that they solve the side conditions. FORMAT.md publishes the same rules as formulas. Read from top to bottom; each
part uses only what stands above it.

WHAT YOU TRUST. Python's whole numbers, fractions, JSON reader and expression parser; this file; and what is printed
with every verdict: the theorem that makes the side conditions sufficient, the steps of the derivation with their
grades, and where there is no closed form the numbers themselves. The density is looked at in a few points only
(part 8).

EXIT STATUS. 0 accepted; 1 rejected; 2 malformed; 3 undecided, or over the limit of work; 4 accepted, but with the
numbers themselves on trust (laws without a closed form).
"""

from __future__ import annotations

import ast
import hashlib
import json
import operator
import re
import sys
from collections.abc import Callable, Iterable, Iterator, Sequence
from contextlib import contextmanager
from fractions import Fraction
from functools import cache
from math import ceil, factorial, floor, isqrt, lcm
from typing import Any, ClassVar

TYPE = "https://in-toto.io/Statement/v1"
PREDICATE = "tag:sidecheck.invalid,2026:certificate/v1"
LIMIT = 12_000_000  # units of work; one unit is about one multiplication of 256-bit numbers
FILE_LIMIT = 20_000_000  # bytes

# ---- 1. Outcomes ---------------------------------------------------------------------------------------------------


class RejectedError(Exception):
    """Exit status 1: a statement of the certificate is false."""


class MalformedError(Exception):
    """Exit status 2: the file does not have the published form."""


class LimitError(Exception):
    """Exit status 3: checking this file needs more than the limit of work."""


class UndecidedError(Exception):
    """Exit status 3: this file cannot show the statement, nor its contrary."""


class ImpreciseError(Exception):
    """The intervals are too wide to decide: another round with more bits follows."""


def require(condition: object, message: str) -> None:
    """Reject a false statement."""
    if not condition:
        raise RejectedError(message)


def form(condition: object, message: str) -> None:
    """Refuse a wrong form."""
    if not condition:
        raise MalformedError(message)


work = {"left": LIMIT}


def spend(units: int) -> None:
    """Count work, so that a hostile file cannot keep the reader waiting."""
    work["left"] -= units
    if work["left"] < 0:
        raise LimitError(f"more than {LIMIT} units of work")


# ---- 2. The file: canonical bytes, numbers, shape ------------------------------------------------------------------


def canonical(value: Any) -> bytes:
    """RFC 8785 bytes, for text, counts, truth values, lists and objects with ASCII keys."""
    return json.dumps(value, sort_keys=True, separators=(",", ":"), ensure_ascii=False).encode()


def unique(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    """Refuse a key that stands twice."""
    form(len(dict(pairs)) == len(pairs), "a key that stands twice")
    return dict(pairs)


def count(text: str) -> int:
    """Read the only bare numbers there are."""
    form(re.fullmatch(r"-?\d{1,15}", text), f"a bare number that is no count: {text[:40]}")
    return int(text)


def read(data: bytes) -> Any:
    """Parse the bytes, which must be the canonical form of what they say."""
    if len(data) > FILE_LIMIT:
        raise LimitError(f"a file of more than {FILE_LIMIT} bytes")
    try:
        value = json.loads(
            data.decode(), object_pairs_hook=unique, parse_float=count, parse_constant=count, parse_int=count
        )
        form(canonical(value) == data, "bytes that are not the canonical form (RFC 8785)")
    except ValueError as error:
        raise MalformedError(f"not JSON in UTF-8: {error}") from None
    return value


# A decimal number has one spelling: plain from 1e-5 to below 1e21, else d.ddde-N; no zeros at the end.
PLAIN = re.compile(r"(?!-0$)-?(?!0\.00000)(0|[1-9]\d{0,20})(\.\d*[1-9])?")
SCIENTIFIC = re.compile(r"-?[1-9](\.\d*[1-9])?e(-?[1-9]\d{0,4})")
RATIONAL = re.compile(r"-?(0|[1-9]\d*)(/[1-9]\d*)?")
LONGEST = 4200  # characters of a number


def rational(text: str) -> Fraction:
    """Read an exact number: -?int(/posint)?, in lowest terms."""
    form(isinstance(text, str) and len(text) < LONGEST and RATIONAL.fullmatch(text), f"no fraction: {text!r:.60}")
    form(str(Fraction(text)) == text, f"a fraction that is not in lowest terms: {text:.60}")
    return Fraction(text)


def decimal(text: str) -> Fraction:
    """Read a decimal number in its one spelling."""
    form(isinstance(text, str) and len(text) < LONGEST, f"no decimal number: {text!r:.60}")
    match = SCIENTIFIC.fullmatch(text)
    form(PLAIN.fullmatch(text) or (match and not -5 <= int(match[2]) <= 20), f"not spelled canonically: {text!r:.60}")
    if match and abs(int(match[2])) > 20_000:
        raise LimitError("a decimal exponent beyond 20000")
    return Fraction(text)


def claimed(value: Any) -> tuple[Fraction, Fraction]:
    """Return the two ends of a number: equal for an exact one (a fraction), apart for {"lower": ..., "upper": ...}."""
    if isinstance(value, str):
        return rational(value), rational(value)
    form(isinstance(value, dict) and set(value) == {"lower", "upper"}, "neither a fraction nor two ends")
    low, high = decimal(value["lower"]), decimal(value["upper"])
    form(low < high, "an enclosure whose ends are not in order")
    return low, high


def report(value: Any) -> None:
    """Check the form of a number that another library reported, or null."""
    form(value is None or isinstance(value, str), "a reported number is text or null")


STEP = {"name": str, "grade": str, "statement": str, "reason": str}
DENSITY = {
    "variable": str, "parameter": str, "support": str, "space": str, "constants": {"*": str},
    "formula?": str, "kernel?": str, "weights?": [rational],
}  # fmt: skip
SHAPE = {  # every key; "?" marks those that may be missing, "*" stands for names that the file chooses
    "problem": {
        "title": str, "source": str, "density": DENSITY, "null": str, "alternative": str, "alpha": [str],
        "n": int, "digits": int,
    },
    "derivation": {
        "grade": str, "natural_parameter": str, "statistic": str, "log_normaliser": str, "rising": bool,
        "steps": [STEP],
    },
    "law": {
        "name": str, "parameters": {"*": str}, "scale": str, "shift": str, "weights?": [rational], "first?": int,
    },
    "test": {
        "form": str, "rejects": str, "c?": claimed, "c1?": claimed, "c2?": claimed, "gamma?": claimed,
        "gamma1?": claimed, "gamma2?": claimed, "y?": int, "y1?": int, "y2?": int,
    },
    "side_conditions": [{"at": str, "of": str, "target": claimed, "expectation": claimed}],
    "rounding": {
        "tolerance": rational, "decimals": int,
        "rows": [{"decimals": int, "numbers": {"*": str}, "expectations": [claimed], "size?": claimed}],
    },
    "double_precision": {
        "opinions": [{"route": str, "numbers": {"*": report}, "digits": {"*": int}, "note": str}],
        "flags": [{"kind": str, "number": str, "text": str}],
        "condition": str,
    },
    "versions": {"*": str}, "issued": str, "assumptions": [str], "seal": str,
}  # fmt: skip
STATEMENT = {
    "_type": str, "predicateType": str, "subject": [{"name": str, "digest": {"sha256": str}}], "predicate": SHAPE,
}  # fmt: skip


def shaped(value: Any, shape: Any, path: str) -> None:
    """Require a shape: an object with these keys, a list of such things, a type, or whatever a function lets pass."""
    if isinstance(shape, dict):
        form(isinstance(value, dict), f"{path}: an object was expected")
        known = {key.rstrip("?"): part for key, part in shape.items()}
        form(set(value) <= set(known) or "*" in known, f"{path}: unknown {sorted(set(value) - set(known))}")
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


class Interval:
    """The real numbers from a * 2**e to b * 2**e, with whole a <= b of at most ``bits`` bits.

    Every operation returns an interval that contains all results of the exact operation: whole numbers are exact,
    and where digits are dropped (>> and //, which round down) the lower end is rounded down and the upper end up:
    -(-b >> k). Fractions stay exact as long as no interval meets them.
    """

    __slots__ = ("a", "b", "e")
    bits: ClassVar[int] = 256
    a: int
    b: int
    e: int

    def __init__(self, a: int, b: int, e: int = 0) -> None:
        spend(1 + (Interval.bits >> 10))
        over = max(a.bit_length(), b.bit_length()) - Interval.bits
        if over > 0:
            a, b, e = a >> over, -(-b >> over), e + over
        self.a, self.b, self.e = a, b, e if a or b else -(10**9)  # zero is small on every scale

    @property
    def top(self) -> int:
        """A number with abs(x) <= 2**top for all x in the interval."""
        return max(self.a.bit_length(), self.b.bit_length()) + self.e

    def common(self, other: Interval) -> int:
        """Return an exponent on which both may be written without harm."""
        return max(min(self.e, other.e), max(self.top, other.top) - 3 * Interval.bits)

    def __add__(self, other: Number | int) -> Interval:
        x, y = self, interval(other)
        e = x.common(y)
        return Interval(down(x.a, x.e - e) + down(y.a, y.e - e), up(x.b, x.e - e) + up(y.b, y.e - e), e)

    def __neg__(self) -> Interval:
        return Interval(-self.b, -self.a, self.e)

    def __sub__(self, other: Number | int) -> Interval:
        return self + -interval(other)

    def __rsub__(self, other: Number | int) -> Interval:
        return interval(other) + -self

    def __mul__(self, other: Number | int) -> Interval:
        x, y = self, interval(other)
        products = (x.a * y.a, x.a * y.b, x.b * y.a, x.b * y.b)
        return Interval(min(products), max(products), x.e + y.e)

    def __truediv__(self, other: Number | int) -> Interval:
        x, y = self, interval(other)
        if y.a <= 0 <= y.b:
            raise ImpreciseError("division by an interval that contains 0")
        k = max(0, Interval.bits + 2 + (y.top - y.e) - (x.top - x.e))
        ends = [(p << k, q) for p in (x.a, x.b) for q in (y.a, y.b)]
        return Interval(min(p // q for p, q in ends), max(-(-p // q) for p, q in ends), x.e - y.e - k)

    def __rtruediv__(self, other: Number | int) -> Interval:
        return interval(other) / self

    __radd__, __rmul__ = __add__, __mul__


Number = Fraction | Interval


def down(a: int, k: int) -> int:
    """Round a * 2**k down."""
    return a << k if k >= 0 else a >> -k


def up(b: int, k: int) -> int:
    """Round b * 2**k up."""
    return -down(-b, k)


def interval(x: Number | int) -> Interval:
    """Enclose a fraction p/q: (p << k) // q <= 2**k p/q <= -((-p << k) // q)."""
    if isinstance(x, Interval):
        return x
    p, q = x.numerator, x.denominator
    k = q.bit_length() - 1 if q & (q - 1) == 0 else max(0, Interval.bits + 2 + q.bit_length() - p.bit_length())
    return Interval((p << k) // q, -((-p << k) // q), -k)


def ends(x: Number | int) -> tuple[Fraction, Fraction]:
    """Return both ends as fractions."""
    if not isinstance(x, Interval):
        return Fraction(x), Fraction(x)
    if x.a == x.b == 0:
        return Fraction(0), Fraction(0)
    if abs(x.e) > 400_000:
        raise LimitError("a number of more than 400000 bits")
    return x.a * Fraction(2) ** x.e, x.b * Fraction(2) ** x.e


def less(x: Number | int, y: Number | int) -> bool:
    """Whether x < y; an overlap that leaves it open raises ImpreciseError."""
    if not isinstance(x, Interval) and not isinstance(y, Interval):
        return x < y
    gap = interval(y) - x
    if gap.a > 0 or gap.b <= 0:
        return gap.a > 0
    raise ImpreciseError("two overlapping intervals")


def hull(low: Number, high: Number) -> Interval:
    """Enclose everything from the lower end of one number to the upper end of another."""
    x, y = interval(low), interval(high)
    e = x.common(y)
    return Interval(down(x.a, x.e - e), up(y.b, y.e - e), e)


@contextmanager
def more_bits(extra: int) -> Iterator[None]:
    """Work with more bits inside a block."""
    Interval.bits += extra
    try:
        yield
    finally:
        Interval.bits -= extra


# ---- 4. Elementary functions, each remainder with its proof --------------------------------------------------------


def odd_series(p: int, q: int, sign: int) -> Interval:
    """Enclose the sum over j >= 0 of sign**j z**(2j+1) / (2j+1), z = p/q, |z| <= 2/5: atanh z, or (sign -1) atan z.

    In units of 2**-w: a power of z rounded down is wrong by less than e = 1 + e z**2 < 2 units, its quotient by
    2j+1 by less than 3. The powers shrink by z**2 <= 4/25, so that there are fewer than w/2 + 1 terms. The loop
    ends at a power below 1 + 2 units; the terms left out are below 3 (1 + z**2 + ...) < 4 units. In all less than 3
    (w/2 + 1) + 4 < 4 w units.
    """
    w = Interval.bits + 40
    power, total, j = (p << w) // q, 0, 0
    while abs(power) > 1:
        total += sign**j * (power // (2 * j + 1))
        power, j = power * p * p // (q * q), j + 1
        spend(1 + (w >> 10))
    return Interval(total - 4 * w, total + 4 * w, -w)


@cache
def log2(bits: int) -> Interval:
    """Enclose log 2 = 2 atanh(1/3)."""
    return odd_series(1, 3, 1) * 2


@cache
def pi(bits: int) -> Interval:
    """Enclose pi = 16 atan(1/5) - 4 atan(1/239) (Machin)."""
    return odd_series(1, 5, -1) * 16 - odd_series(1, 239, -1) * 4


def log(x: Number) -> Interval:
    """Enclose log over [a, b], a > 0: log increases, and log b <= log a + (b - a) / a since it is concave.

    For the lower end a 2**e = m 2**(n+e) with 2/3 <= m <= 4/3: log m = 2 atanh((m-1)/(m+1)), abs((m-1)/(m+1)) <= 1/5.
    """
    x = interval(x)
    if x.a <= 0:
        raise ImpreciseError("the logarithm of an interval that reaches 0")
    n = x.a.bit_length()
    n -= 3 * x.a < 1 << (n + 1)
    low = odd_series(x.a - (1 << n), x.a + (1 << n), 1) * 2 + log2(Interval.bits) * (n + x.e)
    return low if x.a == x.b else hull(low, low + Interval(x.b - x.a, x.b - x.a) / Interval(x.a, x.a))


def exp(x: Number) -> Interval:
    """Enclose exp over an interval: exp(x) = exp(u)**(2**s), u = x / 2**s, and exp(-x) = 1 / exp(x).

    exp(u) = sum of u**j / j! with u >= 0, in which every term grows with u. For u <= 1/2 the terms after one of
    size t are at most t (u + u**2 + ...) <= t, so that the sum lies between the partial sum and the same plus t.
    """
    x = interval(x)
    if x.a < 0:
        low = 1 / exp(-Interval(x.a, min(x.b, 0), x.e))
        return low if x.b <= 0 else hull(low, exp(Interval(0, x.b, x.e)))
    if x.top > 36:
        raise LimitError("an exponential of a number beyond 2**36")
    s = isqrt(Interval.bits) + max(0, x.top)
    with more_bits(s + 24):
        u = x / (1 << s)
        term = total = interval(1)
        j = 0
        while term.b and term.top > -Interval.bits:
            j += 1
            term = term * u / j
            total = total + term
        total = hull(total, total + term)
        for _ in range(s):
            total = total * total
    return total


def sqrt(x: Number) -> Number:
    """Enclose the square root: isqrt rounds down, one more is an upper bound. Squares of fractions give fractions."""
    if isinstance(x, Fraction):
        require(x >= 0, "the square root of a negative number")
        root = Fraction(isqrt(x.numerator), isqrt(x.denominator))
        if root * root == x:
            return root
    x = interval(x)
    if x.a < 0:
        raise ImpreciseError("the square root of an interval that reaches below 0")
    k = 2 * Interval.bits + (x.e & 1)
    return Interval(isqrt(x.a << k), isqrt(x.b << k) + 1, (x.e - k) >> 1)


def power(x: Number, y: Number) -> Number:
    """Compute x**y: by multiplication for whole y, through square roots for halves, else exp(y log x)."""
    if isinstance(y, Fraction) and y.denominator == 2:
        return power(sqrt(x), 2 * y)
    if isinstance(y, Interval) or y.denominator != 1:
        return exp(y * log(x))
    n = abs(int(y))
    if isinstance(x, Fraction):
        if n * max(x.numerator.bit_length(), x.denominator.bit_length()) < 60_000:
            return x ** int(y)
        require(x, "division by 0")
        x = interval(x)
    result: Number = Fraction(1)
    for bit in bin(n)[2:]:
        result = result * result * x if bit == "1" else result * result
    return result if y >= 0 else 1 / result


def whole(x: Number, limit: int = 20_000) -> int:
    """Return a whole number >= 0 as such."""
    require(isinstance(x, Fraction) and x.denominator == 1 and x >= 0, "a count that is no whole number")
    if ends(x)[0] > limit:
        raise LimitError(f"a count beyond {limit}")
    return int(ends(x)[0])


def binomial(x: Number, k: Number) -> Number:
    """Multiply x (x-1) ... (x-k+1) / k!."""
    result: Number = Fraction(1)
    for j in range(whole(k)):
        spend(1)
        result = result * (x - j) / (j + 1)
    return result


def gamma(a: Number) -> Number:
    """Gamma(a) = (a-1)! for small whole a, else x**a exp(-x) / gamma_kernel(a, x) at x = a."""
    if isinstance(a, Fraction) and a.denominator == 1 and a <= 2000:
        spend(whole(a - 1))
        return Fraction(factorial(whole(a - 1)))
    return exp(a * log(a) - a) / gamma_kernel(a, a)


def gamma_series(a: Number, x: Number) -> Interval:
    """Enclose S(a, x) = sum over k >= 0 of x**k / (a (a+1) ... (a+k)), a, x > 0: lower(a, x) = x**a exp(-x) S(a, x).

    Fixed-point sum of positive terms t(k+1) = t(k) x / (a+k+1), rounded down with (low x, high a) and up with (high
    x, low a). Once rho = x/(a+k+1) < 1, the terms after t are at most t rho / (1 - rho), since the ratios fall. In
    units 2**-q of x and 2**-p of a, p <= q: n // (m << (q-p)) = (n >> (q-p)) // m, and m is short where a is.
    """
    xi, ai = interval(x), interval(a)
    if xi.a <= 0 or ai.a <= 0:
        raise ImpreciseError("an incomplete gamma function at 0")
    p = max(0, -ai.e)
    q = max(p, -xi.e)
    if q > 200_000 or max(xi.top, ai.top) > 60:
        raise LimitError("an incomplete gamma function of a huge number")
    xl, xh, al, ah = xi.a << (xi.e + q), xi.b << (xi.e + q), ai.a << (ai.e + p), ai.b << (ai.e + p)
    low = high = t = v = 1 << (Interval.bits + 40)
    k = 0
    while True:
        k += 1
        under, over = al + (k << p), ah + (k << p)
        if k % 8 == 1:
            spend(8 + (Interval.bits + q >> 5))
            left = (under << (q - p)) - xh
            if left > 0 and (rest := v * xh // left + 1) << Interval.bits <= high:
                return Interval(low, high + rest, -Interval.bits - 40) / ai
        t, v = (t * xl >> (q - p)) // over, -((-v * xh >> (q - p)) // under)
        low, high = low + t, high + v


gamma_scales: dict[tuple[Fraction, Fraction, int], tuple[Fraction, Interval]] = {}


def gamma_kernel(a: Number, x: Number) -> Interval:
    """Enclose x**a exp(-x) / Gamma(a), without a gamma function.

    Gamma(a) = lower(a, X) + upper(a, X) for any X, lower(a, X) = X**a exp(-X) S(a, X), and with c = max(a-1, 0), X
    > c, 0 < upper(a, X) = X**(a-1) exp(-X) times the integral over s > 0 of (1 + s/X)**(a-1) exp(-s) <= X**a
    exp(-X) / (X - c), because (1 + s/X)**(a-1) <= exp(c s/X). X = a + sqrt(2 a L) + L with L near bits * log 2
    makes this remainder negligible.
    """
    key = (*ends(a), Interval.bits)
    if key not in gamma_scales:
        if interval(a).top > 50:
            raise LimitError("a gamma law of a huge shape")
        A, L = int(key[1]) + 1, Interval.bits * 7 // 10 + 20
        X = Fraction(A + isqrt(2 * A * L) + 1 + L)
        gamma_scales[key] = X, gamma_series(a, X) + hull(Fraction(0), 1 / (X - max(A - 1, 0)))
    X, scale = gamma_scales[key]
    with more_bits(64):
        shape = exp(a * log(x / X) + X - x)
    return shape / scale


# ---- 5. Closed expressions -----------------------------------------------------------------------------------------

LITERAL = re.compile(r"(\d+\.?\d*|\.\d+)([eE][-+]?\d{1,4})?")
FUNCTIONS: dict[str, tuple[int, Callable[..., Number]]] = {
    "exp": (1, exp), "log": (1, log), "ln": (1, log), "sqrt": (1, sqrt),
    "factorial": (1, lambda n: gamma(Fraction(whole(n) + 1))), "binomial": (2, binomial), "gamma": (1, gamma),
    "loggamma": (1, lambda a: log(gamma(a))),
    "beta": (2, lambda a, b: gamma(a) * gamma(b) / gamma(a + b)),
    "abs": (1, lambda x: -x if less(x, 0) else x), "Abs": (1, lambda x: -x if less(x, 0) else x),
    "cosh": (1, lambda x: (exp(x) + exp(-x)) / 2), "sinh": (1, lambda x: (exp(x) - exp(-x)) / 2),
    "tanh": (1, lambda x: 1 - 2 / (exp(2 * x) + 1)),
}  # fmt: skip
OPERATIONS: dict[type[ast.operator], Callable[[Any, Any], Number]] = {
    ast.Add: operator.add, ast.Sub: operator.sub, ast.Mult: operator.mul, ast.Div: operator.truediv, ast.Pow: power,
}  # fmt: skip
Names = dict[str, Number]


@cache
def parsed(text: str) -> ast.expr:
    """Parse an expression: arithmetic in Python's own grammar."""
    form(len(text) < 4000 and text.isascii() and text.isprintable(), "an expression of other signs, or too long")
    try:
        return ast.parse(text, mode="eval").body
    except (SyntaxError, ValueError, RecursionError, MemoryError):
        raise MalformedError(f"cannot read {text!r:.80}") from None


def evaluate(text: str, names: Names | None = None) -> Number:
    """Evaluate an expression; numbers stay fractions as long as they can."""
    text = text.strip().replace("^", "**")
    return value_of(parsed(text), text, names or {})


def value_of(node: ast.expr, text: str, names: Names) -> Number:
    """Evaluate one node: a number, a name, a sign, an operation or a function."""
    match node:
        case ast.Constant():
            literal = text[node.col_offset : node.end_col_offset]
            form(LITERAL.fullmatch(literal), f"not a number: {literal!r:.40}")
            return Fraction(literal)
        case ast.Name(id=name):
            form(name in names or name in ("pi", "E"), f"unknown name {name}")
            return names[name] if name in names else pi(Interval.bits) if name == "pi" else exp(Fraction(1))
        case ast.UnaryOp(op=ast.USub() | ast.UAdd() as sign, operand=inner):
            value = value_of(inner, text, names)
            return -value if isinstance(sign, ast.USub) else value
        case ast.BinOp(left=left, op=operation, right=right):
            form(type(operation) in OPERATIONS, f"not arithmetic: {type(operation).__name__}")
            return OPERATIONS[type(operation)](value_of(left, text, names), value_of(right, text, names))
        case ast.Call(func=ast.Name(id=name), args=arguments, keywords=[]):
            form(name in FUNCTIONS and len(arguments) == FUNCTIONS[name][0], f"the function {name}")
            return FUNCTIONS[name][1](*(value_of(argument, text, names) for argument in arguments))
    raise MalformedError(f"not arithmetic: {text!r:.80}")


# ---- 6. Laws of the sum of n statistics ----------------------------------------------------------------------------


class Counts:
    """Poisson, binomial and negative binomial: masses on 0, 1, 2, ... with P(k+1) / P(k) = theta (s + g k) / (k + 1).

        Poisson            g =  0   s = 1        theta = mean        P(0) = exp(-theta)
        binomial           g = -1   s = trials   theta = p/(1-p)     P(0) = (1 + theta)**-s
        negative binomial  g =  1   s = size     theta = 1 - p       P(0) = (1 - theta)**s

    P(k) = P(0) theta**k s (s+g) ... (s+(k-1)g) / k!, and the mean is s theta / (1 - g theta).
    """

    def __init__(self, theta: Number, s: Number, g: int) -> None:
        self.theta, self.s, self.g, self.first = theta, s, g, 0
        self.last = whole(s, 10**15) if g < 0 else None
        self.mean: Number = s * theta / (1 - g * theta)

    def mass(self, k: int) -> Number:
        """P(k): the product as it stands for small k, by gamma functions for large k."""
        if k < 0 or (self.last is not None and k > self.last):
            return Fraction(0)
        empty = exp(-self.theta) if self.g == 0 else power(1 - self.g * self.theta, self.s / self.g)
        product: Number = Fraction(1)
        if k > 2000:
            s, n, g = self.s, Fraction(k), self.g
            product = gamma(s + n) / gamma(s) if g > 0 else gamma(s + 1) / gamma(s - n + 1) if g < 0 else product
            return empty * product / gamma(n + 1) * power(self.theta, n)
        for j in range(k):
            spend(1)
            product = product * ((self.s + self.g * j) / (j + 1))
        return empty * product * power(self.theta, Fraction(k))

    unit = mass

    def weights(self, lo: int, hi: int, unit: Any) -> Iterator[tuple[int, Any, Any]]:
        """Yield k and bounds of P(k) / P(lo) in units, for lo <= k <= hi."""
        low = high = unit
        (tl, th, td), (sl, sh, sd) = over_one(self.theta), over_one(self.s)
        for k in range(lo, hi + 1):
            yield k, low, high
            gk = self.g * k * sd
            low, high = stepped(low, high, tl * (sl + gk), th * (sh + gk), td * sd * (k + 1))


class Table:
    """Masses w_v theta**v / C**n, w the n-th power of the table of one Y, C = the sum of w_y theta**y, or as stated."""

    def __init__(
        self, theta: Number, weights: list[Fraction], first: int, n: int, total: Number | None, mean: Number | None,
        top: int,
    ) -> None:  # fmt: skip
        length = n * (len(weights) - 1) + 1 if total is None else min(len(weights), top - n * first + 1)
        self.theta, self.first = theta, n * first
        coefficients = powers_of(tuple(weights), n, length)
        scale = lcm(*(c.denominator for c in coefficients))
        self.numbers = [int(c * scale) for c in coefficients]
        powers = [w * power(theta, Fraction(first + y)) for y, w in enumerate(weights)] if total is None else []
        if total is None:
            total = sum(powers, Fraction(0))
            mean = sum(((first + y) * v for y, v in enumerate(powers)), Fraction(0)) / total
            self.last: int | None = self.first + length - 1
        else:
            self.last = None
        self.mean: Number = Fraction(0) if mean is None else mean * n  # 0 where it plays no part
        self.total = power(total, Fraction(n)) * scale

    def mass(self, k: int) -> Number:
        """P(k)."""
        if not 0 <= k - self.first < len(self.numbers):
            return Fraction(0)
        return self.numbers[k - self.first] * power(self.theta, Fraction(k)) / self.total

    def weights(self, lo: int, hi: int, unit: Any) -> Iterator[tuple[int, Any, Any]]:
        """Yield k and bounds of P(k) / (theta**lo / C**n) in units."""
        low = high = unit
        for k in range(lo, hi + 1):
            number = self.numbers[k - self.first] if k - self.first < len(self.numbers) else 0
            spend(number.bit_length() >> 6)
            yield k, number * low, number * high
            low, high = stepped(low, high, *over_one(self.theta))

    def unit(self, lo: int) -> Number:
        """Return what `weights` are multiples of."""
        return power(self.theta, Fraction(lo)) / self.total


def over_one(x: Number) -> tuple[int, int, int]:
    """Write both ends of a number over one denominator."""
    if isinstance(x, Interval):
        return down(x.a, max(x.e, 0)), down(x.b, max(x.e, 0)), 1 << max(0, -x.e)
    return x.numerator, x.numerator, x.denominator


def stepped(low: Any, high: Any, p: int, h: int, d: int) -> tuple[Any, Any]:
    """Multiply by a number between p/d and h/d: fractions exactly, whole numbers rounded outward."""
    spend(2 + (high.numerator.bit_length() >> 9))
    if isinstance(low, Fraction):
        spend(low.numerator.bit_length() >> 4)
        return low * Fraction(p, d), high * Fraction(h, d)
    return low * p // d, -(-high * h // d)


@cache
def powers_of(weights: tuple[Fraction, ...], n: int, length: int) -> list[Fraction]:
    """Coefficients 0..length-1 of the power series q = p**n, p = sum of w_j z**j: from p q' = n p' q, for k >= 1

    k w_0 q_k = sum over 1 <= j <= k of (j (n + 1) - k) w_j q_(k-j).
    """
    result = [weights[0] ** n]
    for k in range(1, length):
        spend(len(weights[: k + 1]) * (2 + (result[-1].numerator.bit_length() >> 7)))
        terms = ((j * (n + 1) - k) * w * result[k - j] for j, w in enumerate(weights[: k + 1]) if w and j)
        result.append(sum(terms, Fraction(0)) / (k * weights[0]))
    return result


def sums(law: Counts | Table, lo: int | None, hi: int | None, exact: bool) -> list[Number]:
    """Sum up P(lo), P(hi), the mass between them (lo or hi None: to the end), and there the mass times k - lo."""
    start, stop = (lo, hi) if lo is not None and hi is not None else (law.first, (lo or 0) if hi is None else hi)
    if stop - start > LIMIT:
        raise LimitError(f"a window of {stop - start} lattice points")
    unit, bits = law.unit(start), Interval.bits + 40
    if exact and isinstance(unit, Interval):
        raise UndecidedError("intervals do not decide, and this law is not rational")
    low: list[Any] = [0] * 4
    high: list[Any] = [0] * 4
    for k, w, v in law.weights(start, stop, Fraction(1) if exact else 1 << bits):
        place = 0 if k == lo else 1 if k == hi else 2
        low[place] += w
        high[place] += v
        if place == 2:
            low[3] += w * (k - start)
            high[3] += v * (k - start)
    found = [unit * (Fraction(a) if exact else Interval(a, b, -bits)) for a, b in zip(low, high, strict=True)]
    if hi is None:
        found[2] = 1 - found[0] - found[2]
    return found


class Gamma:
    """Density rate**shape y**(shape-1) exp(-rate y) / Gamma(shape) on y > 0."""

    positive = True

    def __init__(self, shape: Number, rate: Number) -> None:
        self.shape, self.rate, self.mean = shape, rate, shape / rate

    def density(self, y: Number) -> Number:
        """Return the density at y."""
        return gamma_kernel(self.shape, self.rate * y) / y

    def below(self, y: Number) -> tuple[Number, Number]:
        """P(Y <= y) = P(a, x); E[Y; Y <= y] = mean P(a+1, x), P(a+1, x) = P(a, x) - x**a exp(-x) / Gamma(a+1)."""
        x = self.rate * y
        kernel = gamma_kernel(self.shape, x)
        cdf = kernel * gamma_series(self.shape, x)
        return cdf, self.mean * (cdf - kernel / self.shape)


def normal_cdf(z: Number) -> Number:
    """Phi(z) = 1/2 + sign(z)/2 * P(1/2, z**2 / 2), P the regularised lower incomplete gamma function; Phi increases."""
    half, (low, high) = Fraction(1, 2), ends(z)
    if low == high == 0:
        return half
    if low <= 0 <= high:
        return hull(normal_cdf(low), normal_cdf(high))
    x = interval(z * z / 2)
    part = gamma_kernel(half, x) * gamma_series(half, x) / 2
    return half + part if low > 0 else half - part


class Normal:
    """Density exp(-(y - mean)**2 / (2 variance)) / sqrt(2 pi variance)."""

    positive = False

    def __init__(self, mean: Number, variance: Number) -> None:
        self.mean, self.variance = mean, variance

    def density(self, y: Number) -> Number:
        """Return the density at y."""
        d = y - self.mean
        return exp(-d * d / (2 * self.variance)) / sqrt(2 * pi(Interval.bits) * self.variance)

    def below(self, y: Number) -> tuple[Number, Number]:
        """P(Y <= y) = Phi((y - mean) / sd), E[Y; Y <= y] = mean P(Y <= y) - variance * density (integrate by parts)."""
        cdf = normal_cdf((y - self.mean) / sqrt(self.variance))
        return cdf, self.mean * cdf - self.variance * self.density(y)


class InverseGaussian:
    """Density sqrt(shape / (2 pi y**3)) exp(-shape (y - mean)**2 / (2 mean**2 y)) on y > 0."""

    positive = True

    def __init__(self, mean: Number, shape: Number) -> None:
        self.mean, self.shape = mean, shape

    def density(self, y: Number) -> Number:
        """Return the density at y."""
        d = (y - self.mean) / self.mean
        return sqrt(self.shape / (2 * pi(Interval.bits) * y * y * y)) * exp(-self.shape * d * d / (2 * y))

    def below(self, y: Number) -> tuple[Number, Number]:
        """P(Y <= y) = Phi(u) + exp(2 shape/mean) Phi(-v) and E[Y; Y <= y] = mean (Phi(u) - exp(2 shape/mean) Phi(-v)).

        u, v = sqrt(shape/y) (y/mean -+ 1). For the second: both sides vanish at 0 and have the derivative y
        density(y). One factor is tiny where the other is huge, hence the extra bits.
        """
        size = 2 * self.shape / self.mean
        extra = ceil(ends(size)[1] * 3 / 2) + 32
        if extra > 40_000:
            raise LimitError("an inverse Gaussian law with a huge shape over mean")
        with more_bits(extra):
            root = sqrt(self.shape / y)
            first, second = normal_cdf(root * (y / self.mean - 1)), exp(size) * normal_cdf(-root * (y / self.mean + 1))
        return first + second, self.mean * (first - second)


Law = Counts | Table | Gamma | Normal | InverseGaussian
MAKERS: dict[str, tuple[Callable[[Number, Number], Law], dict[str, int]]] = {  # parameters, and the power of n by which
    "Poisson": (lambda mean, _: Counts(mean, Fraction(1), 0), {"mean": 1}),  # each grows for the sum of n copies
    "binomial": (lambda trials, p: Counts(p / (1 - p), trials, -1), {"trials": 1, "probability": 0}),
    "negative binomial": (lambda size, p: Counts(1 - p, size, 1), {"size": 1, "probability": 0}),
    "gamma": (Gamma, {"shape": 1, "rate": 0}),
    "normal": (Normal, {"mean": 1, "variance": 1}),
    "inverse Gaussian": (InverseGaussian, {"mean": 1, "shape": 2}),
}
CONTINUOUS = ("gamma", "normal", "inverse Gaussian")

# ---- 7. The question -----------------------------------------------------------------------------------------------

OTHER = {  # the alternative is the complement of the null hypothesis
    "outside null": "{0} < {t} < {1}", "interval null": "{t} < {0} or {t} > {1}", "point null": "{t} != {0}",
    "above": "{t} > {0}", "below": "{t} < {0}",
}  # fmt: skip


def hypothesis(text: str, t: str) -> tuple[str, list[str], str]:
    """Read a null hypothesis: form, limits as texts, and (one-sided) whether the alternative lies above or below."""
    e = r"([^<>=]+?)"
    for shape, name, side in (
        (rf"{t} <= {e} or {t} >= {e}", "outside null", "outside null"),
        (rf"{e} <= {t} <= {e}", "interval null", "interval null"),
        (rf"{t} = {e}", "point null", "point null"),
        (rf"{t} <= {e}", "one-sided", "above"),
        (rf"{t} >= {e}", "one-sided", "below"),
    ):
        match = re.fullmatch(shape, text)
        if match:
            return name, list(match.groups()), side
    raise MalformedError(f"a null hypothesis that is not of a known form: {text!r:.80}")


def bounds(text: str, name: str, names: Names) -> tuple[Number | None, Number | None]:
    """Read the ends of a support or space: "reals", "t > a", "a < t < b", "reals in (a, b)", "integers a..b"."""
    text, e = re.sub(r"^(reals|integers)\b\s*", name + " ", text.strip()).strip(), r"([^<>=]+?)"
    for shape, low, high in (
        (name, 0, 0),
        (rf"{name} +in +[(\[](.+),(.+)[)\]]", 1, 2),
        (rf"{name} +(.+?)\.\.(.+)", 1, 2),
        (rf"{e} *<=? *{name} *<=? *{e}", 1, 2),
        (rf"{name} *>=? *{e}", 1, 0),
        (rf"{name} *<=? *{e}", 0, 1),
    ):
        match = re.fullmatch(shape, text)
        if match:
            found = [evaluate(match.group(i), names) if i else None for i in (low, high)]
            return found[0], found[1]
    raise MalformedError(f"cannot read {text!r:.80}")


class Question:
    """The problem as the certificate states it; numbers are evaluated anew at each working precision."""

    def __init__(self, predicate: dict[str, Any]) -> None:
        problem = predicate["problem"]
        self.density, self.n, self.digits = problem["density"], problem["n"], problem["digits"]
        self.t, self.x = self.density["parameter"], self.density["variable"]
        form(re.fullmatch(r"[A-Za-z_]\w*", self.t) and re.fullmatch(r"[A-Za-z_]\w*", self.x), "a name that is no word")
        kinds = [kind for kind in ("formula", "kernel", "weights") if kind in self.density]
        form(len(kinds) == 1, "one of formula, kernel and weights is needed")
        self.kind = kinds[0]
        form(self.n >= 1 and 2 <= self.digits <= 1000, "n is from 1, and digits from 2 to 1000")
        self.form, self.limit_texts, self.side = hypothesis(problem["null"], self.t)
        self.alphas, self.law, self.derivation, self.test = (
            problem["alpha"], predicate["law"], predicate["derivation"], predicate["test"],
        )  # fmt: skip
        form(len(self.alphas) == len(self.limit_texts), "one level for each limit is needed")
        form(self.law["name"] == "lattice" or not {"weights", "first"} & set(self.law), "weights of no lattice law")
        self.inner = self.form in ("one-sided", "outside null")  # the test rejects inside its window
        parts = [self.density[key] for key in (self.kind, "support", "space")]
        texts = " ".join(map(str, [*parts, *self.limit_texts]))
        for name in self.density["constants"]:
            form(re.search(rf"\b{re.escape(name)}\b", texts), f"the constant {name} is not used")

    def names(self, **values: Number) -> Names:
        """Return the constants, and the values of variable and parameter."""
        return {key: evaluate(text) for key, text in self.density["constants"].items()} | values

    def value(self, x: Number, t: Number) -> Number:
        """Return the density of one observation, or its kernel."""
        if self.kind == "weights":
            first = bounds(self.density["support"], self.x, self.names())[0] or Fraction(0)
            return rational(self.density["weights"][int(ends(x - first)[0])]) * power(t, x)
        return evaluate(self.density[self.kind], self.names(**{self.x: x, self.t: t}))

    def statistic(self, x: Number) -> Number:
        """T(x)."""
        return evaluate(self.derivation["statistic"], self.names(**{self.x: x}))

    def y(self, x: Number) -> Number:
        """Y = (T(x) - shift) / scale."""
        scale, shift = self.affine()
        return (self.statistic(x) - shift) / scale

    def limits(self) -> list[Number]:
        """Return the limits of the null hypothesis."""
        return [evaluate(text, self.names()) for text in self.limit_texts]

    def levels(self) -> list[Number]:
        """Return one level for each limit."""
        return [evaluate(text) for text in self.alphas]

    def affine(self) -> tuple[Number, Number]:
        """Return scale and shift: V = scale * Y + n * shift, with Y the sum of n copies."""
        return evaluate(self.law["scale"], self.names()), evaluate(self.law["shift"], self.names())

    def law_at(self, t: Number, n: int, top: int = 10**6) -> Law:
        """Return the law of the sum of n copies of Y at a parameter value."""
        given = {key: evaluate(text, self.names(**{self.t: t})) for key, text in self.law["parameters"].items()}
        if self.law["name"] == "lattice":
            mean = {"mean"} if "total" in given and self.form == "point null" else set()
            form(set(given) == {"base"} | ({"total"} & set(given)) | mean, "the parameters of a lattice law")
            weights = [rational(w) for w in self.law["weights"]]
            form(len(weights) > 1 and min(weights) >= 0 and weights[0] > 0, "weights >= 0 that start above 0")
            require(less(0, given["base"]), "a base that is not positive")
            return Table(given["base"], weights, self.law["first"], n, given.get("total"), given.get("mean"), top)
        make, grows = MAKERS[self.law["name"]]
        form(set(given) == set(grows), f"the parameters are {', '.join(grows)}")
        values = [given[key] * n**power_of_n for key, power_of_n in grows.items()] + [Fraction(1, 2)]
        x, y = values[:2]
        require((make is Normal or less(0, x)) and less(0, y), "a law parameter that is not positive")
        require("probability" not in grows or less(y, 1), "a probability that is not below 1")
        return make(x, y)


def check_statement(q: Question, problem: dict[str, Any]) -> None:
    """The alternative is the complement; the limits ascend and lie in the space; the levels lie between 0 and 1."""
    other = OTHER[q.side].format(*q.limit_texts, t=q.t)
    require(problem["alternative"] == other, "an alternative that is not the complement of the null hypothesis")
    limits, (low, high) = q.limits(), bounds(q.density["space"], q.t, q.names())
    require(len(limits) == 1 or less(limits[0], limits[1]), "limits that do not ascend")
    for limit in limits:
        inside = (low is None or less(low, limit)) and (high is None or less(limit, high))
        require(inside, "a limit outside the parameter space")
    for level in q.levels():
        require(less(0, level) and less(level, 1), "a level outside (0, 1)")


# ---- 8. A look at the density: does the stated law belong to the stated formula? -----------------------------------


def places(low: Number | None, high: Number | None) -> list[Fraction]:
    """Four rational places strictly between two ends (None: no end), and two more near the ends or far out."""
    a, b = (None if x is None else Fraction(sum(ends(x))) / 2 for x in (low, high))
    tiny = Fraction(1, 2**16)
    if a is not None and b is not None:
        return [a + (b - a) * k for k in (*(Fraction(k, 23) for k in (5, 11, 16, 20)), tiny, 1 - tiny)]
    if a is None and b is None:
        return [*(Fraction(k, 23) for k in (-7, 25, 58, 90)), -1 / tiny, 1 / tiny]
    steps = [*(Fraction(k, 23) for k in (17, 43, 68, 90)), tiny, 1 / tiny]
    return [a + s for s in steps] if a is not None else [(b or 0) - s for s in steps]


def near_one(ratio: Number, what: str, slack: Fraction = Fraction(0)) -> None:
    """Require a ratio that is 1 as far as it is known, and known to 2**-60."""
    low, high = ends(ratio)
    require(low - slack <= 1 <= high + slack, what)
    if high - low > Fraction(1, 2**60):
        raise ImpreciseError(what)


def height(law: Law, y: Number) -> Number:
    """Return the mass or density of a law at y, which must lie where the law lives."""
    if isinstance(law, (Counts, Table)):
        require(isinstance(y, Fraction) and y.denominator == 1, "a lattice statistic off its lattice")
        return law.mass(int(ends(y)[0]))
    if y == 0 and law.positive:
        raise UndecidedError("a place looked at where the statistic touches the end of its law")
    require(not law.positive or less(0, y), "a statistic outside the support of its law")
    return law.density(y)


def check_density(q: Question) -> None:
    """Compare density f, law g of one Y = (T - shift) / scale, and Q, T, A at several places x and values t, u:

        f(x;t) / f(x;u) = g(y;t) / g(y;u) = exp((Q(t) - Q(u)) T(x) - (A(t) - A(u)))        (a kernel: up to a factor)

    and Q runs in the stated direction. With `check_masses` and `check_slopes` this is a look at points, which finds
    slips in the law and its parameters. That f is a density for all t, and of this family, is the derivation's, and
    on trust.
    """
    ts = q.limits()
    ts += [t for t in places(*bounds(q.density["space"], q.t, q.names()))[:3:2] if t not in ts]
    laws = [q.law_at(t, 1) for t in ts]
    one = laws[0]
    xs = check_masses(q, ts[0], one) if isinstance(one, (Counts, Table)) else check_slopes(q, ts[0], one)

    def derived(name: str, t: Number) -> Number:
        return evaluate(q.derivation[name], q.names(**{q.t: t}))

    for t, law in zip(ts[1:], laws[1:], strict=True):
        seen = [q.value(x, t) / q.value(x, ts[0]) for x in xs]
        stated = [height(law, q.y(x)) / height(laws[0], q.y(x)) for x in xs]
        slope = derived("natural_parameter", t) - derived("natural_parameter", ts[0])
        free: Number = Fraction(0)  # a kernel carries no normaliser
        if q.kind == "formula":
            free = derived("log_normaliser", t) - derived("log_normaliser", ts[0])
        powers: list[Number] = [exp(slope * q.statistic(x) - free) for x in xs]
        if q.kind != "formula":
            seen, stated, powers = ([v / row[0] for v in row] for row in (seen, stated, powers))
        for a, b, c in zip(seen, stated, powers, strict=True):
            near_one(a / b, "the density does not belong to the stated law")
            near_one(a / c, "the density does not have the stated natural parameter, statistic and log-normaliser")
        rising = less(0, slope) == less(ts[0], t)
        require(rising == q.derivation["rising"], "the natural parameter does not run in the stated direction")


def check_masses(q: Question, t: Number, law: Counts | Table) -> list[Fraction]:
    """Lattice: f(x;t) is the mass at Y(x), everywhere in a table, where T is one-to-one. Return places with mass."""
    low, high = (None if x is None else ends(x)[0] for x in bounds(q.density["support"], q.x, q.names()))
    many = len(law.numbers) if isinstance(law, Table) else 6
    if low is not None and high is not None:
        form("weights" not in q.density or len(q.density["weights"]) == high - low + 1, "one weight for each place")
        many = min(many, int(high - low) + 1)
    xs = [low + k if low is not None else (high or Fraction(0)) - k for k in range(many)]
    seen = {q.y(x): q.value(x, t) for x in xs}
    full = [x for x in xs if q.value(x, t) != 0][:4]
    if len(seen) < len(xs):
        return full
    if isinstance(law, Table):
        filled = {law.first + j for j, number in enumerate(law.numbers) if number}
        require(filled <= set(seen), "a weight at a place without mass")
    else:
        limits = {q.y(x) for x in (low, high) if x is not None}
        require(limits == {law.first, law.last} - {None}, "the support does not end where the law of Y does")
    factor = Fraction(1) if q.kind == "formula" else q.value(full[0], t) / height(law, q.y(full[0]))
    for y, mass in seen.items():
        what = "the masses of the density are not those of the stated law"
        if mass == 0 or height(law, y) == 0:
            require(mass == height(law, y), what)
        else:
            near_one(mass / height(law, y) / factor, what)
    return full


def check_slopes(q: Question, t: Number, law: Gamma | Normal | InverseGaussian) -> list[Fraction]:
    """Continuous: f(x;t) = g(y;t) abs(dy/dx) to 30 bits, where T runs in one direction at all places (else: on trust).

    The slope is a central difference of step 2**-40. The support must end where the law of Y does, if T is finite
    there.
    """
    low, high = bounds(q.density["support"], q.x, q.names())
    xs, step = places(low, high), Fraction(1, 2**40)
    for end in (low, high):
        try:
            y = None if end is None else q.y(end)
        except (ZeroDivisionError, ImpreciseError, RejectedError):
            y = None  # T is not finite there
        if y is not None:
            require(law.positive, "the support does not end where the law of the statistic does")
            near_one(1 + y, "the support does not begin or end where the law of the statistic does")
    if q.kind == "formula" and len({less(q.y(x - step), q.y(x + step)) for x in xs}) == 1:
        for x in xs[:4]:
            slope = (q.y(x + step) - q.y(x - step)) / (2 * step)
            ratio = q.value(x, t) / (height(law, q.y(x)) * (slope if less(0, slope) else -slope))
            near_one(ratio, "the density does not have the distribution of the stated law", Fraction(1, 2**30))
    return xs[:4]


# ---- 9. The test: cutoffs, fractions, expectations -----------------------------------------------------------------


def grid(x: Fraction, digits: int, upward: bool = False) -> Fraction:
    """Round a fraction to so many significant decimal digits, down or up."""
    if x == 0:
        return Fraction(0)
    bits = abs(x.numerator).bit_length() - x.denominator.bit_length()  # 2**(bits-1) < abs(x) < 2**(bits+1)
    unit = Fraction(10) ** ((bits - 1) * 30103 // 100_000 - digits)
    while abs(x) >= unit * 10**digits:
        unit *= 10
    return unit * (ceil(x / unit) if upward else floor(x / unit))


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
        raise RejectedError(f"{what} does not have the stated enclosure, but one near {float(lower)!r}")


class Test:
    """A test with numbers in the place of its own: what `LatticeTest` and `SmoothTest` have in common.

    psi is the window function: psi = phi where the test rejects inside (or on one side), else 1 - phi. Both kinds
    say how to get (E psi, E[Y psi]) for given numbers, in the order of the claim.
    """

    kind = "c"  # the numbers on which expectations depend: cutoffs c, or on a lattice fractions gamma

    def __init__(self, q: Question) -> None:
        self.q, (self.scale, shift) = q, q.affine()
        self.shift, self.flip = shift * q.n, less(self.scale, 0)
        self.places = [""] if q.form == "one-sided" else ["1", "2"]
        self.above = (q.test["rejects"] == "above") != self.flip
        self.claims = [claimed(q.test[self.kind + i]) for i in self.places]
        self.laws: list[Any] = []

    def psi(self, i: int, values: Sequence[Fraction]) -> tuple[Number, Number]:
        """Return E psi and E[Y psi] under the i-th law."""
        raise NotImplementedError

    def signs(self, of: str) -> list[int]:
        """In which direction E phi, or E[V phi], runs with each number."""
        raise NotImplementedError

    def expect(self, i: int, values: Sequence[Fraction], of: str = "phi") -> Number:
        """E phi, or E[V phi] = scale E[Y phi] + shift E phi."""
        inside, first = self.psi(i, values)
        if not self.q.inner:
            inside, first = 1 - inside, self.laws[i].mean - first
        return inside if of == "phi" else self.scale * first + self.shift * inside

    def extremes(self, i: int, of: str) -> list[Number]:
        """Return the smallest and largest expectation within the claim: it is monotone in each number."""
        pairs = [c if sign > 0 else c[::-1] for c, sign in zip(self.claims, self.signs(of), strict=True)]
        return [self.expect(i, [pair[end] for pair in pairs], of) for end in (0, 1)]

    def add(self, t: Number) -> None:
        """Add the law at a parameter value."""
        self.laws.append(self.q.law_at(t, self.q.n))

    def betas(self) -> list[Number]:
        """What E psi must be at each limit."""
        return [level if self.q.inner else 1 - level for level in self.q.levels()]


class LatticeTest(Test):
    """psi = 1 strictly inside the window, d at its ends, 0 outside; gamma = d, or 1 - d when rejecting outside."""

    kind = "gamma"

    def __init__(self, q: Question, exact: bool) -> None:
        super().__init__(q)
        names = {kind + i for kind in ("c", "gamma", "y") for i in self.places}
        form(set(q.test) == {"form", "rejects"} | names, "a lattice test has cutoffs, fractions and lattice points")
        self.exact, self.rows, points = exact, list[list[Number]](), [q.test["y" + i] for i in self.places]
        require(points == sorted(points, reverse=self.flip), "cutoffs that are not in order")
        both = (min(points), max(points))
        self.window = both if len(points) == 2 else (points[0], None) if self.above else (None, points[0])
        for t in q.limits():
            self.add(t)

    def add(self, t: Number) -> None:
        """Add the law at a parameter value, and its sums over the window."""
        lo, hi = self.window
        law: Any = self.q.law_at(t, self.q.n, (lo or 0) if hi is None else hi)
        for y in (y for y in self.window if y is not None):
            require(law.first <= y and (law.last is None or y <= law.last), "a cutoff off the support")
        self.laws.append(law)
        self.rows.append(sums(law, lo, hi, self.exact))

    def solve(self) -> None:
        """Confirm cutoffs and fractions."""
        found = window_fractions(self.rows, self.betas(), self.window, self.laws[0].mean)
        for i, d in zip(self.places, found[::-1] if self.flip else found, strict=True):
            c = self.scale * self.q.test["y" + i] + self.shift
            confirm(self.q.test["c" + i], c, c, self.q.digits, f"the cutoff c{i}")
            require(less(0, d) and not less(1, d), "a fraction outside (0, 1]: this is not the test")
            gamma_i = d if self.q.inner else 1 - d
            confirm(self.q.test["gamma" + i], gamma_i, gamma_i, self.q.digits, f"the fraction gamma{i}")

    def psi(self, i: int, values: Sequence[Fraction]) -> tuple[Number, Number]:
        """E psi; and E[Y psi] = lo E psi + E[(Y - lo) psi], which has a meaning where the window has two ends."""
        d, (at_lo, at_hi, between, moment) = [v if self.q.inner else 1 - v for v in values], self.rows[i]
        d, (lo, hi) = d[::-1] if self.flip else d, (y or 0 for y in self.window)
        inside = d[0] * at_lo + d[-1] * at_hi + between
        return inside, lo * inside + moment + d[-1] * (hi - lo) * at_hi

    def signs(self, of: str) -> list[int]:
        """E phi grows with each fraction; E[V phi] does where the cutoff is positive."""
        cutoffs = [self.scale * self.q.test["y" + i] + self.shift for i in self.places]
        return [-1 if of == "V phi" and less(c, 0) else 1 for c in cutoffs]


def window_fractions(
    rows: list[list[Number]], betas: list[Number], window: tuple[int | None, int | None], mean: Number
) -> list[Number]:
    """Solve for d at the ends of the window; a row holds P(lo), P(hi), S = the mass between, M = the same times k - lo.

        one-sided     d P(end) + S = beta
        two limits    d1 P_i(lo) + d2 P_i(hi) + S_i = beta_i, i = 1, 2 (Cramer's rule)
        point null    d2 (hi - lo) P(hi) + M = beta (mean - lo), and the one-sided equation with both ends

    One atom (lo = hi): both equations must give the same d, which only exact numbers can show.
    """
    (lo, hi), right = window, [beta - row[2] for row, beta in zip(rows, betas, strict=True)]
    if lo is None or hi is None:
        return [right[0] / rows[0][0 if hi is None else 1]]
    if lo == hi:
        d = right[0] / rows[0][0]
        other = right[1] / rows[1][0] if len(rows) == 2 else d * (1 + (mean - lo))
        if isinstance(d, Interval) or isinstance(other, Interval):
            raise ImpreciseError("one atom: only exact numbers decide")
        require(d == other, "one atom cannot meet both side conditions")
        return [d, d]
    if len(rows) == 1:
        upper = (betas[0] * (mean - lo) - rows[0][3]) / (rows[0][1] * (hi - lo))
        return [(right[0] - upper * rows[0][1]) / rows[0][0], upper]
    (a, b), (c, e) = rows[0][:2], rows[1][:2]
    det = a * e - b * c
    return [(right[0] * e - right[1] * b) / det, (a * right[1] - c * right[0]) / det]


class SmoothTest(Test):
    """Continuous laws: psi = 1 between the cutoffs, 0 beyond them, and no fractions."""

    def __init__(self, q: Question) -> None:
        super().__init__(q)
        form(set(q.test) == {"form", "rejects", *("c" + i for i in self.places)}, "a continuous test has cutoffs")
        for t in q.limits():
            self.add(t)

    def on_y(self, values: Sequence[Number]) -> list[Number]:
        """Carry values from the scale of V to that of Y, in ascending order of the window's ends."""
        ys = [(v - self.shift) / self.scale for v in values]
        return ys[::-1] if self.flip else ys

    def solve(self) -> None:
        """Confirm the cutoffs by one interval Newton step on the boxes of the claim."""
        near, far = self.on_y([c[0] for c in self.claims]), self.on_y([c[1] for c in self.claims])
        boxes = [(b, a) if self.flip else (a, b) for a, b in zip(near, far, strict=True)]
        require(not self.laws[0].positive or less(0, boxes[0][0]), "a cutoff outside the support")
        require(len(boxes) == 1 or less(boxes[0][1], boxes[1][0]), "cutoffs that are not in order")
        steps = newton(self.laws, self.betas(), boxes, self.above)
        for i, claim, y in zip(self.places, self.claims, steps[::-1] if self.flip else steps, strict=True):
            c = self.scale * y + self.shift
            a, b = ends(c)
            require(a <= claim[1] and claim[0] <= b, f"the cutoff c{i} lies outside the stated enclosure")
            if not claim[0] <= a <= b <= claim[1]:
                raise ImpreciseError(f"the Newton step for c{i} leaves the box")
            confirm(self.q.test["c" + i], c, c, self.q.digits, f"the cutoff c{i}")

    def psi(self, i: int, values: Sequence[Fraction]) -> tuple[Number, Number]:
        """E psi and E[Y psi] from the law's distribution function and partial mean."""
        law, nothing = self.laws[i], (Fraction(0), Fraction(0))
        if len(values) == 2 and values[0] == values[1]:
            return nothing
        at = [nothing if law.positive and not less(0, y) else law.below(y) for y in self.on_y(values)]
        if len(at) == 1:
            at = [at[0], (1, law.mean)] if self.above else [nothing, at[0]]
        return at[1][0] - at[0][0], at[1][1] - at[0][1]

    def signs(self, of: str) -> list[int]:
        """E phi grows as the region of rejection does; E[V phi] where, besides, V is positive."""
        grow = [-1, 1] if self.q.inner else [1, -1]
        if len(self.claims) == 1:
            grow = [1 if self.q.test["rejects"] == "below" else -1]
        if of == "phi":
            return grow
        return [-g if less(c[1], 0) else g for g, c in zip(grow, self.claims, strict=True)]


def newton(laws: list[Any], betas: list[Number], boxes: list[Any], above: bool) -> list[Number]:
    """One interval Newton step for the ends of the window on the boxes of the claim; return the enclosures of the ends.

    F(c) = window probabilities minus betas (point null: also the first moment minus beta * mean), m the midpoint, J
    an interval matrix that contains every derivative of F on the box X (rows: -density at the lower end, +density
    at the upper end, times y for a moment). For x in X, F(x) = F(m) + A(x) (x - m), where A(x) is the integral of
    F' along the segment, continuous in x, and in J since the set J is convex. If det J does not contain 0 and N = m
    - J**-1 F(m) lies in X, then x -> m - A(x)**-1 F(m) maps X continuously into N, so by Brouwer it has a fixed
    point x, and there F(x) = 0; every zero in X is such a point, so it lies in N. N is enclosed by Cramer's rule.
    That there is no other zero anywhere is the theorem (FORMAT.md).
    """
    middles, areas = [(a + b) / 2 for a, b in boxes], [hull(a, b) for a, b in boxes]
    below = [[law.below(m) for m in middles] for law in laws]
    if len(boxes) == 1:
        gap = (1 - below[0][0][0] if above else below[0][0][0]) - betas[0]
        if ends(gap) == (Fraction(0), Fraction(0)):
            return middles
        return [middles[0] - gap / (laws[0].density(areas[0]) * (-1 if above else 1))]
    values = [high[0] - low[0] - beta for (low, high), beta in zip(below, betas, strict=True)]
    rows = [[-law.density(areas[0]), law.density(areas[1])] for law in laws]
    if len(laws) == 1:
        values.append(below[0][1][1] - below[0][0][1] - betas[0] * laws[0].mean)
        rows.append([area * slope for area, slope in zip(areas, rows[0], strict=True)])
    (a, b), (c, d) = rows
    det = a * d - b * c
    return [middles[0] - (values[0] * d - values[1] * b) / det, middles[1] - (a * values[1] - c * values[0]) / det]


# ---- 10. Side conditions, rounding ---------------------------------------------------------------------------------


def decide(rule: Callable[[bool], None], start: int, exact: bool = False) -> None:
    """Run a rule at rising precision until it does not raise ImpreciseError; then, where these exist, in fractions."""
    reason = ""
    for factor in (1, 2, 4) if exact else (1, 2, 4, 8):
        Interval.bits = start * factor
        try:
            return rule(False)
        except ImpreciseError as still_open:
            reason = str(still_open)
    if not exact:
        raise UndecidedError(reason)
    return rule(True)


def check_numbers(q: Question, predicate: dict[str, Any]) -> None:
    """Solve and compare: in fractions at once where a claim is exact, else in intervals of sufficient precision."""
    start, claims = q.digits * 10 // 3 + 160, [value for key, value in q.test.items() if key.startswith("gamma")]

    def lattice(exact: bool) -> None:
        test = LatticeTest(q, exact)
        test.solve()
        check_conditions(q, test, predicate["side_conditions"])
        check_rounding(q, test, predicate["rounding"])

    def smooth(_: bool) -> None:
        test = SmoothTest(q)
        test.solve()
        check_conditions(q, test, predicate["side_conditions"])

    if q.law["name"] in CONTINUOUS:
        decide(smooth, start)
        decide(lambda _: check_rounding(q, SmoothTest(q), predicate["rounding"]), 160)
    elif any(isinstance(claim, str) for claim in claims):
        lattice(True)
    else:
        decide(lattice, start, exact=True)


def check_conditions(q: Question, test: Test, conditions: list[dict[str, Any]]) -> None:
    """Each side condition: where, its exact target, and the range of the expectation within the claim."""
    wanted = [(i, at, "phi") for i, at in enumerate(q.limit_texts)]
    if q.form == "point null":
        wanted.append((0, q.limit_texts[0], "V phi"))
    form(len(conditions) == len(wanted), "the number of side conditions")
    for condition, (i, at, of) in zip(conditions, wanted, strict=True):
        require((condition["at"], condition["of"]) == (at, of), "another side condition than the null's")
        target = q.levels()[i] * (test.scale * test.laws[0].mean + test.shift if of == "V phi" else 1)
        confirm(condition["target"], target, target, q.digits, "the target of a side condition")
        small, large = test.extremes(i, of)
        confirm(condition["expectation"], small, large, q.digits, "the expectation in a side condition")


def fixed(x: Fraction, decimals: int) -> str:
    """Round to nearest (ties away from 0) with a fixed number of decimals, and spell it."""
    units = floor(abs(x) * 10**decimals + Fraction(1, 2))
    text = str(units).rjust(decimals + 1, "0")
    return ("-" if x < 0 and units else "") + text[:-decimals] + "." + text[-decimals:]


def check_size(row: dict[str, Any], found: list[Number], middle: Number | None) -> None:
    """The size is the largest expectation at the limits; left out only where the power in the middle may be lower."""
    if "size" not in row:
        form(middle is not None, "a row of the rounding table without a size")
        above = middle is not None and all(ends(e)[1] < ends(middle)[0] for e in found)
        require(not above, "a size that is left out although it is that at the limits")
        return
    lows, highs = zip(*map(claimed, row["expectations"]), strict=True)
    require(claimed(row["size"]) == (max(lows), max(highs)), "the size in the rounding table")
    if middle is not None and any(less(middle, e) for e in found):
        raise UndecidedError("where the power is largest")


def check_rounding(q: Question, test: Test, rounding: dict[str, Any]) -> None:
    """True expectations, and the size, when the numbers are printed to k = 1, 2, ... decimals.

    The size is the largest expectation at the limits: power is monotone (one-sided), falls and then rises
    (rejecting outside) or rises and then falls (rejecting inside), by variation diminishing (Karlin 1968). In the
    last case no power beyond a limit exceeds the one at it, as soon as the middle has at least the power of both. A
    row without a size says less: that this is not shown.
    """
    rows, tolerance, levels, first = rounding["rows"], rational(rounding["tolerance"]), q.levels(), 0
    form(1 <= len(rows) <= 60 and tolerance > 0, "the rows of the rounding table")
    if q.form == "outside null":
        test.add((q.limits()[0] + q.limits()[1]) / 2)
    for k, row in enumerate(rows, 1):
        form(row["decimals"] == k and len(row["expectations"]) == len(levels), "the rows of the rounding table")
        texts = [fixed(low, k) for low, _ in test.claims]
        if texts != [fixed(high, k) for _, high in test.claims]:
            raise UndecidedError("a number on the edge of its rounding")
        names = [test.kind + i for i in test.places]
        require(row["numbers"] == dict(zip(names, texts, strict=True)), "numbers that are not rounded to nearest")
        found = [test.expect(i, [Fraction(text) for text in texts]) for i in range(len(test.laws))]
        for claim, e in zip(row["expectations"], found, strict=False):
            confirm(claim, e, e, min(q.digits, 15), "an expectation in the rounding table")
        check_size(row, found[: len(levels)], found[-1] if q.form == "outside null" else None)
        gaps = [e - level for e, level in zip(found, levels, strict=False)]
        if not first and all(less(-tolerance, gap) and less(gap, tolerance) for gap in gaps):
            first = k
    require(rounding["decimals"] == first, "the smallest sufficient number of decimals")


# ---- 11. What is taken on trust, what is reported ------------------------------------------------------------------

BOOK = "Lehmann and Romano 2005"
UNBIASED = f"{BOOK}, section 4.2: a test of this form with these side conditions is uniformly most powerful unbiased"
THEOREMS = {
    "one-sided": f"{BOOK}, Corollary 3.4.1: a one-sided test of this form is uniformly most powerful",
    "outside null": f"{BOOK}, Theorem 3.7.1: a test of this form with these side conditions is uniformly most powerful",
    "interval null": UNBIASED,
    "point null": UNBIASED,
}
STEPS = {"support", "nonnegativity", "normalisation", "factorisation", "monotonicity"}
GRADES = ("proved", "enclosed", "checked numerically")
TRUSTED_NUMBERS = "the numbers: this law has no closed form here, and its quadrature or inversion is not replayed"
REPORTED = "the double-precision numbers: they are reported by another library and compared here, not computed"


def trusted(q: Question) -> list[str]:
    """What is taken on trust; the certificate has to state it in the same words."""
    listed = [f"theorem: {THEOREMS[q.form]}"]
    listed += [f"derivation, step {step['name']}: {step['grade']}" for step in q.derivation["steps"]]
    if q.law["name"] == "lattice" and "total" in q.law["parameters"]:
        listed.append("the table of weights: its normaliser, and its mean where one is stated")
    if q.law["name"] not in (*MAKERS, "lattice"):
        listed.append(TRUSTED_NUMBERS)
    return [*listed, REPORTED]


def check_derivation(q: Question) -> None:
    """Every step is there once, none is refuted or open, and the grade of the whole is that of the weakest step."""
    steps = q.derivation["steps"]
    for step in steps:
        require(step["grade"] in GRADES, f"the step {step['name']} is {step['grade']}")
    names = {step["name"] for step in steps}
    needed = STEPS | {"law"} if q.law["name"] in MAKERS else STEPS
    require(needed <= names and len(names) == len(steps), "a step of the derivation is missing, or stands twice")
    weakest = max(GRADES.index(step["grade"]) for step in steps if step["name"] != "numerical look")
    require(q.derivation["grade"] == GRADES[weakest], "the grade of a derivation is that of its weakest step")


def check_form(q: Question) -> None:
    """The test has the form of the null hypothesis; one-sided with Q rising, large V speaks for large t."""
    require(q.test["form"] == q.form, "the form of the test is not that of the null hypothesis")
    side = {"outside null": "inside", "interval null": "outside", "point null": "outside"}.get(q.form)
    side = side or (q.side if q.derivation["rising"] else {"above": "below", "below": "above"}[q.side])
    require(q.test["rejects"] == side, "the test rejects on the wrong side")


def check_double(q: Question, opinions: list[dict[str, Any]]) -> None:
    """Digits of agreement of a double x: the largest d <= 17 with |x - c| <= 10**-d |c| / 2 for all claimed c, or 0."""
    for opinion in opinions:
        numbers, digits = opinion["numbers"], opinion["digits"]
        form(all(numbers.get(key) is not None for key in digits), "digits of a number that is not reported")
        for key in numbers:
            form(re.fullmatch("(c|gamma)[12]?", key) and key in q.test, f"an opinion on {key}")
        for key, stated in digits.items():
            (low, high), x = claimed(q.test[key]), decimal(numbers[key])
            worst, size = max(abs(x - low), abs(x - high)), min(abs(low), abs(high))
            agreed = max((d for d in range(18) if 2 * worst * 10**d <= size), default=0)
            require(agreed == stated, f"the agreement of {key}")


# ---- 12. The command -----------------------------------------------------------------------------------------------


def check(statement: Any) -> Question:
    """Check a whole certificate; return its question."""
    shaped(statement, STATEMENT, "certificate")
    form((statement["_type"], statement["predicateType"]) == (TYPE, PREDICATE), "not a certificate of this version")
    form(len(statement["subject"]) == 1, "one subject is needed")
    predicate = statement["predicate"]
    rest = {key: value for key, value in predicate.items() if key != "seal"}
    require(predicate["seal"] == hashlib.sha256(canonical(rest)).hexdigest(), "the seal does not fit: a change")
    q = Question(predicate)
    check_derivation(q)
    require(predicate["assumptions"] == trusted(q), "the list of what is taken on trust is not complete")
    decide(lambda _: check_statement(q, predicate["problem"]), 128)
    check_form(q)
    check_double(q, predicate["double_precision"]["opinions"])
    if TRUSTED_NUMBERS not in predicate["assumptions"]:
        decide(lambda _: check_density(q), 192)
        check_numbers(q, predicate)
    return q


def check_case(q: Question, statement: Any, data: bytes) -> None:
    """The certificate is about this case file: its digest, and every entry of the problem as it stands there."""
    import tomllib

    digest = hashlib.sha256(data).hexdigest()
    require(digest == statement["subject"][0]["digest"]["sha256"], "the case file is another one")
    signs = str.maketrans({"\u2264": "<=", "\u2265": ">=", "\u2212": "-", "\u00d7": "*", "\u00b7": "*", "\u00a0": " "})
    case = tomllib.loads(data.decode("utf-8-sig").translate(signs), parse_float=str)
    density, problem, names = case["density"], case["problem"], q.names()
    for key in ("formula", "kernel", "variable", "parameter"):
        mine, theirs = (re.sub(r"\s", "", str(d.get(key))).replace("^", "**") for d in (q.density, density))
        require(mine == theirs, f"the case file has another {key}")
    weights = [str(Fraction(str(w))) for w in density.get("weights", [])]
    require(weights == q.density.get("weights", []), "the case file has other weights")
    same("n", [Fraction(q.n)], [Fraction(str(problem["n"]))])
    for key in q.density["constants"]:
        same(key, [names[key]], [evaluate(str(density["constants"][key]))])
    for key, name in (("support", q.x), ("space", q.t)):
        mine, theirs = q.density[key], density[key]
        require(("integers" in mine) == ("integers" in theirs), f"the case file has another {key}")
        same(key, bounds(mine, name, names), bounds(theirs, name, names))
    null = re.sub(r"\s*(<=|>=|=)\s*", r" \1 ", problem["null"].strip())
    other, texts, side = hypothesis(null, q.t)
    require((other, side) == (q.form, q.side), "the case file has another null hypothesis")
    same("null hypothesis", q.limits(), [evaluate(text, names) for text in texts])
    alpha = problem["alpha"] if isinstance(problem["alpha"], list) else [problem["alpha"]] * len(q.alphas)
    same("alpha", q.levels(), [evaluate(str(level)) for level in alpha])


def same(what: str, mine: Iterable[Number | None], theirs: Iterable[Number | None]) -> None:
    """Require equal numbers: fractions exactly, others as far as the intervals can tell."""
    for x, y in zip(mine, theirs, strict=True):
        low, high = (0, 0 if x is y else 1) if x is None or y is None else ends(x - y)
        require(low <= 0 <= high and (x is None) == (y is None), f"the case file has another {what}")


OUTCOMES: tuple[tuple[tuple[type[Exception], ...], int, str], ...] = (
    ((RejectedError, ZeroDivisionError), 1, "REJECTED"),
    ((UndecidedError, ImpreciseError), 3, "UNDECIDED"),
    ((LimitError, RecursionError, MemoryError, OverflowError), 3, "OVER THE LIMIT"),
    ((MalformedError, KeyError, TypeError, ValueError, IndexError, AttributeError), 2, "MALFORMED"),
)


def verdict(data: bytes, case: Any = None) -> tuple[int, list[str]]:
    """Return the exit status and the lines to print for a certificate's bytes, and perhaps its case file's path."""
    work["left"] = LIMIT
    try:
        statement = read(data)
        q = check(statement)
        if case:
            with open(case, "rb") as file:
                check_case(q, statement, file.read())
    except tuple(kind for kinds, _, _ in OUTCOMES for kind in kinds) as reason:
        status, word = next((status, word) for kinds, status, word in OUTCOMES if isinstance(reason, kinds))
        return status, [f"{word}: {reason}"]
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
