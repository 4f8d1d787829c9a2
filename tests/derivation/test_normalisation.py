"""The normalisation step over a zoo of densities: proved as they stand, refuted with a changed constant."""

from __future__ import annotations

import mpmath
import pytest
import sympy as sp

from verify.derivation.closed import is_one
from verify.derivation.ledger import Grade
from verify.derivation.normalisation import Mass, TotalMass, decide, normaliser

T = sp.Symbol("t", real=True)

LINE, HALF, UNIT = ("-oo", "oo"), ("0", "oo"), ("0", "1")
ANY, POSITIVE = ("-oo", "oo"), ("0", "oo")

# name: (density, support, parameter space)
SUMS = {
    "Poisson": ("exp(-t)*t**x/factorial(x)", HALF, POSITIVE),
    "Poisson, log mean": ("exp(t*x - exp(t))/factorial(x)", HALF, ANY),
    "Poisson, known exposure": ("exp(-3*t)*(3*t)**x/factorial(x)", HALF, POSITIVE),
    "binomial": ("binomial(10,x)*t**x*(1-t)**(10-x)", ("0", "10"), UNIT),
    "binomial, many trials": ("binomial(10**7,x)*t**x*(1-t)**(10**7-x)", ("0", "10**7"), UNIT),
    "binomial, odds": ("binomial(12,x)*t**x/(1+t)**12", ("0", "12"), POSITIVE),
    "binomial, share of two": ("binomial(9,x)*(t/(1+t))**x*(1/(1+t))**(9-x)", ("0", "9"), POSITIVE),
    "binomial, logit": ("binomial(12,x)*exp(t*x)/(1+exp(t))**12", ("0", "12"), ANY),
    "Bernoulli": ("t**x*(1-t)**(1-x)", ("0", "1"), UNIT),
    "Bernoulli, logit": ("exp(t*x)/(1+exp(t))", ("0", "1"), ANY),
    "geometric from 0": ("t*(1-t)**x", HALF, UNIT),
    "geometric from 1": ("t*(1-t)**(x-1)", ("1", "oo"), UNIT),
    "geometric, other end": ("(1-t)*t**x", HALF, UNIT),
    "geometric, mean": ("(t/(1+t))**x/(1+t)", HALF, POSITIVE),
    "negative binomial": ("binomial(x+3,x)*t**4*(1-t)**x", HALF, UNIT),
    "negative binomial, upside down": ("binomial(-4,x)*t**4*(t-1)**x", HALF, UNIT),
    "negative binomial, gamma": (
        "gamma(x+Rational(5,2))/(gamma(Rational(5,2))*factorial(x))*t**Rational(5,2)*(1-t)**x",
        HALF,
        UNIT,
    ),
    "negative binomial, real size": ("binomial(x+Rational(3,2),x)*t**Rational(5,2)*(1-t)**x", HALF, UNIT),
    "negative binomial, trials": ("binomial(x-1,2)*t**3*(1-t)**(x-3)", ("3", "oo"), UNIT),
    "negative binomial, mean": ("gamma(x+3)/(2*factorial(x))*(3/(3+t))**3*(t/(3+t))**x", HALF, POSITIVE),
    "zero-truncated Poisson": ("t**x/(factorial(x)*(exp(t)-1))", ("1", "oo"), POSITIVE),
    "zero-truncated Poisson, other clothes": (
        "exp(-t)*t**x/(factorial(x)*(1-exp(-t)))",
        ("1", "oo"),
        POSITIVE,
    ),
    "Poisson without 0 and 1": ("exp(-t)*t**x/(factorial(x)*(1-exp(-t)*(1+t)))", ("2", "oo"), POSITIVE),
    "zero-truncated binomial": ("binomial(5,x)*t**x*(1-t)**(5-x)/(1-(1-t)**5)", ("1", "5"), UNIT),
    "logarithmic series": ("-t**x/(x*log(1-t))", ("1", "oo"), UNIT),
    "zeta": ("x**(-t)/zeta(t)", ("1", "oo"), ("1", "oo")),
    "Borel": ("exp(-t*x)*(t*x)**(x-1)/factorial(x)", ("1", "oo"), UNIT),
    "Borel-Tanner": ("2*exp(-t*x)*t**(x-2)*x**(x-3)/factorial(x-2)", ("2", "oo"), UNIT),
    "generalised Poisson": ("t*(t+x/2)**(x-1)*exp(-t-x/2)/factorial(x)", HALF, POSITIVE),
    "Skellam": ("exp(-t-2)*(t/2)**(x/2)*besseli(x,2*sqrt(2*t))", LINE, POSITIVE),
    "Skellam, Abs": ("exp(-t-2)*(t/2)**(x/2)*besseli(Abs(x),2*sqrt(2*t))", LINE, POSITIVE),
    "discrete Laplace": ("(1-t)/(1+t)*t**Abs(x)", LINE, UNIT),
    "hypergeometric": ("binomial(7,x)*binomial(5,4-x)/binomial(12,4)", ("0", "4"), POSITIVE),
    "size-biased Poisson": ("x*exp(-t)*t**(x-1)/factorial(x)", ("1", "oo"), POSITIVE),
    "Bessel": ("t**x/(factorial(x)**2*besseli(0,2*sqrt(t)))", HALF, POSITIVE),
    "even Poisson": ("t**(2*x)/factorial(2*x)/cosh(t)", HALF, POSITIVE),
    "Yule": ("t*beta(x,t+1)", ("1", "oo"), POSITIVE),
    "Sibuya": ("t*gamma(x-t)/(gamma(1-t)*factorial(x))", ("1", "oo"), UNIT),
    "polylogarithm": ("t**x*x**(-3)/polylog(3,t)", ("1", "oo"), UNIT),
    "mixture": ("exp(-t)*t**x/factorial(x)/3+Rational(2,3)*exp(-2*t)*(2*t)**x/factorial(x)", HALF, POSITIVE),
    "cut geometric": ("t**x*(1-t)/(1-t**5)", ("0", "4"), UNIT),
    "beta-binomial": ("binomial(6,x)*beta(x+t,8-x)/beta(t,2)", ("0", "6"), POSITIVE),
}
INTEGRALS = {
    "exponential, rate": ("t*exp(-t*x)", HALF, POSITIVE),
    "exponential, mean": ("exp(-x/t)/t", HALF, POSITIVE),
    "exponential, shifted": ("t*exp(-t*(x-2))", ("2", "oo"), POSITIVE),
    "gamma, rate": ("t**Rational(5,2)*x**Rational(3,2)*exp(-t*x)/gamma(Rational(5,2))", HALF, POSITIVE),
    "gamma, scale": ("x**2*exp(-x/t)/(2*t**3)", HALF, POSITIVE),
    "gamma, shape": ("x**(t-1)*exp(-x)/gamma(t)", HALF, POSITIVE),
    "chi-square, scale": ("x**2*exp(-x/(2*t))/(16*t**3)", HALF, POSITIVE),
    "normal, mean": ("exp(-(x-t)**2/(2*4))/sqrt(2*pi*4)", LINE, ANY),
    "normal, canonical": ("exp(t*x-t**2/2)*exp(-x**2/2)/sqrt(2*pi)", LINE, ANY),
    "normal, variance": ("exp(-(x-1)**2/(2*t))/sqrt(2*pi*t)", LINE, POSITIVE),
    "normal, deviation": ("exp(-((x-1)/t)**2/2)/(t*sqrt(2*pi))", LINE, POSITIVE),
    "normal, mean and variance": ("exp(-(x-t)**2/(2*t**2))/sqrt(2*pi*t**2)", LINE, POSITIVE),
    "normal, squared mean": ("exp(-(x-t**2)**2/2)/sqrt(2*pi)", LINE, ANY),
    "log-normal, location": ("exp(-(log(x)-t)**2/2)/(x*sqrt(2*pi))", HALF, ANY),
    "log-normal, spread": ("exp(-(log(x)-2)**2/(2*t**2))/(x*t*sqrt(2*pi))", HALF, POSITIVE),
    "log-normal, ratio": ("exp(-log(x/3)**2/(2*t))/(x*sqrt(2*pi*t))", HALF, POSITIVE),
    "Pareto": ("t*2**t/x**(t+1)", ("2", "oo"), POSITIVE),
    "Pareto, ratio": ("t/2*(2/x)**(t+1)", ("2", "oo"), POSITIVE),
    "Pareto, scale": ("2*t**2/x**3", ("t", "oo"), POSITIVE),
    "Lomax": ("t/3*(1+x/3)**(-t-1)", HALF, POSITIVE),
    "power": ("t*x**(t-1)", UNIT, POSITIVE),
    "power, log": ("exp(t)*x**(exp(t)-1)", UNIT, ANY),
    "power to 3": ("t*x**(t-1)/3**t", ("0", "3"), POSITIVE),
    "Rayleigh": ("x/t**2*exp(-x**2/(2*t**2))", HALF, POSITIVE),
    "Maxwell": ("sqrt(2/pi)*x**2*exp(-x**2/(2*t**2))/t**3", HALF, POSITIVE),
    "Weibull, scale": ("(Rational(3,2)/t)*sqrt(x/t)*exp(-(x/t)**Rational(3,2))", HALF, POSITIVE),
    "Weibull, shape": ("t*x**(t-1)*exp(-x**t)", HALF, POSITIVE),
    "half-normal": ("sqrt(2/(pi*t))*exp(-x**2/(2*t))", HALF, POSITIVE),
    "Laplace, scale": ("exp(-Abs(x-3)/t)/(2*t)", LINE, POSITIVE),
    "Laplace, location": ("exp(-Abs(x-t))/2", LINE, ANY),
    "Levy": ("sqrt(t/(2*pi*x**3))*exp(-t/(2*x))", HALF, POSITIVE),
    "inverse gamma": ("t**3*x**(-4)*exp(-t/x)/2", HALF, POSITIVE),
    "inverse Gaussian, mean": ("sqrt(3/(2*pi*x**3))*exp(-3*(x-t)**2/(2*t**2*x))", HALF, POSITIVE),
    "inverse Gaussian, shape": ("sqrt(t/(2*pi*x**3))*exp(-t*(x-2)**2/(8*x))", HALF, POSITIVE),
    "von Mises": ("exp(t*cos(x))/(2*pi*besseli(0,t))", ("-pi", "pi"), POSITIVE),
    "von Mises, turned": ("exp(t*cos(x-1))/(2*pi*besseli(0,t))", ("0", "2*pi"), POSITIVE),
    "beta, first": ("x**(t-1)*(1-x)**2/beta(t,3)", UNIT, POSITIVE),
    "beta, second": ("gamma(t+2)/gamma(t)*x*(1-x)**(t-1)", UNIT, POSITIVE),
    "beta, symmetric": ("(x*(1-x))**(t-1)*gamma(2*t)/gamma(t)**2", UNIT, POSITIVE),
    "beta on (-1, 1)": ("gamma(2*t)/gamma(t)**2/2**(2*t-1)*(1-x**2)**(t-1)", ("-1", "1"), POSITIVE),
    "power, mirrored": ("t*(-x)**(t-1)", ("-1", "0"), POSITIVE),
    "arcsine": ("1/(pi*sqrt(x*(1-x)))", UNIT, POSITIVE),
    "Kumaraswamy, second": ("2*t*x*(1-x**2)**(t-1)", UNIT, POSITIVE),
    "Kumaraswamy, first": ("2*t*x**(t-1)*(1-x**t)", UNIT, POSITIVE),
    "Topp-Leone": ("2*t*(1-x)*(2*x-x**2)**(t-1)", UNIT, POSITIVE),
    "hyperbolic secant": ("exp(t*x)*cos(t)/(2*cosh(pi*x/2))", LINE, ("-pi/2", "pi/2")),
    "truncated normal": (
        "exp(-(x-t)**2/2)/(sqrt(pi/2)*(erf((2-t)/sqrt(2))-erf((-1-t)/sqrt(2))))",
        ("-1", "2"),
        ANY,
    ),
    "truncated exponential": ("t*exp(-t*x)/(1-exp(-2*t))", ("0", "2"), POSITIVE),
    "truncated gamma": ("x*exp(-t*x)*t**2/(1-exp(-3*t)*(1+3*t))", ("0", "3"), POSITIVE),
    "Cauchy, location": ("1/(pi*(1+(x-t)**2))", LINE, ANY),
    "Cauchy, scale": ("t/(pi*(t**2+x**2))", LINE, POSITIVE),
    "logistic": ("exp(-(x-t))/(1+exp(-(x-t)))**2", LINE, ANY),
    "Student": ("Rational(3,8)*(1+(x-t)**2/4)**(-Rational(5,2))", LINE, ANY),
    "normal mixture": ("exp(-x**2/2)/(2*sqrt(2*pi)) + exp(-(x-t)**2/2)/(2*sqrt(2*pi))", LINE, ANY),
    "uniform": ("1/t", ("0", "t"), POSITIVE),
    "uniform, centre": ("1", ("t - 1/2", "t + 1/2"), ANY),
    "exponential, start": ("exp(-(x-t))", ("t", "oo"), ANY),
    "Gumbel, location": ("exp(-(x-t)-exp(-(x-t)))", LINE, ANY),
    "Gumbel, scale": ("exp(-x/t-exp(-x/t))/t", LINE, POSITIVE),
    "Gompertz": ("t*exp(x)*exp(-t*(exp(x)-1))", HALF, POSITIVE),
    "log-gamma": ("t**2*log(x)*x**(-t-1)", ("1", "oo"), POSITIVE),
    "Burr": ("2*t*x/(1+x**2)**(t+1)", HALF, POSITIVE),
    "Lindley": ("t**2/(1+t)*(1+x)*exp(-t*x)", HALF, POSITIVE),
    "linear": ("(1+t*x)/2", ("-1", "1"), ("-1", "1")),
    "quadratic": ("6*x*(1-x)*(1+t*(2*x-1))", UNIT, ("-1", "1")),
}
ZOO = {
    **{name: ("integers", *entry) for name, entry in SUMS.items()},
    **{name: ("reals", *entry) for name, entry in INTEGRALS.items()},
}


