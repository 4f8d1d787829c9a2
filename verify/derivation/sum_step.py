"""The step ``law of the sum``: what is known of the law of several observations where it is not enclosed."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

from verify.derivation.ledger import LAW_OF_THE_SUM, Grade, Step
from verify.errors import UndecidedError
from verify.laws.base import Law
from verify.laws.two_routes import LEAST_BITS, SumByTwoRoutes

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.derivation.family import LawFamily
    from verify.problem.numbers import Exact

ROUTES = (
    "two numerical inversions are compared, one of the derived log normaliser and one of the density itself, along "
    "different contours; neither bounds its error (Abate and Whitt 1992)"
)


def sum_step(laws: Sequence[Law], prec: int) -> Step | None:
    """Return the step for some laws of a sum, or None where all of them are enclosed.

    Parameters
    ----------
    laws : sequence of Law
        The law of the sum at some parameter values.
    prec : int
        Bits at which numbers are asked of them.
    """
    checked = [law for law in laws if isinstance(law, SumByTwoRoutes)]
    if not checked:
        return None
    digits = min(law.shared_digits(prec) for law in checked)
    places = ", ".join(f"{law.one.parameter} = {law.at}" for law in checked)
    statement = f"the law of the sum of {checked[0].n} is known to the {digits} digits two routes share at {places}"
    return Step(LAW_OF_THE_SUM, Grade.CHECKED, statement, f"{checked[0].why}; {ROUTES}")


def open_or_checked(family: LawFamily, limits: Sequence[Exact], n: int) -> Step | None:
    """Return the step for the sum of n at the limits of a hypothesis; undecided where no route leads to its law."""
    try:
        return sum_step([family.at(limit, n) for limit in limits], LEAST_BITS)
    except UndecidedError as error:
        return Step(LAW_OF_THE_SUM, Grade.UNDECIDED, f"the law of the sum of {n} stayed open", str(error))


def with_sum_step(derivation: Derivation, laws: Sequence[Law], prec: int) -> Derivation:
    """Return the derivation with this step at its end where one is due, and without one for another number."""
    step, others = sum_step(laws, prec), tuple(known for known in derivation.steps if known.name != LAW_OF_THE_SUM)
    if step is None and others == derivation.steps:
        return derivation
    return replace(derivation, steps=others if step is None else (*others, step))
