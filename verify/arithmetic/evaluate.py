"""One walk over a SymPy expression, in any arithmetic.

The tree is recognised by the names of its nodes, so this module needs no SymPy. Numbers come in exactly; what
the walk does not know is an error, never a guess.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from fractions import Fraction
from typing import Any

from verify.errors import SidecheckError


def evaluate(expr: Any, A: Any, values: Mapping[str, Any]) -> Any:
    """Evaluate an expression in the arithmetic ``A``.

    Parameters
    ----------
    expr : sympy.Expr or Fraction or int
        What to evaluate.
    A : arithmetic
        Offers ``real``, ``exp``, ``log``, ``sqrt``, ``power``, ``pi`` and ``function(name, *args)``.
    values : mapping
        The number that stands for each symbol, by name.

    Returns
    -------
    number of ``A``

    Raises
    ------
    SidecheckError
        For a symbol without a value.
    """
    if isinstance(expr, Fraction | int):
        return A.real(expr)
    name = type(expr).__name__
    leaf = _LEAVES.get(name)
    if leaf is not None:
        return leaf(expr, A)
    if name in ("Symbol", "Dummy"):
        if expr.name not in values:
            raise SidecheckError(f"no value for the symbol {expr.name}")
        return values[expr.name]
    if getattr(expr, "is_Rational", False):
        return A.real(Fraction(int(expr.p), int(expr.q)))
    if name == "Pow":
        return _power(expr, A, values)
    args = [evaluate(arg, A, values) for arg in expr.args]
    if name == "Add":
        return _fold(args, lambda a, b: a + b)
    if name == "Mul":
        return _fold(args, lambda a, b: a * b)
    simple = SIMPLE.get(name)
    if simple is not None:
        return getattr(A, simple)(*args)
    return A.function(name, *args)


def _power(expr: Any, A: Any, values: Mapping[str, Any]) -> Any:
    base, exponent = expr.args
    if getattr(exponent, "is_Integer", False):
        return A.power(evaluate(base, A, values), int(exponent))
    if getattr(exponent, "is_Rational", False) and (exponent.p, exponent.q) == (1, 2):
        return A.sqrt(evaluate(base, A, values))
    if type(base).__name__ == "Exp1":
        return A.exp(evaluate(exponent, A, values))
    return A.power(evaluate(base, A, values), evaluate(exponent, A, values))


def _fold(numbers: list[Any], combine: Callable[[Any, Any], Any]) -> Any:
    total = numbers[0]
    for number in numbers[1:]:
        total = combine(total, number)
    return total


_LEAVES: dict[str, Callable[[Any, Any], Any]] = {
    "Pi": lambda expr, A: A.pi,
    "Exp1": lambda expr, A: A.exp(A.real(1)),
}
SIMPLE = {"exp": "exp", "log": "log", "factorial": "factorial", "gamma": "gamma"}
"""Functions that an arithmetic offers as methods of its own."""