def question(kind: str, text: str, support: tuple[str, str], space: tuple[str, str]) -> Mass:
    low, high = (sp.sympify(end) for end in space)
    t = sp.Symbol("t", positive=True) if low.is_nonnegative else T
    lower, upper = (sp.sympify(end, locals={"t": t}) for end in support)
    assumptions = {"integer": True} if kind == "integers" else {"real": True}
    if lower.is_positive or (kind == "reals" and lower.is_nonnegative):
        assumptions["positive"] = True
    x = sp.Symbol("x", **assumptions)
    return Mass(sp.sympify(text, locals={"x": x, "t": t}), x, t, kind, (lower, upper), (low, high))


def answer(kind: str, *entry: object) -> TotalMass:
    return decide(question(kind, *entry))  # type: ignore[arg-type]


@pytest.mark.parametrize("name", ZOO)
def test_zoo_is_proved(name: str) -> None:
    found = answer(*ZOO[name])
    assert found.step.grade is Grade.PROVED, found.step
    assert found.step.reason


@pytest.mark.parametrize("name", ZOO)
def test_a_changed_constant_is_refuted_with_the_true_total(name: str) -> None:
    kind, text, support, space = ZOO[name]
    found = answer(kind, f"Rational(7, 5)*({text})", support, space)
    assert found.step.grade is Grade.REFUTED, found.step
    assert found.value == sp.Rational(7, 5)
    assert "1.4" in found.step.witness


