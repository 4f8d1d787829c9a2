"""Read the name of a law as a colleague writes it: ``Poisson(10*lam)``, ``Gamma(shape=n, scale=t)``."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping

import sympy as sp
from sympy import Expr

from verify.errors import InputError
from verify.laws.base import Law
from verify.laws.binomial import Binomial
from verify.laws.gamma import Gamma
from verify.laws.inverse_gaussian import InverseGaussian
from verify.laws.negative_binomial import NegativeBinomial
from verify.laws.normal import Normal
from verify.laws.poisson import Poisson
from verify.problem.formula import parse_formula

Builder = Callable[..., Law]

LAWS: dict[str, tuple[tuple[str, ...], Builder]] = {
    "poisson": (("mean",), Poisson),
    "bernoulli": (("probability",), lambda p: Binomial(sp.S.One, p)),
    "binomial": (("trials", "probability"), Binomial),
    "geometric": (("probability",), lambda p: NegativeBinomial(sp.S.One, p)),
    "negativebinomial": (("size", "probability"), NegativeBinomial),
    "exponential": (("rate",), lambda rate: Gamma(sp.S.One, rate)),
    "gamma": (("shape", "rate"), Gamma),
    "chisquare": (("df",), lambda df: Gamma(df / 2, sp.S.Half)),
    "normal": (("mean", "variance"), Normal),
    "inversegaussian": (("mean", "shape"), InverseGaussian),
}
"""Name without blanks and hyphens -> names of its parameters in order, and what builds it. Geometric counts
failures from 0."""

OTHER_NAMES: dict[str, tuple[str, Callable[[Expr], Expr]]] = {
    "scale": ("rate", lambda value: 1 / value),
    "sd": ("variance", lambda value: value**2),
    "p": ("probability", lambda value: value),
    "r": ("size", lambda value: value),
}


def read_law(text: str, symbols: Mapping[str, Expr], key: str = "claim.law") -> Law:
    """Return the law that a text names.

    Parameters
    ----------
    text : str
        Name and parameters; positional in the order of ``LAWS``, or by name (``scale`` for 1/rate, ``sd``
        for the root of the variance).
    symbols : mapping
        What the parameters may mention.

    Raises
    ------
    InputError
        For an unknown name, or parameters that do not fit.

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> print(read_law("Gamma(shape=3, scale=t)", {"t": t}))
    gamma(shape = 3, rate = 1/t)
    """
    match = re.fullmatch(r"\s*([A-Za-z][A-Za-z _-]*?)\s*\((.*)\)\s*", text, re.DOTALL)
    name = re.sub(r"[ _-]", "", match.group(1)).lower() if match else ""
    if match is None or name not in LAWS:
        raise InputError(
            f"{text!r} names no law known here",
            'write e.g. "Poisson(10*lam)" or "Gamma(shape, rate)"',
            key=key,
        )
    names, build = LAWS[name]
    given: dict[str, Expr] = {}
    for place, part in enumerate(_split(match.group(2))):
        label, equals, body = part.partition("=")
        slot = label.strip() if equals else (names[place] if place < len(names) else "")
        slot, change = OTHER_NAMES.get(slot, (slot, lambda value: value))
        if slot not in names or slot in given:
            raise InputError(
                f"{text!r} has parameters that do not fit",
                f"{match.group(1)} takes {', '.join(names)}",
                key=key,
            )
        given[slot] = change(parse_formula(body if equals else part, symbols, key))
    if len(given) != len(names):
        raise InputError(f"{text!r} has too few parameters", f"{match.group(1)} takes {', '.join(names)}", key=key)
    return build(*(given[slot] for slot in names))


def _split(text: str) -> list[str]:
    """Split at the commas outside brackets."""
    parts, depth = [""], 0
    for character in text:
        depth += (character == "(") - (character == ")")
        if character == "," and depth == 0:
            parts.append("")
        else:
            parts[-1] += character
    return parts
