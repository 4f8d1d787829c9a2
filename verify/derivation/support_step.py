"""Does the support depend on the parameter?"""

from __future__ import annotations

from verify.derivation.ledger import SUPPORT, Grade, Step
from verify.derivation.points import parameter_points
from verify.problem.density import Density


def support_step(density: Density) -> Step:
    """Return the step ``support``: proved when no end of the support contains the parameter, else refuted.

    The witness is an end that moves: its value at two parameter values.
    """
    support, t = density.parsed_support, density.t
    for end in (support.lower, support.upper):
        if not end.has(t):
            continue
        first, second = parameter_points(density)[:2]
        return Step(
            SUPPORT,
            Grade.REFUTED,
            f"the support {support.text} depends on {t}",
            "all laws of an exponential family have one support (Lehmann and Romano 2005, section 2.7)",
            f"its end {end} is {end.subs(t, first)} at {first} and {end.subs(t, second)} at {second}",
        )
    return Step(
        SUPPORT,
        Grade.PROVED,
        f"the support {support.text} does not depend on {t}",
        "its ends are free of the parameter",
    )
