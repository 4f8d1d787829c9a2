"""Invented problems, one for each law and form of hypothesis, as texts for the independent maker."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any


def density(
    formula: str,
    support: str,
    parameter: str,
    space: str,
    constants: dict[str, str] | None = None,
    kind: str = "formula",
) -> dict[str, Any]:
    return {
        kind: formula,
        "variable": "x",
        "support": support,
        "parameter": parameter,
        "space": space,
        "constants": constants or {},
    }


def law(name: str, scale: str = "1", shift: str = "0", **parameters: str) -> dict[str, Any]:
    return {"name": name, "parameters": parameters, "scale": scale, "shift": shift}


POISSON = {
    "density": density("exp(-lam)*lam**x/factorial(x)", "integers >= 0", "lam", "lam > 0"),
    "Q": "log(lam)",
    "T": "x",
    "A": "lam",
    "rising": True,
    "law": law("Poisson", mean="lam"),
}
BINOMIAL = {
    "density": density("binomial(m, x)*p**x*(1-p)**(m-x)", "integers 0..m", "p", "0 < p < 1", {"m": "10"}),
    "Q": "log(p/(1-p))",
    "T": "x",
    "A": "-m*log(1-p)",
    "rising": True,
    "law": law("binomial", trials="m", probability="p"),
}
NEGATIVE = {
    "density": density(
        "gamma(x+r)/(gamma(r)*factorial(x))*p**r*(1-p)**x", "integers >= 0", "p", "0 < p < 1", {"r": "5/2"}
    ),
    "Q": "log(1-p)",
    "T": "x",
    "A": "-r*log(p)",
    "rising": False,
    "law": law("negative binomial", size="r", probability="p"),
}
GAMMA = {
    "density": density("b**a*x**(a-1)*exp(-b*x)/gamma(a)", "reals > 0", "b", "b > 0", {"a": "5/2"}),
    "Q": "-b",
    "T": "x",
    "A": "-a*log(b)",
    "rising": False,
    "law": law("gamma", shape="a", rate="b"),
}
POWER = {
    "density": density("th*x**(th-1)", "reals in (0, 1)", "th", "th > 0"),
    "Q": "th",
    "T": "log(x)",
    "A": "-log(th)",
    "rising": True,
    "law": law("gamma", scale="-1", shape="1", rate="th"),
}
NORMAL = {
    "density": density("exp(-(x-mu)**2/(2*s**2))/sqrt(2*pi*s**2)", "reals", "mu", "reals", {"s": "2/3"}),
    "Q": "mu/s**2",
    "T": "x",
    "A": "mu**2/(2*s**2)",
    "rising": True,
    "law": law("normal", mean="mu", variance="s**2"),
}
VARIANCE = {
    "density": density("exp(-(x-m)**2/(2*v))/sqrt(2*pi*v)", "reals", "v", "v > 0", {"m": "3"}),
    "Q": "-1/(2*v)",
    "T": "(x-m)**2",
    "A": "log(v)/2",
    "rising": True,
    "law": law("gamma", shape="1/2", rate="1/(2*v)"),
}
INVERSE = {
    "density": density("sqrt(k/(2*pi*x**3))*exp(-k*(x-m)**2/(2*m**2*x))", "reals > 0", "m", "m > 0", {"k": "7/2"}),
    "Q": "-k/(2*m**2)",
    "T": "x",
    "A": "-k/m",
    "rising": True,
    "law": law("inverse Gaussian", mean="m", shape="k"),
}
TABLE = {
    "density": density(["1", "5/2", "0", "7/3", "1"], "integers 0..4", "t", "t > 0", kind="weights"),
    "Q": "log(t)",
    "T": "x",
    "A": "",
    "rising": True,
    "law": {**law("lattice", base="t"), "weights": ["1", "5/2", "0", "7/3", "1"], "first": 0},
}
KERNEL = {
    "density": density("binomial(4, x)*binomial(6, 5-x)*psi**x", "integers 0..4", "psi", "psi > 0", kind="kernel"),
    "Q": "log(psi)",
    "T": "x",
    "A": "",
    "rising": True,
    "law": {**law("lattice", base="psi"), "weights": ["6", "60", "120", "60", "6"], "first": 0},
}
TRUNCATED = {
    "density": density("lam**x/(factorial(x)*(exp(lam)-1))", "integers >= 1", "lam", "lam > 0"),
    "Q": "log(lam)",
    "T": "x",
    "A": "log(exp(lam)-1)",
    "rising": True,
    "law": law("lattice", base="lam", total="exp(lam)-1"),
}


def factorials(count: int) -> list[str]:
    out, product = [], 1
    for k in range(1, count + 1):
        product *= k
        out.append("1" if product == 1 else f"1/{product}")
    return out


TRUNCATED["law"] |= {"weights": factorials(48), "first": 1}


MEAN = {
    **TRUNCATED,
    "law": {
        **TRUNCATED["law"],
        "parameters": {"base": "lam", "total": "exp(lam)-1", "mean": "lam*exp(lam)/(exp(lam)-1)"},
    },
}


def build(
    Case: Callable[..., Any],
    base: dict[str, Any],
    null: str,
    alpha: Any,
    n: int,
    start: tuple[Any, ...] = (),
    **more: Any,
) -> Any:
    case = Case(**base, null=null, alpha=[alpha] if isinstance(alpha, str) else alpha, n=n, **more)
    case.start = start
    return case


def all_cases(Case: Callable[..., Any]) -> dict[str, Any]:
    """Name -> case, unsolved."""

    def c(*arguments: Any, **more: Any) -> Any:
        return build(Case, *arguments, **more)

    two = ["1/20", "1/20"]
    return {
        "poisson outside": c(POISSON, "lam <= 8 or lam >= 12", two, 10),
        "poisson interval": c(POISSON, "8 <= lam <= 12", two, 3),
        "poisson point": c(POISSON, "lam = 5", "1/20", 2),
        "poisson above": c(POISSON, "lam <= 5", "0.01", 4),
        "poisson below": c(POISSON, "lam >= 5", "0.01", 4),
        "poisson irrational": c(POISSON, "sqrt(2) <= lam <= 2*log(3)", ["1/50", "1/20"], 7, digits=50),
        "binomial outside": c(BINOMIAL, "p <= 2/5 or p >= 3/5", two, 1),
        "binomial outside 5": c(BINOMIAL, "p <= 2/5 or p >= 3/5", two, 5),
        "binomial interval": c(BINOMIAL, "1/3 <= p <= 0.7", ["1/50", "1/20"], 4),
        "binomial point": c(BINOMIAL, "p = 1/5", "1/20", 1),
        "binomial above": c(BINOMIAL, "p <= 1/5", "1/20", 3),
        "negative binomial outside": c(NEGATIVE, "p <= 0.3 or p >= 0.6", two, 6),
        "negative binomial interval": c(NEGATIVE, "0.3 <= p <= 0.6", two, 2),
        "negative binomial point": c(NEGATIVE, "p = 0.4", "1/20", 2),
        "negative binomial above": c(NEGATIVE, "p <= 0.4", "1/20", 2),
        "negative binomial below": c(NEGATIVE, "p >= 0.4", "1/20", 2),
        "gamma outside": c(GAMMA, "b <= 1 or b >= 3", two, 4, (5, 6)),
        "gamma interval": c(GAMMA, "1 <= b <= 3", two, 4, (2, 15)),
        "gamma point": c(GAMMA, "b = sqrt(2)", "1/20", 4, (3, 12), digits=50),
        "gamma above": c(GAMMA, "b <= 2", "1/20", 4, (2,)),
        "gamma below": c(GAMMA, "b >= 2", "1/20", 4, (9,)),
        "power outside": c(POWER, "th <= 1 or th >= 3", two, 5, ("2.5", "3")),
        "power point": c(POWER, "th = 2", "1/100", 5, ("0.7", "6")),
        "power above": c(POWER, "th <= 2", "1/20", 5, (1,)),
        "variance point": c(VARIANCE, "v = 1", "1/20", 3, ("0.3", "11")),
        "normal outside": c(NORMAL, "mu <= -1/2 or mu >= 1/2", two, 9, ("-0.2", "0.3")),
        "normal interval": c(NORMAL, "-0.1 <= mu <= 0.3", two, 9, (-3, 5)),
        "normal point": c(NORMAL, "mu = 1", "1/20", 9, (5, 13)),
        "normal above": c(NORMAL, "mu <= 1", "1/1000000", 9, (18,)),
        "inverse Gaussian outside": c(INVERSE, "m <= 1 or m >= 2", two, 6, (7, 9)),
        "inverse Gaussian interval": c(INVERSE, "1 <= m <= 2", two, 6, (4, 20)),
        "inverse Gaussian point": c(INVERSE, "m = 2", "1/20", 6, (6, 22)),
        "inverse Gaussian below": c(INVERSE, "m >= 2", "1/20", 6, (8,)),
        "table outside": c(TABLE, "t <= 1/2 or t >= 2", two, 3),
        "table point": c(TABLE, "t = 1", "1/20", 3),
        "kernel interval": c(KERNEL, "1/2 <= psi <= 2", two, 3),
        "kernel above": c(KERNEL, "psi <= 1", "1/20", 1),
        "truncated outside": c(TRUNCATED, "lam <= 1 or lam >= 2", two, 6),
        "truncated point": c(MEAN, "lam = 3/2", "1/20", 6),
        "truncated above": c(TRUNCATED, "lam <= 1", "1/20", 6),
    }