@pytest.mark.parametrize(
    ("kind", "text", "support", "space", "total"),
    [
        ("integers", "exp(-2*t)*t**x/factorial(x)", HALF, POSITIVE, "exp(-t)"),
        ("integers", "exp(-t/2)*t**x/factorial(x)", HALF, POSITIVE, "exp(t/2)"),
        ("integers", "(1-t)**x", HALF, UNIT, "1/t"),
        ("integers", "t**x/factorial(x)", ("1", "oo"), POSITIVE, "exp(t)-1"),
        ("integers", "x**(-t)", ("1", "oo"), ("1", "oo"), "zeta(t)"),
        ("integers", "x**(-t)/zeta(t)", ("2", "oo"), ("1", "oo"), "zeta(t,2)/zeta(t)"),
        ("reals", "exp(-x**2/2)/sqrt(pi)", LINE, ANY, "sqrt(2)"),
        ("reals", "exp(-t*x)", HALF, POSITIVE, "1/t"),
        ("reals", "exp(-x/t)*t", HALF, POSITIVE, "t**2"),
        ("reals", "exp(-(x-1)**2/(2*t**2))/sqrt(2*pi*t)", LINE, POSITIVE, "sqrt(t)"),
        ("reals", "x**(t-1)*(1-x)", UNIT, POSITIVE, "1/(t*(t+1))"),
        ("reals", "exp(t*cos(x))", ("-pi", "pi"), POSITIVE, "2*pi*besseli(0,t)"),
        ("reals", "exp(-t*x**2)*x**4", LINE, POSITIVE, "3*sqrt(pi)/(4*t**Rational(5,2))"),
        ("reals", "exp(-t*x - 1/x)/x", HALF, POSITIVE, "2*besselk(0,2*sqrt(t))"),
    ],
)
def test_the_true_total_is_shown(
    kind: str, text: str, support: tuple[str, str], space: tuple[str, str], total: str
) -> None:
    asked = question(kind, text, support, space)
    found = decide(asked)
    assert found.step.grade is Grade.REFUTED, found.step
    assert found.value is not None
    expected = sp.sympify(total, locals={"t": asked.t})
    assert is_one(found.value / expected, asked.domain)


