"""A table of densities: those to derive with the law that must come out, and those to refuse with the step
that must fail."""

from __future__ import annotations

from typing import Any, NamedTuple


class Known(NamedTuple):
    """A density with the law of T that textbooks give it (checked against the table in Morris 1982)."""

    name: str
    density: dict[str, Any]
    statistic: str
    law: str
    parameters: tuple[str, ...]
    scale: str = "1"
    shift: str = "0"


class Refused(NamedTuple):
    """A density that is not of the form, with the first step that must be refuted."""

    name: str
    density: dict[str, Any]
    step: str


def _d(formula: str, support: str, parameter: str, space: str, **constants: str) -> dict[str, Any]:
    return {
        "formula": formula,
        "variable": "x",
        "support": support,
        "parameter": parameter,
        "space": space,
        "constants": constants,
    }


WHOLE, POSITIVE, REALS = "integers >= 0", "reals > 0", "reals"

KNOWN = (
    Known("Poisson", _d("exp(-lam)*lam**x/factorial(x)", WHOLE, "lam", "lam > 0"), "x", "Poisson", ("lam",)),
    Known(
        "Poisson by exposure",
        _d("exp(-c*lam)*(c*lam)**x/factorial(x)", WHOLE, "lam", "lam > 0", c="5/2"),
        "x",
        "Poisson",
        ("5*lam/2",),
    ),
    Known(
        "Poisson by log mean",
        _d("exp(-exp(b))*exp(b*x)/factorial(x)", WHOLE, "b", "reals"),
        "x",
        "Poisson",
        ("exp(b)",),
    ),
    Known(
        "shifted Poisson",
        _d("exp(-t)*t**(x-3)/factorial(x-3)", "integers >= 3", "t", "t > 0"),
        "x",
        "Poisson",
        ("t",),
        "1",
        "3",
    ),
    Known("Bernoulli", _d("p**x*(1-p)**(1-x)", "integers 0..1", "p", "0 < p < 1"), "x", "binomial", ("1", "p")),
    Known(
        "Bernoulli as a sum",
        _d("p*x + (1-p)*(1-x)", "integers 0..1", "p", "0 < p < 1"),
        "x",
        "binomial",
        ("1", "p"),
    ),
    Known(
        "Bernoulli by odds less one",
        _d("(1+t*x)/(2+t)", "integers 0..1", "t", "t > 0"),
        "x",
        "binomial",
        ("1", "(1+t)/(2+t)"),
    ),
    Known(
        "binomial",
        _d("binomial(m,x)*p**x*(1-p)**(m-x)", "integers 0..m", "p", "0 < p < 1", m="10"),
        "x",
        "binomial",
        ("10", "p"),
    ),
    Known(
        "binomial by logit",
        _d("binomial(5,x)*exp(t*x)/(1+exp(t))**5", "integers 0..5", "t", "reals"),
        "x",
        "binomial",
        ("5", "exp(t)/(1+exp(t))"),
    ),
    Known(
        "share of one Poisson count in two",
        _d("binomial(m,x)*t**x/(1+t)**m", "integers 0..m", "t", "t > 0", m="12"),
        "x",
        "binomial",
        ("12", "t/(1+t)"),
    ),
    Known("geometric from 0", _d("p*(1-p)**x", WHOLE, "p", "0 < p < 1"), "x", "negative binomial", ("1", "p")),
    Known(
        "geometric from 1",
        _d("p*(1-p)**(x-1)", "integers >= 1", "p", "0 < p < 1"),
        "x",
        "negative binomial",
        ("1", "p"),
        "1",
        "1",
    ),
    Known(
        "negative binomial",
        _d("gamma(x+r)/(gamma(r)*factorial(x))*p**r*(1-p)**x", WHOLE, "p", "0 < p < 1", r="5/2"),
        "x",
        "negative binomial",
        ("5/2", "p"),
    ),
    Known(
        "negative binomial by mean",
        _d("gamma(x+r)/(gamma(r)*factorial(x))*(r/(r+m))**r*(m/(r+m))**x", WHOLE, "m", "m > 0", r="3"),
        "x",
        "negative binomial",
        ("3", "3/(3+m)"),
    ),
    Known("exponential by rate", _d("t*exp(-t*x)", POSITIVE, "t", "t > 0"), "x", "gamma", ("1", "t")),
    Known("exponential by mean", _d("exp(-x/t)/t", POSITIVE, "t", "t > 0"), "x", "gamma", ("1", "1/t")),
    Known(
        "shifted exponential, known start",
        _d("exp(-(x-a)/t)/t", "reals > a", "t", "t > 0", a="2"),
        "x",
        "gamma",
        ("1", "1/t"),
        "1",
        "2",
    ),
    Known(
        "gamma by rate",
        _d("t**k*x**(k-1)*exp(-t*x)/gamma(k)", POSITIVE, "t", "t > 0", k="5/2"),
        "x",
        "gamma",
        ("5/2", "t"),
    ),
    Known(
        "gamma by scale",
        _d("x**(k-1)*exp(-x/t)/(gamma(k)*t**k)", POSITIVE, "t", "t > 0", k="3"),
        "x",
        "gamma",
        ("3", "1/t"),
    ),
    Known(
        "chi-square scale",
        _d("x**(k/2-1)*exp(-x/(2*t))/(gamma(k/2)*(2*t)**(k/2))", POSITIVE, "t", "t > 0", k="5"),
        "x",
        "gamma",
        ("5/2", "1/(2*t)"),
    ),
    Known(
        "normal mean",
        _d("exp(-(x-mu)**2/(2*sigma**2))/sqrt(2*pi*sigma**2)", REALS, "mu", "reals", sigma="2/3"),
        "x",
        "normal",
        ("mu", "4/9"),
    ),
    Known(
        "normal mean, irrational spread",
        _d("exp(-(x-mu)**2/(2*sigma**2))/(sigma*sqrt(2*pi))", REALS, "mu", "reals", sigma="sqrt(2)"),
        "x",
        "normal",
        ("mu", "2"),
    ),
    Known(
        "normal variance",
        _d("exp(-(x-mu)**2/(2*v))/sqrt(2*pi*v)", REALS, "v", "v > 0", mu="3"),
        "(x-3)**2",
        "gamma",
        ("1/2", "1/(2*v)"),
    ),
    Known(
        "normal standard deviation",
        _d("exp(-(x-mu)**2/(2*s**2))/(s*sqrt(2*pi))", REALS, "s", "s > 0", mu="-1/2"),
        "(x+1/2)**2",
        "gamma",
        ("1/2", "1/(2*s**2)"),
    ),
    Known(
        "log-normal, mu",
        _d("exp(-(log(x)-mu)**2/(2*s**2))/(x*s*sqrt(2*pi))", POSITIVE, "mu", "reals", s="1/2"),
        "log(x)",
        "normal",
        ("mu", "1/4"),
    ),
    Known(
        "log-normal, sigma",
        _d("exp(-(log(x)-mu)**2/(2*s**2))/(x*s*sqrt(2*pi))", POSITIVE, "s", "s > 0", mu="1"),
        "(log(x)-1)**2",
        "gamma",
        ("1/2", "1/(2*s**2)"),
    ),
    Known(
        "Pareto",
        _d("t*a**t/x**(t+1)", "reals > a", "t", "t > 0", a="2"),
        "log(x)",
        "gamma",
        ("1", "t"),
        "1",
        "log(2)",
    ),
    Known(
        "power function",
        _d("t*x**(t-1)", "reals in (0, 1)", "t", "t > 0"),
        "log(x)",
        "gamma",
        ("1", "t"),
        "-1",
    ),
    Known(
        "mirrored power function",
        _d("t*(1-x)**(t-1)", "reals in (0, 1)", "t", "t > 0"),
        "log(1-x)",
        "gamma",
        ("1", "t"),
        "-1",
    ),
    Known(
        "Rayleigh",
        _d("x/s**2*exp(-x**2/(2*s**2))", POSITIVE, "s", "s > 0"),
        "x**2",
        "gamma",
        ("1", "1/(2*s**2)"),
    ),
    Known(
        "Maxwell",
        _d("sqrt(2/pi)*x**2*exp(-x**2/(2*a**2))/a**3", POSITIVE, "a", "a > 0"),
        "x**2",
        "gamma",
        ("3/2", "1/(2*a**2)"),
    ),
    Known(
        "Weibull, known shape",
        _d("k/b*(x/b)**(k-1)*exp(-(x/b)**k)", POSITIVE, "b", "b > 0", k="5/2"),
        "x**(5/2)",
        "gamma",
        ("1", "b**(-5/2)"),
    ),
    Known(
        "half-normal",
        _d("sqrt(2/pi)/s*exp(-x**2/(2*s**2))", POSITIVE, "s", "s > 0"),
        "x**2",
        "gamma",
        ("1/2", "1/(2*s**2)"),
    ),
    Known(
        "Laplace, known centre",
        _d("exp(-abs(x-c)/b)/(2*b)", REALS, "b", "b > 0", c="2"),
        "abs(x-2)",
        "gamma",
        ("1", "1/b"),
    ),
    Known(
        "Levy",
        _d("sqrt(c/(2*pi))*exp(-c/(2*x))/x**(3/2)", POSITIVE, "c", "c > 0"),
        "1/x",
        "gamma",
        ("1/2", "c/2"),
    ),
    Known(
        "inverse gamma, known shape",
        _d("b**a/gamma(a)*x**(-a-1)*exp(-b/x)", POSITIVE, "b", "b > 0", a="7/2"),
        "1/x",
        "gamma",
        ("7/2", "b"),
    ),
    Known(
        "inverse Gaussian, mean",
        _d("sqrt(k/(2*pi*x**3))*exp(-k*(x-m)**2/(2*m**2*x))", POSITIVE, "m", "m > 0", k="7"),
        "x",
        "inverse Gaussian",
        ("m", "7"),
    ),
    Known(
        "inverse Gaussian, shape",
        _d("sqrt(k/(2*pi*x**3))*exp(-k*(x-m)**2/(2*m**2*x))", POSITIVE, "k", "k > 0", m="3"),
        "(x-3)**2/x",
        "gamma",
        ("1/2", "k/18"),
    ),
)

