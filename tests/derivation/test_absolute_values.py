"""Statistics with absolute values: the law against mpmath's integral over {T <= v}, and what stays open."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

import mpmath
import pytest
import sympy as sp

from verify.arithmetic.ball import balls
from verify.derivation.cumulants import impossible_variance
from verify.derivation.derive import derive
from verify.derivation.monotone_pieces import monotone_pieces
from verify.derivation.smooth_parts import smooth_parts, smooth_slope, zeros_between
from verify.problem.density import Density

X = sp.Symbol("x", real=True)
THIRD = mpmath.mpf(1) / 3

Intervals = list[tuple[mpmath.mpf, mpmath.mpf]]
CASES: dict[str, tuple[str, str, tuple[str, ...], Callable[[mpmath.mpf], Intervals]]] = {
    "Laplace, cut": (
        "t*exp(-t*abs(x))/(2-exp(-t)-exp(-2*t))",
        "reals in (-1, 2)",
        ("1/2", "3/2"),
        lambda v: [(-min(v, 1), 0), (0, v)],
    ),
    "corner off the middle": (
        "t*exp(-t*abs(x-1/3))/(2-exp(-t/3)-exp(-2*t/3))",
        "reals in (0, 1)",
        ("1/5", "1/2"),
        lambda v: [(max(THIRD - v, 0), THIRD), (THIRD, THIRD + v)],
    ),
    "root of a square": (
        "t*exp(-t*sqrt((2*x-3)**2))*2/(2-exp(-3*t)-exp(-t))",
        "reals in (0, 2)",
        ("1/2", "2"),
        lambda v: [((3 - v) / 2, 1.5), (1.5, min((3 + v) / 2, 2))],
    ),
    "cube": (
        "abs(x)**2*exp(-t*abs(x)**3)*3*t/(2-exp(-t)-exp(-8*t))",
        "reals in (-1, 2)",
        ("1/2", "3"),
        lambda v: [(-min(mpmath.cbrt(v), 1), 0), (0, mpmath.cbrt(v))],
    ),
    "cube, corner off 0": (
        "t*abs(x-1/2)**2*exp(-t*abs(x-1/2)**3)*3/(2-exp(-27*t/8)-exp(-t/8))",
        "reals in (0, 2)",
        ("1/10", "3"),
        lambda v: [(max(0.5 - mpmath.cbrt(v), 0), 0.5), (0.5, 0.5 + mpmath.cbrt(v))],
    ),
    "signed square": (
        "2*t*abs(x)*exp(t*x*abs(x))/(exp(4*t)-exp(-t))",
        "reals in (-1, 2)",
        ("-1/2", "3"),
        lambda v: [(-1, 0), (0, mpmath.sqrt(v))] if v > 0 else [(-1, -mpmath.sqrt(-v))],
    ),
    "odd power": (
        "3*t*x**2*exp(t*x**3)/(exp(8*t)-exp(-t))",
        "reals in (-1, 2)",
        ("-1/2", "3"),
        lambda v: [(-1, 0), (0, mpmath.cbrt(v))] if v > 0 else [(-1, -mpmath.cbrt(-v))],
    ),
    "logarithm, far at 0": (
        "(t+1)*abs(x)**t/(1+2**(t+1))",
        "reals in (-1, 2)",
        ("-1", "1"),
        lambda v: [(-min(mpmath.exp(v / 2), 1), 0), (0, mpmath.exp(v / 2))],
    ),
    "nested": (
        "t*exp(-t*abs(abs(x)-1))/(4-4*exp(-t))",
        "reals in (-2, 2)",
        ("1/3",),
        lambda v: [(-1 - v, -1), (-1, -1 + v), (1 - v, 1), (1, 1 + v)],
    ),
    "square of a difference": (
        "exp(-t*(abs(x)-1)**2)*sqrt(t/pi)/(1+erf(sqrt(t)))",
        "reals",
        ("1/4", "4"),
        lambda v: [(-1 - mpmath.sqrt(v), min(mpmath.sqrt(v) - 1, 0)), (max(1 - mpmath.sqrt(v), 0), 1 + mpmath.sqrt(v))],
    ),
    "irrational corner": (
        "t*exp(-t*abs(x-sqrt(2)))/(2-exp(-t*sqrt(2))-exp(-t*(2-sqrt(2))))",
        "reals in (0, 2)",
        ("1/2", "1"),
        lambda v: [(mpmath.sqrt(2) - v, mpmath.sqrt(2)), (mpmath.sqrt(2), min(mpmath.sqrt(2) + v, 2))],
    ),
    "power 3/2": (
        "3*t*sqrt(abs(x))/2*exp(-t*abs(x)**(3/2))/(2-exp(-t)-exp(-t*2**(3/2)))",
        "reals in (-1, 2)",
        ("1/2", "2"),
        lambda v: [(-min(v ** (2 * THIRD), 1), 0), (0, v ** (2 * THIRD))],
    ),
    "logarithm of a corner": (
        "t*(1+abs(x))**(-t-1)/(2-2**(-t)-3**(-t))",
        "reals in (-1, 2)",
        ("1/2", "1"),
        lambda v: [(-min(mpmath.exp(v) - 1, 1), 0), (0, mpmath.exp(v) - 1)],
    ),
}


def density_of(formula: str, support: str) -> Density:
    return Density(formula, variable="x", support=support, parameter="t", space="t > 0")


@pytest.mark.parametrize("name", list(CASES))
def test_the_law_agrees_with_mpmath(name: str) -> None:
    mpmath.mp.dps = 25
    formula, support, places, below = CASES[name]
    density = density_of(formula, support)
    family = derive(density).family
    assert family is not None
    law, f = (
        family.at(Fraction(3, 2), 1),
        sp.lambdify(density.x, density.expr.subs(density.t, sp.Rational(3, 2)), "mpmath"),
    )
    for place in map(Fraction, places):
        wanted = sum(mpmath.quad(f, ends) for ends in below(mpmath.mpf(place.numerator) / place.denominator))
        with balls(100) as A:
            v = A.real(place)
            found, above = law.cdf(A, v), law.sf(A, v)
            assert (found + above - 1).contains(0)
            assert found.rad() < 1e-20
            shown = found.str(25, radius=False)
        assert abs(mpmath.mpf(shown) - wanted) < mpmath.mpf(10) ** -15


@pytest.mark.parametrize(
    ("formula", "support", "reason"),
    [
        ("t*exp(-t*(x+abs(x))/2)/(1+t-exp(-2*t))", "reals in (-1, 2)", "T = 0 all over (-1, 0)"),  # an atom at 0
        ("exp(-t*abs(x**2-1))/2", "reals in (0, 2)", "give T the variance 0"),  # the mass is not 1
        ("exp(-t*abs(tan(x)))/(t+1)", "reals in (-pi/2, pi/2)", "not a real, finite number"),
    ],
)
def test_what_is_not_shown_stays_open_in_words(formula: str, support: str, reason: str) -> None:
    derivation = derive(density_of(formula, support))
    assert derivation.family is None
    (law,) = (step for step in derivation.steps if step.name == "law")
    assert law.grade.value == "undecided"
    assert reason in law.reason


def test_parts_cover_the_interval_and_hold_no_absolute_value() -> None:
    parts = smooth_parts(sp.Abs(sp.Abs(X) - 1) + X * sp.sign(X), X, sp.Integer(-2), sp.Integer(3))
    assert [(low, high) for low, high, _ in parts] == [(-2, -1), (-1, 0), (0, 1), (1, 3)]
    assert [smooth for *_, smooth in parts] == [-2 * X - 1, 1, 1, 2 * X - 1]


def test_a_corner_that_is_not_found_is_said() -> None:
    inside = sp.cos(X) - X
    assert "changes its sign" in smooth_parts(sp.Abs(inside), X, sp.Integer(0), sp.Integer(1))
    assert zeros_between(inside, X, sp.Integer(0), sp.Integer(1)) is None
    assert isinstance(monotone_pieces(sp.Abs(inside), X, sp.Integer(0), sp.Integer(1)), str)


def test_no_slope_holds_a_delta_function() -> None:
    assert smooth_slope(X**2 * sp.sign(X), X) == 2 * X * sp.sign(X)


def test_a_variance_that_cannot_be_one() -> None:
    t = sp.Symbol("t", positive=True)
    assert impossible_variance(sp.S.Zero, t, [sp.Integer(1)])
    assert impossible_variance(1 - t, t, [sp.Rational(1, 2), sp.Integer(2)]).endswith("at t = 2: the mass is not 1")
    assert impossible_variance(1 / t, t, [sp.Rational(1, 2), sp.Integer(2)]) == ""