@pytest.mark.parametrize(
    ("kind", "text", "support", "space"),
    [
        ("integers", "t*(1+t)**x", HALF, POSITIVE),
        ("integers", "x**(-t)/zeta(t)", ("1", "oo"), POSITIVE),
        ("integers", "1/x", ("1", "oo"), POSITIVE),
        ("reals", "x**(t-1)*exp(x)", HALF, POSITIVE),
        ("reals", "x**(t-2)*exp(-x)/gamma(t-1)", HALF, POSITIVE),
        ("reals", "t*exp(t*x)", HALF, POSITIVE),
        ("reals", "1/x", ("1", "oo"), POSITIVE),
        ("reals", "1/(x+1)", HALF, POSITIVE),
        ("reals", "exp(t*x)/cosh(x)", LINE, ANY),
    ],
)
def test_divergence_is_refuted(
    kind: str, text: str, support: tuple[str, str], space: tuple[str, str]
) -> None:
    found = answer(kind, text, support, space)
    assert found.step.grade is Grade.REFUTED, found.step
    assert "diverges" in found.step.statement
    assert "where" in found.step.witness


@pytest.mark.parametrize("text", ["exp(-x**4 - t*x**2)", "2/(exp(x**4) + t*exp(x**2))"])
def test_without_a_closed_form_nothing_is_called_proved(text: str) -> None:
    found = answer("reals", text, LINE, POSITIVE)
    assert found.step.grade is not Grade.PROVED


