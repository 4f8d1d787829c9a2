"""Densities to draw from, by the law of their statistic. To add one: one line here."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import Literal

from verify.problem.density import Density

Room = Literal["positive", "unit", "line"]


@dataclass(frozen=True)
class Family:
    """A density, the law of its statistic, and where its parameter can be.

    Attributes
    ----------
    law : str
        Name of the law of T.
    room : {"positive", "unit", "line"}
        The parameter space: t > 0, 0 < t < 1, or the reals.
    formula, support : str
        The density of one observation x with the parameter t.
    constants : tuple of (name, value)
        Known constants.
    trials : int
        For a binomial law, trials of one observation; else 0.
    """

    law: str
    room: Room
    formula: str
    support: str
    constants: tuple[tuple[str, str], ...] = field(default=())
    trials: int = 0

    @cached_property
    def density(self) -> Density:
        """The density, the same object each time."""
        space = {"positive": "t > 0", "unit": "0 < t < 1", "line": "reals"}[self.room]
        return Density(
            self.formula, variable="x", support=self.support, parameter="t", space=space, constants=dict(self.constants)
        )


WHOLE, POSITIVE = "integers >= 0", "reals > 0"

FAMILIES: tuple[Family, ...] = (
    Family("Poisson", "positive", "exp(-t)*t**x/factorial(x)", WHOLE),
    Family("Poisson", "positive", "exp(-c*t)*(c*t)**x/factorial(x)", WHOLE, (("c", "5/2"),)),
    Family("Poisson", "positive", "exp(-t)*t**(x-3)/factorial(x-3)", "integers >= 3"),
    Family("binomial", "unit", "t**x*(1-t)**(1-x)", "integers 0..1", trials=1),
    Family("binomial", "unit", "binomial(m,x)*t**x*(1-t)**(m-x)", "integers 0..m", (("m", "10"),), trials=10),
    Family("binomial", "positive", "binomial(m,x)*t**x/(1+t)**m", "integers 0..m", (("m", "12"),), trials=12),
    Family("negative binomial", "unit", "t*(1-t)**x", WHOLE),
    Family("negative binomial", "unit", "t*(1-t)**(x-1)", "integers >= 1"),
    Family(
        "negative binomial", "unit", "gamma(x+r)/(gamma(r)*factorial(x))*t**r*(1-t)**x", WHOLE, (("r", "5/2"),)
    ),
    Family("gamma", "positive", "t*exp(-t*x)", POSITIVE),
    Family("gamma", "positive", "exp(-x/t)/t", POSITIVE),
    Family("gamma", "positive", "exp(-x**2/(2*t))/sqrt(2*pi*t)", "reals"),
    Family("gamma", "positive", "t*2**t/x**(t+1)", "reals >= 2"),
    Family("normal", "line", "exp(-(x-t)**2/(2*s**2))/(s*sqrt(2*pi))", "reals", (("s", "2"),)),
    Family("normal", "line", "exp(-(log(x)-t)**2/2)/(x*sqrt(2*pi))", POSITIVE),
    Family(
        "inverse Gaussian", "positive", "sqrt(k/(2*pi*x**3))*exp(-k*(x-t)**2/(2*t**2*x))", POSITIVE, (("k", "3"),)
    ),
)  # fmt: skip
"""Every law with a closed form, in some of the clothes that it wears."""

LAWS: tuple[str, ...] = tuple(dict.fromkeys(family.law for family in FAMILIES))
