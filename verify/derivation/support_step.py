"""Does the support depend on the parameter?"""

from __future__ import annotations

from verify.derivation.ledger import Grade, Step
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
            "support",
            Grade.REFUTED,
            f"the support {support.text} depends on {t}",
            "the law of the data is not dominated by one measure that is free of the parameter (Lehmann and Romano 2005, 2.7)",
            f"its end {end} is {end.subs(t, first)} at {t} = {first} and {end.subs(t, second)} at {t} = {second}",
        )
    return Step("support", Grade.PROVED, f"the support {support.text} does not depend on {t}", "its ends are free of the parameter")
