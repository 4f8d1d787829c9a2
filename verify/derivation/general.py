"""Laws without a closed form: which route leads from a density to the law of its statistic.

| statistic | law |
|---|---|
| whole multiples of a span | powers of the weight series (:mod:`verify.laws.lattice`) |
| logarithm of a whole number | convolution over products (:mod:`verify.laws.multiplicative`) |
| continuous, one observation | quadrature of the density (:mod:`verify.laws.continuous`) |
| continuous, several observations | inversion of the transform, where its decay is known
(:mod:`verify.laws.inversion`); else convolution of a polynomial near an analytic density
(:mod:`verify.laws.convolution`); else what two numerical routes share, checked and not enclosed
(:mod:`verify.laws.two_routes`) |

Any other is left undecided, with what would help.
"""

from __future__ import annotations

from verify.derivation.continuous_route import continuous_family
from verify.derivation.factorisation import Factorisation
from verify.derivation.family import LawFamily
from verify.derivation.lattice_route import lattice_family
from verify.derivation.ledger import LAW, Grade, Step
from verify.laws.continuous import OneObservation
from verify.problem.density import Density


def general_family(
    density: Density, found: Factorisation, leaning: Grade = Grade.PROVED
) -> tuple[Step, LawFamily | None]:
    """Return the step ``law`` and the family whose law is built from the formula itself.

    Parameters
    ----------
    density : Density
        The density of one observation.
    found : Factorisation
        Its statistic, natural parameter and log normaliser.
    leaning : Grade
        The weakest grade of the steps on which this one leans (the upper tail leans on the normalisation).
    """
    route = lattice_family if density.parsed_support.kind == "integers" else continuous_family
    answer = route(density, found)
    if isinstance(answer, str):
        return Step(LAW, Grade.UNDECIDED, "the law of T stayed open", answer), None
    family, why = answer
    whose = "T" if isinstance(family.law, OneObservation) else "the sum"
    statement = f"the law of {whose} is computed from the density itself: {family.law.name}"
    return Step(LAW, leaning, statement, f"{why}; {family.law.source}"), family
