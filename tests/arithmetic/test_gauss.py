"""Gauss-Legendre panels: against integrals in closed form, with honest error bounds."""

from fractions import Fraction
from typing import Any

import pytest
from flint import acb, arb

from verify.arithmetic.ball import balls
from verify.arithmetic.gauss import BOUND_BITS, Panel, best_panel, panels_along


def exponential(z: Any) -> tuple[Any, Any]:
    """A bound of abs(exp(3 z)) over a box."""
    return (3 * z.real).exp().upper(), arb(1)


def reciprocal(z: Any) -> tuple[Any, Any]:
    """A bound of abs(1/z) over a box: not finite where the box holds the pole."""
    least = z.abs_lower()
    return (1 / least if least > 0 else arb("inf")), arb(1)


def added(panels: list[Panel], function: Any, prec: int) -> tuple[Any, Any]:
    """The rule's sum over all panels, and the bound of its error."""
    total, slack = acb(0), arb(0)
    for panel in panels:
        nodes, share = panel.rule(prec)
        slack += share * panel.bound(lambda box: arb(1))
        with balls(prec):
            total += sum((weight * function(place) for place, weight in nodes), acb(0))
    return total, slack


@pytest.mark.parametrize("toward", [acb(1), acb(0, 1), acb(-1, 1)])
def test_an_exponential_is_integrated_to_the_goal(toward: Any) -> None:
    start = acb(Fraction(1, 4).numerator) / 4
    with balls(BOUND_BITS):
        panels = panels_along(exponential, start, toward, arb(5), arb(1), 150)
    assert len(panels) < 12
    with balls(200):
        total, slack = added(panels, lambda z: (3 * z).exp(), 192)
        wanted = ((3 * (start + 5 * toward)).exp() - (3 * start).exp()) / 3
        assert slack < arb(2) ** -146
        assert abs(total - wanted) < slack + arb(2) ** -150


def test_panels_keep_away_from_a_pole() -> None:
    """The integral of 1/z from 1/16 to 64 is 10 log 2."""
    with balls(BOUND_BITS):
        panels = panels_along(reciprocal, acb(1) / 16, acb(1), arb(64) - arb(1) / 16, arb(1), 100)
    with balls(160):
        total, slack = added(panels, lambda z: 1 / z, 160)
        assert slack < arb(2) ** -95
        assert abs(total.real - 10 * arb(2).log()) < slack + arb(2) ** -140
    assert all(box.real > 0 for panel in panels for box, _ in panel.sizes)


def test_no_panels_where_the_function_is_not_bounded() -> None:
    with balls(BOUND_BITS):
        assert panels_along(reciprocal, acb(-1), acb(1), arb(2), arb(1), 60) == []


def test_the_error_of_a_poor_rule_is_within_its_bound() -> None:
    """Few nodes for a function with a near pole: the error is large, and the bound larger."""
    with balls(BOUND_BITS):
        good = best_panel(reciprocal, acb(1), acb(1), arb(2), 40)
    assert good is not None
    for count in (2, 3, 5, 8):
        poor = Panel(good.middle, good.half, good.rho, count, good.sizes)
        with balls(128):
            total, slack = added([poor], lambda z: 1 / z, 128)
            error = abs(total.real - arb(3).log())
            assert error > 0
            assert error < slack
