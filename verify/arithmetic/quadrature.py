"""Rigorous quadrature: integrals of formulas, enclosed.

Source: F. Johansson, "Numerical integration in arbitrary-precision ball arithmetic", ICMS 2018 (adaptive
bisection with Gauss-Legendre rules whose error is bounded on a complex ellipse).
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from flint import acb, arb

from verify.arithmetic.compiled import compiled
from verify.arithmetic.complex_ball import ComplexBalls

Ball = Any

EVALUATIONS = 30_000
"""Most evaluations of one integrand; beyond, the enclosure is returned as wide as it is."""


def integrand(expr: Any, variable: str, values: Mapping[str, Ball], prec: int) -> Callable[[Any, bool], Any]:
    """Return a formula as a function that an integrator may trust: it honours the analytic flag.

    Parameters
    ----------
    expr : SymPy expression
        The formula.
    variable : str
        The variable of integration.
    values : mapping
        Balls for the other symbols.
    prec : int
        Bits.
    """
    fixed = {name: acb(value) for name, value in values.items()}
    plain, guarded = (
        compiled(expr, ComplexBalls(prec, analytic=analytic), variable, fixed) for analytic in (False, True)
    )
    return lambda z, analytic: guarded(z) if analytic else plain(z)


def integral(
    function: Callable[[Any, bool], Any],
    low: Ball,
    high: Ball,
    *,
    tolerance: int | None = None,
    evaluations: int = EVALUATIONS,
) -> Ball:
    """Return the integral of a real function between two real ends.

    Parameters
    ----------
    function : callable
        As :func:`integrand` makes it.
    low, high : arb
        The ends, best exact.
    tolerance : int, optional
        Absolute error of 2**-tolerance is enough.
    evaluations : int
        Most evaluations of the function.

    Examples
    --------
    >>> from verify.arithmetic.ball import balls, to_enclosure
    >>> with balls(64):
    ...     print(to_enclosure(integral(lambda x, flag: x.sqrt(analytic=flag), arb(1), arb(4))).text(12))
    4.66666666666
    """
    return path_integral(function, acb(low), acb(high), tolerance=tolerance, evaluations=evaluations).real


def path_integral(
    function: Callable[[Any, bool], Any],
    start: Any,
    end: Any,
    *,
    tolerance: int | None = None,
    evaluations: int = EVALUATIONS,
) -> Any:
    """Return the integral of a complex function along a straight line."""
    options: dict[str, Any] = {"eval_limit": evaluations, "depth_limit": 10_000}
    if tolerance is not None:
        options["abs_tol"] = arb(2) ** -tolerance
    return acb.integral(function, start, end, **options)
