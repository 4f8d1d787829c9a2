"""Is the total mass of a density one, for every parameter value?

The total is found in closed form (:mod:`~verify.derivation.sums`, :mod:`~verify.derivation.integrals`),
never by the algebra system's own summation and integration, which are slow and sometimes wrong. What has no
closed form is added up in balls at a few parameter values: that is a check, not a proof.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from itertools import islice
from typing import TYPE_CHECKING

import sympy as sp
from sympy import Expr, Symbol

from verify.derivation.certain import sign_at, value_text
from verify.derivation.closed import Closed, is_one, normal_form
from verify.derivation.integrals import integral
from verify.derivation.ledger import NORMALISATION, Grade, Step
from verify.derivation.numeric_mass import PartialMass, partial_integral, partial_sum
from verify.derivation.positivity import Domain, Interval, points_inside
from verify.derivation.sums import series
from verify.errors import SidecheckError

if TYPE_CHECKING:
    from verify.problem.density import Density

SAMPLES = 3
"""At so many parameter values an open question is looked at numerically."""
LARGEST_LIST = 300
"""Finite supports of a kernel up to this size are gone through point by point."""


@dataclass(frozen=True)
class Mass:
    """The question: f over the support, and what the parameter ranges over.

    Attributes
    ----------
    f : Expr
        The density of one observation.
    x, t : Symbol
        Its variable and its parameter.
    kind : str
        ``"integers"`` or ``"reals"``.
    support, space : pair of Expr
        Ends of the support (they may contain t) and of the open parameter interval.
    """

    f: Expr
    x: Symbol
    t: Symbol
    kind: str
    support: Interval
    space: Interval

    @property
    def domain(self) -> Domain:
        """Where the parameter lives."""
        return Domain({self.t: self.space})

    @property
    def word(self) -> str:
        """``sum`` or ``integral``."""
        return "sum" if self.kind == "integers" else "integral"

    @property
    def samples(self) -> list[Expr]:
        """A few exact parameter values."""
        return list(islice(points_inside(self.space), SAMPLES))

    def closed(self) -> Closed | None:
        """The total in closed form, when a rule fits."""
        rule = series if self.kind == "integers" else integral
        try:
            return rule(self.f, self.x, *self.support, self.domain)
        except (sp.PolynomialError, NotImplementedError):
            return None

    def added(self, at: Expr) -> PartialMass | None:
        """The mass added up numerically at one parameter value."""
        rule = partial_sum if self.kind == "integers" else partial_integral
        return rule(self.f, self.x, *self.support, self.t, at)


@dataclass(frozen=True)
class TotalMass:
    """The answer: the graded step, and the total as an expression where it was found."""

    step: Step
    value: Expr | None = None


def total_mass(density: Density) -> Step:
    """Return the step ``normalisation`` of a density (or of an unnormalised kernel).

    Guarantees: *proved* only by a closed form whose convergence is proved on the whole parameter space and
    that is identically one; *refuted* with the true total, or with a parameter value at which it diverges or
    certainly exceeds one. Nothing is claimed about the sign of the density.

    Source: Petkovsek, Wilf and Zeilberger 1996, chapter 3 (sums); DLMF sections named in the step
    (integrals).
    """
    return total_mass_of(density).step


def total_mass_of(density: Density) -> TotalMass:
    """Return the step together with the total mass as an expression in the parameter."""
    question = question_of(density)
    return normaliser(question, density.table) if density.is_kernel else decide(question)


def question_of(density: Density) -> Mass:
    """Return the question with symbols whose assumptions are those of the open support and space."""
    support, space = density.parsed_support, density.parsed_space
    t = Symbol(density.t.name, **_assumptions(space.lower, space.upper))
    ends = tuple(end.xreplace({density.t: t}) for end in (support.lower, support.upper))
    whole = {"integer": True} if support.kind == "integers" else {}
    x = Symbol(density.x.name, **whole, **_assumptions(*ends, closed=bool(whole)))
    expr = density.expr.xreplace({density.x: x, density.t: t})
    return Mass(expr, x, t, support.kind, (ends[0], ends[1]), (space.lower, space.upper))


def _assumptions(lower: Expr, upper: Expr, *, closed: bool = False) -> dict[str, bool]:
    if lower.is_positive or (lower.is_nonnegative and not closed):
        return {"positive": True}
    if lower.is_nonnegative:
        return {"nonnegative": True}
    if upper.is_nonpositive and not closed:
        return {"negative": True}
    return {} if closed else {"real": True}


def decide(question: Mass) -> TotalMass:
    """Decide whether the total mass is identically one."""
    if not _sensible(question):
        return _open(
            question, "the ends of the support were not shown to be in order for every parameter value"
        )
    found = question.closed()
    if found is None:
        return _numerically(question, "no rule for a closed form fits")
    divergent = _divergence(question, found)
    if divergent is not None:
        return divergent
    unproved = [c for c in found.conditions if not question.domain.positive(c)]
    if unproved:
        return _numerically(question, f"convergence needs {sp.sstr(unproved[0])} > 0, which was not proved")
    if found.value.has(sp.hyper):
        return _numerically(question, "the total is a hypergeometric series without a plain form")
    return _judge(question, found)


def _sensible(question: Mass) -> bool:
    lower, upper = question.support
    if question.kind == "integers":
        whole = all(end.is_integer or end.is_infinite for end in (lower, upper))
        return whole and not (lower.has(question.t) or upper.has(question.t))
    return _unbounded(lower, upper) or question.domain.positive(upper - lower)


def _unbounded(lower: Expr, upper: Expr) -> bool:
    """Tell whether an interval is unbounded on at least one side."""
    return bool(lower == -sp.oo or upper == sp.oo)


def _judge(question: Mass, found: Closed) -> TotalMass:
    reason = "; ".join(found.sources)
    told = [f"{sp.sstr(c)} > 0" for c in found.conditions if c.free_symbols and not c.is_Symbol]
    reason += "; converges as " + ", ".join(told) if told else ""
    if is_one(found.value, question.domain):
        statement = f"the {question.word} of the density over its support is 1 for every {question.t}"
        return TotalMass(Step(NORMALISATION, Grade.PROVED, statement, reason), sp.S.One)
    value = shown(found.value, question.domain)
    for at in question.samples:
        if sign_at(found.value - 1, {question.t: at}):
            statement = f"the {question.word} of the density over its support is {sp.sstr(value)}, not 1"
            seen = value_text(found.value, {question.t: at})
            witness = f"at {question.t} = {at} it is {seen}"
            if seen.startswith(("1.000000", "0.999999")):
                witness += f", off by {value_text(found.value - 1, {question.t: at}, 3)}"
            return TotalMass(Step(NORMALISATION, Grade.REFUTED, statement, reason, witness), value)
    places = ", ".join(map(str, question.samples))
    statement = f"the {question.word} of the density is {sp.sstr(value)}, which"
    statement += f" cannot be told from 1 in balls of 512 bits at {question.t} = {places}"
    reason += "; no proof that this is identically 1"
    return TotalMass(Step(NORMALISATION, Grade.CHECKED, statement, reason), value)


def shown(value: Expr, domain: Domain) -> Expr:
    """Return a value in its shortest plain form."""
    plain = normal_form(value, domain)
    return min((plain, sp.powsimp(plain, force=False), sp.factor_terms(plain)), key=lambda e: len(sp.sstr(e)))


def _divergence(question: Mass, found: Closed) -> TotalMass | None:
    """A parameter value at which a necessary condition certainly fails."""
    if not found.sharp:
        return None
    for condition in found.conditions:
        if question.domain.positive(condition):
            continue
        for at in [*points_inside(question.space)]:
            if condition.is_zero or sign_at(condition, {question.t: at}) < 0:
                statement = f"the {question.word} of the density diverges"
                everywhere = condition.is_zero or question.domain.negative(condition)
                statement += " for every " if everywhere else " for some "
                witness = f"{question.t} = {at}, where {sp.sstr(condition)} is not positive"
                reason = f"{'; '.join(found.sources)}: finite only where {sp.sstr(condition)} > 0"
                return TotalMass(Step(NORMALISATION, Grade.REFUTED, statement + str(question.t), reason, witness))
    return None


def _numerically(question: Mass, why: str) -> TotalMass:
    """Add the mass up at a few parameter values."""
    looks: list[PartialMass] = []
    for at in question.samples:
        try:
            look = question.added(at)
        except SidecheckError:
            look = None
        if look is None:
            return _open(question, f"{why}; it could not be added up numerically at {question.t} = {at}")
        if look.exceeds_one:
            statement = f"the {question.word} of the density is not 1: part of the support has more"
            witness = f"at {question.t} = {at} the mass is at least {look.text()}"
            return TotalMass(Step(NORMALISATION, Grade.REFUTED, statement, "added up in ball arithmetic", witness))
        looks.append(look)
    return _looked(question, looks, why)


def _looked(question: Mass, looks: list[PartialMass], why: str) -> TotalMass:
    places = ", ".join(str(look.at) for look in looks)
    digits = min(look.digits for look in looks)
    if digits >= 6:
        statement = f"the {question.word} of the density is 1 to {digits} digits at {question.t} = {places}"
        return TotalMass(Step(NORMALISATION, Grade.CHECKED, statement, f"added up in ball arithmetic; {why}"))
    worst = min(looks, key=lambda look: look.digits)
    witness = f"at {question.t} = {worst.at} the mass that was found is {worst.text()}"
    return _open(question, f"{why}; added up numerically, 1 was not reached", witness)


def _open(question: Mass, reason: str, witness: str = "") -> TotalMass:
    statement = f"whether the {question.word} of the density is 1 was left open"
    return TotalMass(Step(NORMALISATION, Grade.UNDECIDED, statement, reason, witness))


# ---- unnormalised kernels


def normaliser(question: Mass, table: tuple[Fraction, ...] | None) -> TotalMass:
    """Prove that the weights of a kernel have a finite, positive sum, by which they are divided."""
    lower, upper = question.support
    if not (lower.is_Integer and upper.is_Integer):
        return _convergent(question)
    statement = f"the weights have a finite, positive sum for every {question.t}, by which they are divided"
    if _weights_positive(question, table):
        reason = f"{int(upper - lower) + 1} weights, none negative and not all zero"
        return TotalMass(Step(NORMALISATION, Grade.PROVED, statement, reason))
    return _open(question, "the weights were not shown to be non-negative and not all zero")


def _weights_positive(question: Mass, table: tuple[Fraction, ...] | None) -> bool:
    if table is not None:
        return all(weight >= 0 for weight in table) and any(weight > 0 for weight in table)
    lower, upper = question.support
    here = question.domain.having(question.x, lower - sp.Rational(1, 2), upper + sp.Rational(1, 2))
    if here.positive(question.f):
        return True
    if upper - lower > LARGEST_LIST:
        return False
    weights = [question.f.subs(question.x, lower + k) for k in range(int(upper - lower) + 1)]
    signs = [0 if weight == 0 else question.domain.sign(weight) or -1 for weight in weights]
    return min(signs) >= 0 and max(signs) == 1


def _convergent(question: Mass) -> TotalMass:
    """A kernel on an infinite support: its sum must be shown to converge."""
    found = question.closed()
    if found is None or not all(map(question.domain.positive, found.conditions)):
        return _open(question, "the sum of the kernel was not shown to converge")
    value = shown(found.value, question.domain)
    if not question.domain.positive(value):
        return _open(question, f"the sum of the kernel, {sp.sstr(value)}, was not shown to be positive")
    statement = (
        f"the kernel is divided by its {question.word}, {sp.sstr(value)}, which is finite and positive"
    )
    return TotalMass(Step(NORMALISATION, Grade.PROVED, statement, "; ".join(found.sources)), value)
