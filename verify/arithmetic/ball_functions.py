"""Functions of formulas in real balls, by the names that SymPy gives them."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from flint import acb, arb, arb_series, ctx

Ball = Any


def _beta(a: Ball, b: Ball) -> Ball:
    return a.gamma() * b.gamma() / (a + b).gamma()


def _binomial(n: Ball, k: Ball) -> Ball:
    return (n + 1).gamma() * (k + 1).rgamma() * (n - k + 1).rgamma()


def _zeta(s: Ball, a: Ball | None = None) -> Ball:
    return s.zeta() if a is None else s.zeta(a)


def _polygamma(m: Ball, x: Ball) -> Ball:
    return acb(x).polygamma(acb(m)).real


def _zeta_derivative(k: Ball, s: Ball) -> Ball:
    """K-th derivative of zeta at s: k! times a Taylor coefficient."""
    order = int(k.unique_fmpz())
    kept = ctx.cap
    ctx.cap = order + 1
    try:
        return arb_series([s, 1], order + 1).zeta()[order] * arb.fac_ui(order)
    finally:
        ctx.cap = kept


def _sign(x: Ball) -> Ball:
    return x.sgn()


def _rising(x: Ball, k: Ball) -> Ball:
    return (x + k).gamma() * x.rgamma()


REAL_FUNCTIONS: dict[str, Callable[..., Ball]] = {
    "Abs": abs,
    "sign": _sign,
    "binomial": _binomial,
    "beta": _beta,
    "loggamma": lambda x: x.lgamma(),
    "digamma": lambda x: x.digamma(),
    "RisingFactorial": _rising,
    "besseli": lambda nu, z: z.bessel_i(nu),
    "besselj": lambda nu, z: z.bessel_j(nu),
    "besselk": lambda nu, z: z.bessel_k(nu),
    "bessely": lambda nu, z: z.bessel_y(nu),
    "zeta": _zeta,
    "zeta_derivative": _zeta_derivative,
    "polygamma": _polygamma,
    "erf": lambda x: x.erf(),
    "erfc": lambda x: x.erfc(),
    "floor": lambda x: x.floor(),
    "ceiling": lambda x: x.ceil(),
    "lowergamma": lambda s, x: x.gamma_lower(s),
    "uppergamma": lambda s, x: x.gamma_upper(s),
    "polylog": lambda s, x: x.polylog(s),
    **{name: (lambda f: lambda x: getattr(arb(x), f)())(name)
       for name in ("sin", "cos", "tan", "cot", "sec", "csc", "sinh", "cosh", "tanh", "coth", "sech", "csch",
                    "asin", "acos", "atan", "asinh", "acosh", "atanh")},
}
"""Name of the SymPy node to the function in balls."""