def test_unknown_form_is_checked_numerically() -> None:
    # The integral of (1 + sin(x**3)) exp(-x**2)/sqrt(pi) is 1: the second part is odd. No rule knows it.
    found = answer("reals", "(1 + t*sin(x**3))*exp(-x**2)/sqrt(pi)", LINE, ("-1", "1"))
    assert found.step.grade is Grade.CHECKED, found.step
    assert "digits" in found.step.statement


def test_unknown_form_above_one_is_refuted() -> None:
    found = answer("reals", "(2 + t*sin(x**3))*exp(-x**2)/sqrt(pi)", LINE, ("-1", "1"))
    assert found.step.grade is Grade.REFUTED, found.step


def test_unknown_form_below_one_is_left_open() -> None:
    found = answer("reals", "(1/2 + t/2*sin(x**3))*exp(-x**2)/sqrt(pi)", LINE, ("-1", "1"))
    assert found.step.grade is Grade.UNDECIDED, found.step
    assert "0.5" in found.step.witness


def test_growth_without_end_is_refuted() -> None:
    found = answer("reals", "t*exp(-t*x)", LINE, POSITIVE)
    assert found.step.grade is Grade.REFUTED, found.step


def test_discrete_unknown_form_is_checked_numerically() -> None:
    # The sum of exp(-pi x**2) over the integers is pi**(1/4)/Gamma(3/4) (Whittaker and Watson, from memory).
    found = answer("integers", "exp(-pi*x**2)*gamma(Rational(3,4))/pi**Rational(1,4)", LINE, POSITIVE)
    assert found.step.grade is Grade.CHECKED, found.step


