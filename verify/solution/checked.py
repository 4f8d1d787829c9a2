"""Laws that are checked numerically, not enclosed: no more digits are promised than two routes share."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager

from verify.errors import UndecidedError
from verify.laws.base import Law
from verify.laws.two_routes import SumByTwoRoutes
from verify.solution.precision import bits_for

MARGIN_BITS = 32
"""Bits beyond the digits asked for at which the routes are compared first."""

HELP = "ask for fewer digits, or for one observation, which is enclosed"


@contextmanager
def within_shared_digits(laws: Sequence[Law], digits: int) -> Iterator[None]:
    """Refuse more digits than the laws have, before they are searched and when the search does not settle.

    Raises
    ------
    UndecidedError
        With the number of digits that the two routes share.
    """
    checked = [law for law in laws if isinstance(law, SumByTwoRoutes)]
    shared = min((law.shared_digits(bits_for(digits) + MARGIN_BITS) for law in checked), default=digits)
    if shared < digits:
        raise UndecidedError(f"the two routes to the law of the sum share {shared} digits, not {digits}: {HELP}")
    try:
        yield
    except UndecidedError as error:
        if not checked:
            raise
        raise UndecidedError(f"{error}; the two routes to the law of the sum share {shared} digits: {HELP}") from error
