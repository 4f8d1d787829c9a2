"""The density of one observation, as given: texts, and what they mean, read once."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from decimal import Decimal
from fractions import Fraction
from functools import cached_property
from typing import TypeAlias

import sympy

from verify.errors import InputError
from verify.problem.formula import parse_formula
from verify.problem.functions import FUNCTIONS
from verify.problem.numbers import Exact, as_expr, exact
from verify.problem.scan import require_name
from verify.problem.space import Space, parse_space
from verify.problem.support import Support, parse_support

MAX_POINTS = 100_000
"""Points of a finite support that is summed over."""

Given: TypeAlias = str | int | Fraction | Decimal | sympy.Expr


@dataclass(frozen=True)
class Density:
    """The density (or mass function) of ONE observation, with the texts as given.

    Exactly one of ``formula``, ``kernel`` and ``weights`` is given:

    - ``formula`` is the whole density, with its normalising factor.
    - ``kernel`` is a density up to a factor that may depend on the parameter; its support is finite, so that
      the factor is a sum.
    - ``weights`` is a table h(a), ..., h(b) over the support "integers a..b"; the kernel is then h(x) * t**x,
      a power-series family in the positive parameter t.

    Parameters
    ----------
    formula, kernel : str, optional
        Text in ``variable``, ``parameter`` and the names of ``constants``.
    variable, parameter : str
        Names.
    support, space : str
        Where one observation and the parameter lie.
    constants : Mapping
        Known constants: exact numbers or their texts.
    weights : sequence, optional
        Exact nonnegative rationals or their texts.

    Raises
    ------
    InputError
        At construction, for anything that cannot be read.

    Examples
    --------
    >>> d = Density("exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0",
    ...             parameter="lam", space="lam > 0")
    >>> d.expr, d.t.is_positive, d.x.is_integer
    (lam**x*exp(-lam)/factorial(x), True, True)
    """

    formula: str | None = None
    variable: str = ""
    support: str = ""
    parameter: str = ""
    space: str = ""
    constants: Mapping[str, Given] = field(default_factory=dict, hash=False)
    kernel: str | None = None
    weights: Sequence[Given] | None = None

    def __post_init__(self) -> None:
        given = [name for name in ("formula", "kernel", "weights") if getattr(self, name) is not None]
        if len(given) != 1:
            found = " and ".join(given) or "none"
            raise InputError(
                f"one of formula, kernel and weights is needed, found {found}",
                "give exactly one",
                key="density",
            )
        if self.weights is not None:
            object.__setattr__(self, "weights", _weight_tuple(self.weights))
        self._check_names()
        if self.is_kernel:
            self._check_finite()
        if self.t not in self.expr.free_symbols | self.parsed_support.free_symbols:
            raise InputError(
                f"the {given[0]} does not depend on the parameter {self.parameter}",
                "write it in the parameter",
                key=f"density.{given[0]}",
            )  # fmt: skip

    def _check_names(self) -> None:
        require_name(self.variable, "density.variable")
        require_name(self.parameter, "density.parameter")
        if not isinstance(self.constants, Mapping):
            raise InputError("constants is not a table", 'write { m = "10" }', key="density.constants")
        names = [self.variable, self.parameter]
        for name in self.constants:
            require_name(name, "density.constants")
            names.append(name)
        for name in names:
            if names.count(name) > 1:
                raise InputError(f"the name {name} is used twice", "give each its own name", key="density")
            if name in FUNCTIONS and re.search(rf"\b{name}\s*\(", str(self.formula or self.kernel or "")):
                wrong = f"the name {name} stands for a value here, and the formula calls the function {name}"
                raise InputError(wrong, "give the value another name", key="density")

    def _check_finite(self) -> None:
        key = "density.weights" if self.weights is not None else "density.kernel"
        support = self.parsed_support
        if not support.is_finite:
            raise InputError(
                f"a kernel needs a finite support, got {support.text}",
                'write "integers 0..m" with a number for m, or give the whole density as formula', key=key,
            )  # fmt: skip
        if len(support.points) > MAX_POINTS:
            raise InputError(f"{len(support.points)} points are too many", f"at most {MAX_POINTS}", key=key)
        if self.weights is None:
            return
        if len(self.weights) != len(support.points):
            raise InputError(
                f"{len(self.weights)} weights for {len(support.points)} support points",
                "give one weight a point",
                key=key,
            )
        if not self.t.is_positive:
            raise InputError(
                "weights are for a positive parameter", f'write space = "{self.parameter} > 0"', key=key
            )

    @cached_property
    def constant_values(self) -> dict[str, Exact]:
        """The known constants as exact numbers."""
        return {name: exact(value, f"density.constants.{name}") for name, value in self.constants.items()}

    @cached_property
    def constant_symbols(self) -> dict[str, sympy.Expr]:
        """The names that stand for known constants in formulas, with their values."""
        return {name: as_expr(value) for name, value in self.constant_values.items()}

    @cached_property
    def parsed_space(self) -> Space:
        """The parameter space."""
        return parse_space(self.space, self.parameter, self.constant_symbols)

    @cached_property
    def t(self) -> sympy.Symbol:
        """The parameter as a symbol: real, and positive or negative where the space says so."""
        space = self.parsed_space
        return sympy.Symbol(self.parameter, real=True, **_sign_of(space.lower, space.upper, strict=True))

    @cached_property
    def parsed_support(self) -> Support:
        """The support of one observation."""
        return parse_support(self.support, {**self.constant_symbols, self.parameter: self.t})

    @cached_property
    def x(self) -> sympy.Symbol:
        """The observation as a symbol: integer or real, with the sign that the support justifies."""
        support = self.parsed_support
        kind = {"integer": True} if support.kind == "integers" else {"real": True}
        low = support.lower.is_zero and support.lower_closed
        high = support.upper.is_zero and support.upper_closed
        strict = not (low or high)
        return sympy.Symbol(self.variable, **kind, **_sign_of(support.lower, support.upper, strict=strict))

    @cached_property
    def expr(self) -> sympy.Expr:
        """The density or kernel, with the known constants put in.

        For ``weights`` it is h(x) * t**x with h an undefined function whose values are ``table``.
        """
        if self.weights is not None:
            return sympy.Function("h", nonnegative=True)(self.x) * self.t**self.x
        names = {**self.constant_symbols, self.variable: self.x, self.parameter: self.t}
        if self.formula is not None:
            return parse_formula(self.formula, names, "density.formula")
        return parse_formula(self.kernel or "", names, "density.kernel")

    @property
    def is_kernel(self) -> bool:
        """Whether ``expr`` still lacks its normalising factor."""
        return self.formula is None

    @cached_property
    def table(self) -> tuple[Fraction, ...] | None:
        """The weights over the support, in its order; None for a formula or kernel."""
        return None if self.weights is None else tuple(Fraction(weight) for weight in self.weights)


def _weight_tuple(weights: object) -> tuple[Fraction, ...]:
    key = "density.weights"
    if not isinstance(weights, list | tuple):
        raise InputError("weights is not a list", 'write ["1", "3", "3", "1"]', key=key)
    if len(weights) > MAX_POINTS:
        raise InputError(f"{len(weights)} weights are too many", f"at most {MAX_POINTS}", key=key)
    values = tuple(exact(weight, key) for weight in weights)
    for value in values:
        if not isinstance(value, Fraction) or value < 0:
            raise InputError(
                f"the weight {value} is not a nonnegative rational number", 'write e.g. "3" or "1/2"', key=key
            )
    if sum(value != 0 for value in values) < 2:
        raise InputError(
            "fewer than two weights are positive", "an observation needs two possible values", key=key
        )
    return tuple(value for value in values if isinstance(value, Fraction))


def _sign_of(lower: sympy.Expr, upper: sympy.Expr, *, strict: bool) -> dict[str, bool]:
    """Return the SymPy assumptions that an interval justifies; ``strict`` when 0 itself is no member."""
    if lower.is_positive or (lower.is_zero and strict):
        return {"positive": True}
    if upper.is_negative or (upper.is_zero and strict):
        return {"negative": True}
    if lower.is_nonnegative:
        return {"nonnegative": True}
    return {"nonpositive": True} if upper.is_nonpositive else {}
