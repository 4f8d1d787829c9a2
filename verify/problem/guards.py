"""Bounds on what building an expression would compute, checked before it is built.

SymPy evaluates as it builds: ``Integer(9)**9**9`` or ``factorial(10**12)`` would never come back. Each
guard bounds the size of the result from the sizes of its parts, and refuses at once. The bounds are upper
bounds: log2 of a product is at most the sum of the bit lengths, k! <= k**k, binomial(n, k) <=
n**min(k, n - k).
"""

from __future__ import annotations

import sympy

from verify.errors import InputError
from verify.problem.scan import MAX_DIGITS

MAX_BITS = MAX_DIGITS * 3322 // 1000
"""Bits of any one integer that is computed."""
TOTAL_BITS = 20 * MAX_BITS
"""Bits of all the numbers that one formula writes or computes, together."""
MAX_EXPONENT = 1_000_000
"""Size of a numeric exponent, and of the numeric argument of a function."""
MAX_ROOT = 100
"""Denominator of a numeric exponent of a numeric base (which root is taken)."""
MAX_ROOT_BITS = 2_000
"""Bits of a rational of which a root is taken: SymPy looks for its small prime factors."""
MAX_ZETA = 200
"""Size of a whole argument of the zeta function (its value there needs a Bernoulli number)."""


class Budget:
    """How many bits of numbers one formula may still write or compute."""

    def __init__(self, key: str) -> None:
        self.key = key
        self.left = TOTAL_BITS

    def spend(self, bits: int, what: str) -> None:
        """Take the bits of one number, or refuse it."""
        if bits > MAX_BITS:
            self.refuse(f"{what} is too large to be computed exactly", f"at most about {MAX_DIGITS} digits")
        self.left -= bits
        if self.left < 0:
            self.refuse("the numbers in the formula are too large taken together", "use smaller numbers")

    def refuse(self, wrong: str, right: str) -> None:
        """Raise the InputError."""
        raise InputError(wrong, right, key=self.key)

    def number(self, value: sympy.Expr) -> None:
        """Refuse a rational that has grown too large."""
        if bits(value) > MAX_BITS:
            self.refuse("a number in the formula is too large", f"at most about {MAX_DIGITS} digits")

    def argument(self, name: str, value: sympy.Expr) -> None:
        """Refuse a numeric argument that is too large for its function to be evaluated at all."""
        if value.is_number and size(value) > MAX_EXPONENT:
            self.refuse(f"the argument of {name} is too large", f"at most {MAX_EXPONENT} in absolute value")

    def power(self, base: sympy.Expr, exponent: sympy.Expr) -> None:
        """Check a power before it is built."""
        for part in _numeric_parts(exponent):
            if size(part) > MAX_EXPONENT and (base.is_number or exponent.is_number):
                self.refuse("an exponent is too large", f"at most {MAX_EXPONENT} in absolute value")
            self._root(base, part)
            steps = int(size(part)) + 1
            base_bits = sum(_factor_bits(factor) for factor in sympy.Mul.make_args(base))
            if base_bits > 1:
                self.spend(base_bits * steps, "a power")

    def _root(self, base: sympy.Expr, exponent: sympy.Expr) -> None:
        if not base.is_number or exponent.is_Integer or not exponent.is_Rational:
            return
        if int(exponent.q) > MAX_ROOT:
            self.refuse("a root of a number has too high an order", f"at most {MAX_ROOT}")
        if bits(base) > MAX_ROOT_BITS:
            self.refuse(
                "a root of a number that is too large", f"at most about {MAX_ROOT_BITS * 3 // 10} digits"
            )

    def exponential(self, argument: sympy.Expr) -> None:
        """Check exp before it is built: exp(k*log(a)) becomes a**k."""
        self.argument("exp", argument)
        for term in sympy.Add.make_args(argument):
            for logarithm in term.atoms(sympy.log):
                self.power(logarithm.args[0], term.as_coeff_Mul()[0])

    def factorial(self, name: str, k: sympy.Expr) -> None:
        """Check k! (or the gamma function near k) before it is built."""
        self.argument(name, k)
        if k.is_Rational:
            top = int(abs(k)) + 1
            self.spend(top * (top.bit_length() + bits(k) * (not k.is_Integer)), f"{name}({_short(k)})")

    def binomial(self, n: sympy.Expr, k: sympy.Expr) -> None:
        """Check a binomial coefficient before it is built."""
        if not (n.is_number and k.is_number):
            return
        if not (n.is_Rational and k.is_Integer):
            self.refuse(
                "a binomial coefficient of these numbers is not known exactly", "use a whole number below"
            )
        steps = abs(int(k))
        if n.is_Integer and 0 <= int(n) - int(k) < steps:
            steps = int(n) - int(k)
        self.spend((steps + 1) * (bits(n) + 1), "a binomial coefficient")

    def zeta(self, s: sympy.Expr) -> None:
        """Check zeta(s) before it is built."""
        if s.is_number and size(s) > MAX_ZETA:
            self.refuse("the argument of zeta is too large", f"at most {MAX_ZETA} in absolute value")


def bits(value: sympy.Expr) -> int:
    """Bit length of a rational's numerator and denominator together; 0 for anything else."""
    if not value.is_Rational:
        return 0
    return int(value.p).bit_length() + int(value.q).bit_length() - 1


def size(value: sympy.Expr) -> int:
    """Roughly the absolute value of a number, only good for refusing what is far too large."""
    if value.is_Rational:
        return abs(int(value.p)) // int(value.q)
    number = sympy.Abs(value.evalf(15)) if value.is_number else sympy.S.Zero
    if not (number.is_finite and number.is_real):
        return 0
    return int(number) if number < 10 * MAX_EXPONENT else 10 * MAX_EXPONENT


def _numeric_parts(exponent: sympy.Expr) -> tuple[sympy.Expr, ...]:
    if exponent.is_number:
        return (exponent,)
    return (exponent.as_coeff_Add()[0], *(term.as_coeff_Mul()[0] for term in sympy.Add.make_args(exponent)))


def _factor_bits(factor: sympy.Expr) -> int:
    if factor.is_Pow and factor.base.is_Rational and factor.exp.is_Rational:
        return bits(factor.base) * (int(abs(factor.exp)) + 1)
    return bits(factor)


def _short(value: sympy.Expr) -> str:
    return str(value) if bits(value) < 64 else "a large number"