NO_CLOSED_FORM = (
    ("zero-truncated Poisson", _d("t**x/(factorial(x)*(exp(t)-1))", "integers >= 1", "t", "t > 0")),
    ("logarithmic series", _d("-p**x/(x*log(1-p))", "integers >= 1", "p", "0 < p < 1")),
    ("beta, first parameter", _d("x**(a-1)*(1-x)**2*a*(a+1)*(a+2)/2", "reals in (0, 1)", "a", "a > 0")),
    (
        "noncentral hypergeometric",
        {
            "kernel": "binomial(8,x)*binomial(6,5-x)*t**x",
            "variable": "x",
            "support": "integers 0..5",
            "parameter": "t",
            "space": "t > 0",
        },
    ),
)
"""Exponential families whose law has no closed form here."""

REFUSED = (
    Refused("Cauchy location", _d("1/(pi*(1+(x-t)**2))", REALS, "t", "reals"), "factorisation"),
    Refused("logistic location", _d("exp(-(x-t))/(1+exp(-(x-t)))**2", REALS, "t", "reals"), "factorisation"),
    Refused("Student location", _d("2/(pi*sqrt(3)*(1+(x-t)**2/3)**2)", REALS, "t", "reals"), "factorisation"),
    Refused("N(t, t^2)", _d("exp(-(x-t)**2/(2*t**2))/(t*sqrt(2*pi))", REALS, "t", "t > 0"), "factorisation"),
    Refused("Laplace location", _d("exp(-abs(x-t))/2", REALS, "t", "reals"), "factorisation"),
    Refused("Weibull of unknown shape", _d("k*x**(k-1)*exp(-x**k)", POSITIVE, "k", "k > 0"), "factorisation"),
    Refused(
        "normal mixture",
        _d("(exp(-x**2/2) + exp(-(x-t)**2/2))/(2*sqrt(2*pi))", REALS, "t", "reals"),
        "factorisation",
    ),
    Refused("uniform(0, t)", _d("1/t", "reals in (0, t)", "t", "t > 0"), "support"),
    Refused("shifted exponential, unknown start", _d("exp(-(x-t))", "reals >= t", "t", "reals"), "support"),
    Refused("N(t^2, 1)", _d("exp(-(x-t**2)**2/2)/sqrt(2*pi)", REALS, "t", "reals"), "monotonicity"),
    Refused("negative somewhere", _d("exp(-x)*(1+t*(x-1))", POSITIVE, "t", "reals"), "nonnegativity"),
    Refused("Poisson without its exponential", _d("lam**x/factorial(x)", WHOLE, "lam", "lam > 0"), "normalisation"),
    Refused("exponential, rate and mean mixed up", _d("t*exp(-x/t)", POSITIVE, "t", "t > 0"), "normalisation"),
    Refused("normal without its root", _d("exp(-(x-t)**2/2)/(2*pi)", REALS, "t", "reals"), "normalisation"),
)