ADDED_UP = (
    "negative binomial, real size", "zero-truncated Poisson", "logarithmic series", "Borel", "Borel-Tanner",
    "generalised Poisson", "Skellam", "even Poisson", "beta-binomial", "polylogarithm",
    "log-normal, ratio", "Weibull, scale", "inverse Gaussian, shape", "von Mises, turned", "Topp-Leone",
    "hyperbolic secant", "truncated normal", "Student", "Lindley",
)  # fmt: skip


@pytest.mark.parametrize("name", ADDED_UP)
def test_totals_agree_with_mpmath(name: str) -> None:
    """Mpmath adds the entry up at the first sample, by code that shares nothing with ours."""
    kind, text, support, space = ZOO[name]
    asked = question(kind, text, support, space)
    at = asked.samples[0]
    mp = mpmath.MPContext()
    f = sp.lambdify(asked.x, asked.f.subs(asked.t, at), "mpmath")
    if kind == "integers":
        low = int(asked.support[0]) if asked.support[0].is_finite else -30
        high = int(min(asked.support[1], 120))
        total = mp.fsum(f(mpmath.mpf(k)) for k in range(low, high + 1))
    else:
        ends = [mpmath.mpf(str(sp.N(end, 20)).replace("oo", "inf")) for end in asked.support]
        inside = [m for m in (-3, 0, 1, 3, 10) if ends[0] < m < ends[1]]
        total = mpmath.quad(f, [ends[0], *inside, ends[1]])
    assert abs(total - 1) < 1e-8


def test_kernel_normaliser() -> None:
    asked = question("integers", "binomial(10,x)*binomial(8,5-x)*t**x", ("0", "5"), POSITIVE)
    assert normaliser(asked, None).step.grade is Grade.PROVED
    negative = question("integers", "(x-1)*t**x", ("0", "5"), POSITIVE)
    assert normaliser(negative, None).step.grade is Grade.UNDECIDED


def test_table_normaliser() -> None:
    asked = question("integers", "t**x", ("0", "2"), POSITIVE)
    assert normaliser(asked, (1, 0, 3)).step.grade is Grade.PROVED
    assert normaliser(asked, (0, 0, 0)).step.grade is Grade.UNDECIDED
    assert normaliser(asked, (1, -1, 3)).step.grade is Grade.UNDECIDED


def test_infinite_kernel_needs_convergence() -> None:
    assert normaliser(question("integers", "t**x", HALF, UNIT), None).step.grade is Grade.PROVED
    assert normaliser(question("integers", "t**x", HALF, POSITIVE), None).step.grade is Grade.UNDECIDED
