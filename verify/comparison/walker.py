"""A formula's value in NumPy doubles: a walk over its tree.

Nothing is compiled and nothing is executed: a table says which function a node's class stands for. Two walks
exist.
``values`` gives the value of a node; ``log_values`` gives log|node|, so that a density whose factors
overflow (a
factorial, a power) is still a sum of moderate numbers.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import reduce
from typing import Any

import numpy as np
from scipy import special

from verify.errors import NotAttempted

Array = Any
"""A NumPy array of doubles, or one double."""

_CONSTANTS = {
    "Pi": np.pi,
    "Exp1": np.e,
    "EulerGamma": np.euler_gamma,
    "Infinity": np.inf,
    "NegativeInfinity": -np.inf,
}

_FUNCTIONS: dict[str, Callable[..., Array]] = {
    "exp": np.exp, "log": np.log, "Abs": np.abs, "sign": np.sign, "floor": np.floor, "ceiling": np.ceil,
    "sin": np.sin, "cos": np.cos, "tan": np.tan, "asin": np.arcsin, "acos": np.arccos, "atan": np.arctan,
    "sinh": np.sinh, "cosh": np.cosh, "tanh": np.tanh,
    "asinh": np.arcsinh, "acosh": np.arccosh, "atanh": np.arctanh,
    "sech": lambda u: 1 / np.cosh(u), "csch": lambda u: 1 / np.sinh(u), "coth": lambda u: 1 / np.tanh(u),
    "sec": lambda u: 1 / np.cos(u), "csc": lambda u: 1 / np.sin(u), "cot": lambda u: 1 / np.tan(u),
    "factorial": lambda u: special.gamma(u + 1), "gamma": special.gamma, "loggamma": special.gammaln,
    "binomial": special.binom, "beta": special.beta, "RisingFactorial": special.poch,
    "besseli": special.iv, "besselj": special.jv, "besselk": special.kv, "bessely": special.yv,
    "zeta": special.zeta, "erf": special.erf, "erfc": special.erfc, "digamma": special.digamma,
    "Max": lambda *u: reduce(np.maximum, u), "Min": lambda *u: reduce(np.minimum, u),
    "StrictLessThan": np.less, "LessThan": np.less_equal, "StrictGreaterThan": np.greater,
    "GreaterThan": np.greater_equal, "Equality": np.equal, "Unequality": np.not_equal,
}  # fmt: skip


def _log_binomial(n: Array, k: Array) -> Array:
    return -special.betaln(n - k + 1, k + 1) - np.log(n + 1)


_LOGARITHMS: dict[str, Callable[..., Array]] = {
    "exp": lambda u: u,
    "factorial": lambda u: special.gammaln(u + 1),
    "gamma": special.gammaln,
    "binomial": _log_binomial,
    "beta": special.betaln,
    "RisingFactorial": lambda r, k: special.gammaln(r + k) - special.gammaln(r),
    "besseli": lambda nu, u: np.log(special.ive(nu, u)) + np.abs(u),
    "besselk": lambda nu, u: np.log(special.kve(nu, u)) - u,
    "cosh": lambda u: np.logaddexp(u, -u) - np.log(2.0),
    "sech": lambda u: np.log(2.0) - np.logaddexp(u, -u),
}


def values(node: Any, names: Mapping[str, Array]) -> Array:
    """Value of a formula's node, the named symbols being arrays or doubles.

    Raises
    ------
    NotAttempted
        When the formula holds a function that this walk does not know.

    Examples
    --------
    >>> from types import SimpleNamespace as Node
    >>> class Pi(Node): args = ()
    >>> round(values(Pi(), {}), 4)
    3.1416
    """
    kind = type(node).__name__
    if kind in ("Symbol", "Dummy"):
        return names[node.name]
    if hasattr(node, "p") and hasattr(node, "q") and not node.args:
        return float(node.p) if node.q == 1 else _ratio(node.p, node.q)
    if kind in _CONSTANTS:
        return _CONSTANTS[kind]
    if kind == "Piecewise":
        cases = [[values(part, names) for part in pair.args] for pair in node.args]
        return np.select([condition for _, condition in cases], [case for case, _ in cases], default=np.nan)
    if kind == "BooleanTrue":
        return np.bool_(True)
    arguments = [values(argument, names) for argument in node.args]
    if kind == "Add":
        return reduce(np.add, arguments)
    if kind == "Mul":
        return reduce(np.multiply, arguments)
    if kind == "Pow":
        return np.power(np.asarray(arguments[0], dtype=float), arguments[1])
    if kind in _FUNCTIONS:
        return _FUNCTIONS[kind](*arguments)
    raise NotAttempted(f"no double-precision function for {kind}")


def log_values(node: Any, names: Mapping[str, Array]) -> Array:
    """log|node|, products and powers taken apart so that nothing overflows; -inf where the node is 0."""
    kind = type(node).__name__
    if kind == "Mul":
        return reduce(np.add, [log_values(factor, names) for factor in node.args])
    if kind == "Pow":
        exponent = values(node.args[1], names)
        base = log_values(node.args[0], names)
        return np.where(np.equal(exponent, 0), 0.0, exponent * base)
    if kind in _LOGARITHMS:
        return _LOGARITHMS[kind](*[values(argument, names) for argument in node.args])
    return np.log(np.abs(values(node, names)))


def _ratio(p: Any, q: Any) -> float:
    """P / q correctly rounded, for whole numbers of any size."""
    return int(p) / int(q)
