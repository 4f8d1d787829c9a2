"""The functions that a formula may call: one line each, with its number of arguments and its guard."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import sympy

from verify.problem.guards import Budget

Guard = Callable[[Budget, str, tuple[sympy.Expr, ...]], None]


def _bounded(budget: Budget, name: str, arguments: tuple[sympy.Expr, ...]) -> None:
    for argument in arguments:
        budget.argument(name, argument)


@dataclass(frozen=True)
class Function:
    """A function of the formula language.

    Attributes
    ----------
    build : callable
        Makes the SymPy expression from the arguments.
    arity : int
        Number of arguments.
    guard : callable
        Refuses arguments whose value would be too large to compute, before ``build`` is called.
    """

    build: Callable[..., sympy.Expr]
    arity: int = 1
    guard: Guard = _bounded


def _no_guard(budget: Budget, name: str, arguments: tuple[sympy.Expr, ...]) -> None:
    pass


def _exponential(budget: Budget, name: str, arguments: tuple[sympy.Expr, ...]) -> None:
    budget.exponential(arguments[0])


def _square_root(budget: Budget, name: str, arguments: tuple[sympy.Expr, ...]) -> None:
    budget.power(arguments[0], sympy.S.Half)


def _factorial(budget: Budget, name: str, arguments: tuple[sympy.Expr, ...]) -> None:
    budget.factorial(name, arguments[0])


def _binomial(budget: Budget, name: str, arguments: tuple[sympy.Expr, ...]) -> None:
    budget.binomial(*arguments)


def _zeta(budget: Budget, name: str, arguments: tuple[sympy.Expr, ...]) -> None:
    budget.zeta(arguments[0])


FUNCTIONS: dict[str, Function] = {
    "exp": Function(sympy.exp, 1, _exponential),
    "log": Function(sympy.log, 1, _no_guard),
    "ln": Function(sympy.log, 1, _no_guard),
    "sqrt": Function(sympy.sqrt, 1, _square_root),
    "abs": Function(sympy.Abs, 1, _no_guard),
    "Abs": Function(sympy.Abs, 1, _no_guard),
    "factorial": Function(sympy.factorial, 1, _factorial),
    "binomial": Function(sympy.binomial, 2, _binomial),
    "gamma": Function(sympy.gamma, 1, _factorial),
    "loggamma": Function(sympy.loggamma, 1, _factorial),
    "beta": Function(sympy.beta, 2),
    "besseli": Function(sympy.besseli, 2),
    "besselj": Function(sympy.besselj, 2),
    "besselk": Function(sympy.besselk, 2),
    "bessely": Function(sympy.bessely, 2),
    "zeta": Function(sympy.zeta, 1, _zeta),
    "erf": Function(sympy.erf),
    "erfc": Function(sympy.erfc),
    "sin": Function(sympy.sin),
    "cos": Function(sympy.cos),
    "tan": Function(sympy.tan),
    "asin": Function(sympy.asin),
    "acos": Function(sympy.acos),
    "atan": Function(sympy.atan),
    "sinh": Function(sympy.sinh),
    "cosh": Function(sympy.cosh),
    "tanh": Function(sympy.tanh),
    "asinh": Function(sympy.asinh),
    "acosh": Function(sympy.acosh),
    "atanh": Function(sympy.atanh),
    "sech": Function(sympy.sech),
}
"""Name in a formula -> function. To add one: a line with the guard that bounds what SymPy would compute."""

CONSTANTS: dict[str, sympy.Expr] = {"pi": sympy.pi}
"""Names of constants."""
