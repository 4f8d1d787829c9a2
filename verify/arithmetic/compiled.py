"""A formula of one variable as nested closures: walked once, evaluated many times.

It computes what :func:`verify.arithmetic.evaluate.evaluate` computes, operation for operation, except that
parts without the variable are evaluated once.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import reduce
from operator import add, mul
from typing import Any

from verify.arithmetic.evaluate import SIMPLE, evaluate

Number = Any
Function = Callable[[Number], Number]


def compiled(expr: Any, A: Any, variable: str, values: Mapping[str, Number]) -> Function:
    """Return the formula as a function of one variable.

    Parameters
    ----------
    expr : sympy.Expr or Fraction or int
        The formula.
    A : arithmetic
        In which it is evaluated.
    variable : str
        The variable of the function.
    values : mapping
        Numbers for the other symbols.

    Raises
    ------
    SidecheckError
        For a symbol without a value.
    """
    if getattr(expr, "name", None) == variable:
        return lambda x: x
    if not _depends(expr, variable):
        constant = evaluate(expr, A, values)
        return lambda x: constant
    name = type(expr).__name__
    if name in ("Add", "Mul"):
        return _folded(expr, A, variable, values, add if name == "Add" else mul)
    if name == "Pow":
        return _power(expr, A, variable, values)
    inner = [compiled(arg, A, variable, values) for arg in expr.args]
    simple = getattr(A, SIMPLE[name]) if name in SIMPLE else None
    if simple is not None and len(inner) == 1:
        (only,) = inner
        return lambda x: simple(only(x))
    return lambda x: A.function(name, *[part(x) for part in inner])


def _depends(expr: Any, variable: str) -> bool:
    symbols = getattr(expr, "free_symbols", ())
    return any(symbol.name == variable for symbol in symbols)


def _folded(
    expr: Any, A: Any, variable: str, values: Mapping[str, Number], combine: Callable[[Number, Number], Number]
) -> Function:
    """A sum or product: its constant part is folded, the other parts are combined one after the other."""
    fixed = [evaluate(arg, A, values) for arg in expr.args if not _depends(arg, variable)]
    parts = [compiled(arg, A, variable, values) for arg in expr.args if _depends(arg, variable)]
    first, *rest = parts
    if fixed:
        constant, start = reduce(combine, fixed), first
        first = lambda x: combine(constant, start(x))  # noqa: E731
    if not rest:
        return first
    if len(rest) == 1:
        (second,) = rest
        return lambda x: combine(first(x), second(x))
    return lambda x: reduce(combine, (part(x) for part in rest), first(x))


def _power(expr: Any, A: Any, variable: str, values: Mapping[str, Number]) -> Function:
    base, exponent = expr.args
    if type(base).__name__ == "Exp1":
        raised = compiled(exponent, A, variable, values)
        return lambda x: A.exp(raised(x))
    below = compiled(base, A, variable, values)
    if getattr(exponent, "is_Integer", False):
        whole = int(exponent)
        return lambda x: A.power(below(x), whole)
    if getattr(exponent, "is_Rational", False) and (exponent.p, exponent.q) == (1, 2):
        return lambda x: A.sqrt(below(x))
    above = compiled(exponent, A, variable, values)
    return lambda x: A.power(below(x), above(x))
