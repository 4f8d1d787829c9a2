"""What the laws built from the formula itself have in common: one observation, a parameter value, how many there are.

Source: E. L. Lehmann and J. P. Romano, *Testing Statistical Hypotheses* (3rd ed., 2005), Lemma 2.7.2: the sum of
observations of a one-parameter exponential family is one again, with the same parameter.
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any, ClassVar, Self, cast

from verify.laws.base import Law


class BuiltLaw(Law):
    """A law of the sum of n copies of one observation; subclasses are dataclasses with ``one``, ``at`` and ``n``.

    Attributes
    ----------
    one : Atoms or Shape
        One observation, shared by all laws of the family.
    at : Exact
        The parameter value.
    n : int
        Number of observations.
    """

    one: Any
    at: Any
    n: int
    what: ClassVar[str]
    """What a value of the formula is: ``"mass"`` or ``"density"``."""

    @property
    def parameters(self) -> dict[str, Any]:
        """The formula of one observation as text, the parameter's value and the number of observations."""
        return {self.what: self.one.text, self.one.parameter: self.at, "n": self.n}

    def __str__(self) -> str:
        whose = f"P({self.one.variable.upper()} = {self.one.variable})" if self.what == "mass" else self.what
        how = "=" if getattr(self.one, "normalised", True) else "proportional to"
        terms = "one term" if self.n == 1 else f"a sum of {self.n} independent terms"
        where = "" if str(self.at) == self.one.parameter else f", at {self.one.parameter} = {self.at}"
        each = "each from" if self.n != 1 else "from"
        return f"{terms}, {each} one observation with {whose} {how} {self.one.text}{where}"

    def map_parameters(self, change: Any) -> Self:
        """Return the law with ``change`` applied to the parameter value."""
        changed: Self = replace(cast(Any, self), at=change(self.at))
        return changed

    def sum_of(self, n: Any) -> Self:
        """Return the law of the sum of n copies."""
        grown: Self = replace(cast(Any, self), n=self.n * n)
        return grown
