"""From the variance function to the law of one T, with its affine map.

| v2, v1 | law of one T |
|---|---|
| v2 = 0, v1 = 0 | normal, variance v0 |
| v2 = 0, v1 != 0 | v1 Poisson - v0/v1 |
| v2 < 0 | affine binomial, N = -1/v2 |
| v2 > 0, v1**2 = 4 v0 v2 | gamma of shape 1/v2 or its mirror image, shifted |
| v2 > 0, v1**2 > 4 v0 v2 | affine negative binomial, r = 1/v2 |
| v2 > 0, v1**2 < 4 v0 v2 | generalised hyperbolic secant, r = 1/v2 |

Source: Morris 1982, section 4 and Table 1; V(m) = (m - b)**3 / lambda: inverse Gaussian, Letac and Mora 1990.
The affine maps follow from V_(aY+b)(m) = a**2 V_Y((m - b)/a).
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.family import LawFamily
from verify.derivation.positivity import Domain
from verify.derivation.signs import sign_of
from verify.derivation.variance_function import Cube, Quadratic
from verify.derivation.zero import is_zero, normal
from verify.laws.base import Law
from verify.laws.binomial import Binomial
from verify.laws.gamma import Gamma
from verify.laws.inverse_gaussian import InverseGaussian
from verify.laws.negative_binomial import NegativeBinomial
from verify.laws.normal import Normal
from verify.laws.poisson import Poisson
from verify.problem.numbers import as_exact

CLOSED_FORMS = (Poisson, Binomial, NegativeBinomial, Gamma, Normal, InverseGaussian)
"""The laws that the table names."""


@dataclass(frozen=True)
class Named:
    """What the table says: a family in closed form, or why there is none."""

    family: LawFamily | None
    word: str


def name_law(variance: Quadratic | Cube, t: Symbol, domain: Domain) -> Named:
    """Return the law that has this variance function; its ``word`` says which row of the table it is.

    Examples
    --------
    >>> t = sp.Symbol("t", positive=True)
    >>> variance = Quadratic(mean=t, v0=sp.Integer(0), v1=sp.Integer(1), v2=sp.Integer(0))
    >>> law = name_law(variance, t, Domain({t: (sp.Integer(0), sp.oo)}))
    >>> str(law.family), law.word
    ('Poisson(mean = t)', 'Poisson')
    """
    if isinstance(variance, Cube):
        return _inverse_gaussian(variance, t, domain)
    v2 = _sign(variance.v2)
    if v2 is None:
        return Named(None, f"the sign of v2 = {variance.v2} stayed open")
    if v2 == 0:
        return _linear(variance, t)
    if v2 < 0:
        return _binomial(variance, t)
    discriminant = _sign(normal(variance.v1**2 - 4 * variance.v0 * variance.v2))
    if discriminant is None:
        return Named(None, "whether the variance function has two roots stayed open")
    if discriminant < 0:
        return Named(None, "generalised hyperbolic secant")
    return _gamma(variance, t, domain) if discriminant == 0 else _negative_binomial(variance, t, domain)


def _family(law: type[Law], t: Symbol, scale: Expr, shift: Expr, *parameters: Expr) -> Named:
    values = [_plain(parameter) for parameter in parameters]
    return Named(LawFamily(law(*values), as_exact(scale), as_exact(shift), t), law.name)


def _plain(parameter: Expr) -> Expr | Fraction:
    if parameter.free_symbols:
        return sp.factor(normal(parameter))
    return as_exact(sp.simplify(parameter))


def _sign(number: Expr) -> int | None:
    if is_zero(number):
        return 0
    return 1 if number.is_positive else -1 if number.is_negative else None


def _linear(v: Quadratic, t: Symbol) -> Named:
    if _sign(v.v1) == 0:
        return _family(Normal, t, sp.S.One, sp.S.Zero, v.mean, v.v0)
    shift = -v.v0 / v.v1
    return _family(Poisson, t, v.v1, shift, (v.mean - shift) / v.v1)


def _roots(v: Quadratic) -> tuple[Expr, Expr]:
    root = sp.sqrt(normal(v.v1**2 - 4 * v.v0 * v.v2))
    first, second = (sp.simplify((-v.v1 + s * root) / (2 * v.v2)) for s in (1, -1))
    return (first, second) if (second - first).is_positive else (second, first)


def _binomial(v: Quadratic, t: Symbol) -> Named:
    trials = -1 / v.v2
    if not trials.is_Integer:
        return Named(None, f"a binomial variance function with N = {trials}, which is not a whole number")
    low, high = _roots(v)
    return _family(Binomial, t, (high - low) / trials, low, trials, (v.mean - low) / (high - low))


def _gamma(v: Quadratic, t: Symbol, domain: Domain) -> Named:
    root = normal(-v.v1 / (2 * v.v2))
    side = sign_of(normal(v.mean - root), domain)
    if not side:
        return Named(None, f"on which side of {root} the mean {v.mean} lies stayed open")
    return _family(Gamma, t, sp.Integer(side), root, 1 / v.v2, side / (v.v2 * (v.mean - root)))


def _negative_binomial(v: Quadratic, t: Symbol, domain: Domain) -> Named:
    low, high = _roots(v)
    size = 1 / v.v2
    if sign_of(normal(v.mean - high), domain) == 1:
        scale, shift = (high - low) * v.v2, high
    elif sign_of(normal(v.mean - low), domain) == -1:
        scale, shift = -(high - low) * v.v2, low
    else:
        return Named(None, f"on which side of {low} and {high} the mean {v.mean} lies stayed open")
    mean = (v.mean - shift) / scale
    return _family(NegativeBinomial, t, scale, shift, size, size / (size + mean))


def _inverse_gaussian(v: Cube, t: Symbol, domain: Domain) -> Named:
    side = sign_of(normal(v.mean - v.root), domain)
    if not side:
        return Named(None, f"on which side of {v.root} the mean {v.mean} lies stayed open")
    return _family(InverseGaussian, t, sp.Integer(side), v.root, side * (v.mean - v.root), side / v.c)
