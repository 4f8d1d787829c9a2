"""Derive a density: every step of the argument from the density to the law of its statistic, graded."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

from sympy import Expr

from verify.derivation.claims import Derived, claims_steps
from verify.derivation.factorisation import Factorisation
from verify.derivation.factorisation_step import factorisation_step
from verify.derivation.family import LawFamily
from verify.derivation.kernel import with_normaliser
from verify.derivation.law_of_variance import CLOSED_FORMS
from verify.derivation.law_step import law_step
from verify.derivation.ledger import (
    CLAIMS,
    FACTORISATION,
    LAW,
    MONOTONICITY,
    NONNEGATIVITY,
    NORMALISATION,
    NUMERICAL_LOOK,
    SUPPORT,
    Grade,
    Step,
    weakest,
)
from verify.derivation.monotonicity import monotonicity_step
from verify.derivation.nonnegativity import nonnegativity_step
from verify.derivation.normalisation import total_mass
from verify.derivation.numerical_look import numerical_look
from verify.derivation.points import domain_of, parameter_points
from verify.derivation.sum_step import open_or_checked
from verify.derivation.support_step import support_step
from verify.errors import InputError, UndecidedError
from verify.killable.worker import Worker
from verify.laws.continuous import OneObservation
from verify.notebook import Shown
from verify.problem.density import Density
from verify.problem.numbers import Exact, as_expr
from verify.problem.problem import Problem


@dataclass(frozen=True)
class Derivation(Shown):
    """The outcome of :func:`derive`: ``f = h(x) exp(Q(t) T(x) - A(t))``, the law of T, and the ledger.

    Attributes
    ----------
    density : Density
        What was derived.
    natural_parameter, statistic, log_normaliser, base : Expr or None
        Q(t), T(x), A(t) and h(x); None where the factorisation failed.
    rising : bool or None
        True when Q increases, False when it decreases, None when that is open.
    family : LawFamily or None
        The law of T in closed form, when there is one.
    steps : tuple of Step
        The ledger, in order.
    limits : tuple of Exact
        Limits of hypotheses at which the direction of Q was looked at, at least.
    """

    density: Density
    natural_parameter: Expr | None
    statistic: Expr | None
    log_normaliser: Expr | None
    base: Expr | None
    rising: bool | None
    family: LawFamily | None
    steps: tuple[Step, ...]
    limits: tuple[Exact, ...] = ()

    def covers(self, limits: tuple[Exact, ...]) -> bool:
        """Whether it holds at these limits: the direction of Q is proved everywhere, or was looked at there."""
        monotone = self.step(MONOTONICITY)
        return (monotone is not None and monotone.grade is Grade.PROVED) or set(limits) <= set(self.limits)

    @property
    def grade(self) -> Grade:
        """The weakest grade of all steps; the numerical look, a second opinion, counts when it fails."""
        return weakest([self.footing, *(step.grade for step in self.steps if step.name == CLAIMS)])

    @property
    def footing(self) -> Grade:
        """The weakest grade that numbers lean on: that of all steps but the claims."""
        second = (CLAIMS, NUMERICAL_LOOK)
        return weakest(
            step.grade
            for step in self.steps
            if step.name not in second or (step.name == NUMERICAL_LOOK and step.grade is Grade.REFUTED)
        )

    @property
    def carries_numbers(self) -> bool:
        """Whether a solution can lean on it: the law is known and no step but the claims is refuted."""
        return self.family is not None and self.footing is not Grade.REFUTED

    @property
    def law(self) -> str:
        """The law of one T as a line to read; empty when it has no closed form here."""
        return "" if self.family is None else self.family.text()

    def step(self, name: str) -> Step | None:
        """Return the first step of that name."""
        return next((step for step in self.steps if step.name == name), None)

    def __str__(self) -> str:
        return "\n".join(map(str, self.steps))


@dataclass
class _Ledger:
    """Runs steps in the worker and collects them."""

    worker: Worker
    steps: list[Step] = field(default_factory=list)

    def run(self, name: str, function: Callable[..., Any], *arguments: Any) -> Any:
        """Run one step, a function that returns a Step or (Step, more); return what is more, or None."""
        try:
            result = self.worker.run(function, *arguments)
        except UndecidedError as error:
            return self._open(name, str(error))
        except InputError as error:
            if error.key:
                raise
            return self._open(name, f"a number that came up on the way cannot be used: {error.wrong}")
        step, more = result if isinstance(result, tuple) else (result, None)
        self.steps.extend(step if isinstance(step, tuple) else (step,))
        return more

    def _open(self, name: str, reason: str) -> None:
        self.steps.append(Step(name, Grade.UNDECIDED, f"the step {name} stayed open", reason))

    def grades(self, *names: str) -> Grade:
        return weakest(step.grade for step in self.steps if step.name in names)


def derive(
    density: Density,
    *,
    limits: tuple[Exact, ...] = (),
    claim: Mapping[str, str] | None = None,
    n: int | None = None,
    budget: float = 10.0,
) -> Derivation:
    """Show step by step that a density is a one-parameter exponential family, and which law its statistic
    has.

    Parameters
    ----------
    density : Density
        The density of one observation.
    limits : tuple of Exact
        Limits of the hypothesis; where no symbolic proof of monotonicity is found, these are covered by
        balls.
    claim : mapping
        A colleague's ``natural_parameter``, ``statistic`` and ``law``, each optional.
    n : int
        Number of observations, for the claimed law.
    budget : float
        Seconds that each symbolic step may take; it is then stopped, graded undecided, and the rest goes on.

    Returns
    -------
    Derivation
        With the ledger in ``steps``. A refuted step is a result, not an exception.

    Raises
    ------
    InputError
        When a formula cannot be read.

    Examples
    --------
    >>> density = Density("exp(-lam)*lam**x/factorial(x)", variable="x", support="integers >= 0",
    ...                   parameter="lam", space="lam > 0")
    >>> derivation = derive(density)
    >>> derivation.statistic, derivation.natural_parameter, derivation.law, derivation.grade.value
    (x, log(lam), 'Poisson(mean = lam)', 'proved')
    """
    exact_limits = tuple(as_expr(limit) for limit in limits)
    with Worker(budget) as worker:
        ledger = _Ledger(worker)
        ledger.run(SUPPORT, support_step, density)
        if ledger.grades(SUPPORT) is Grade.REFUTED:
            return _finished(density, None, None, None, ledger.steps, limits)
        ledger.run(NONNEGATIVITY, nonnegativity_step, density)
        found = _factorised(ledger, density)
        rising = family = None
        if found is not None:
            rising, family = _law(ledger, density, found, exact_limits)
            if claim:
                grade = ledger.grades(LAW)
                derived = Derived(density, found.statistic, found.natural_parameter, family, grade, n)
                ledger.run(CLAIMS, _claims, dict(claim), derived)
            if family is not None and n is not None and n > 1 and isinstance(family.law, OneObservation):
                step = open_or_checked(family, limits, n)
                ledger.steps.extend(() if step is None else (step,))
    return _finished(density, found, rising, family, ledger.steps, limits)


def _finished(
    density: Density,
    found: Factorisation | None,
    rising: bool | None,
    family: LawFamily | None,
    steps: list[Step],
    limits: tuple[Exact, ...],
) -> Derivation:
    if found is None:
        return Derivation(density, None, None, None, None, rising, family, tuple(steps), limits)
    parts = found.natural_parameter, found.statistic, found.log_normaliser, found.base
    return Derivation(density, *parts, rising, family, tuple(steps), limits)


def derivation_for(problem: Problem, known: Derivation | None = None) -> Derivation:
    """Return a derivation of a problem's density that covers its limits: the known one, if it does.

    Raises
    ------
    InputError
        When the known one is of another density.
    """
    if known is not None and known.density != problem.density:
        raise InputError("the derivation is of another density", "derive the density of the problem", key="derivation")
    if known is not None and known.covers(problem.hypothesis.limits):
        return known
    return derive(problem.density, limits=problem.hypothesis.limits, n=problem.n)


def _factorised(ledger: _Ledger, density: Density) -> Factorisation | None:
    """Normalisation and factorisation; a kernel is factorised before it is summed."""
    found: Factorisation | None = ledger.run(FACTORISATION, factorisation_step, density)
    factorisation = ledger.steps.pop()
    if density.is_kernel:
        found = ledger.run(NORMALISATION, with_normaliser, density, found)
    else:
        ledger.run(NORMALISATION, total_mass, density)
    ledger.steps.append(factorisation)
    return found


def _law(
    ledger: _Ledger, density: Density, found: Factorisation, limits: tuple[Expr, ...]
) -> tuple[bool | None, LawFamily | None]:
    points = parameter_points(density, limits)
    rising = ledger.run(
        MONOTONICITY,
        monotonicity_step,
        found.natural_parameter,
        density.t,
        domain_of(density),
        points,
        limits,
    )
    leaning = ledger.grades(SUPPORT, NONNEGATIVITY, NORMALISATION, FACTORISATION)
    if leaning is Grade.REFUTED or ledger.grades(MONOTONICITY) is Grade.REFUTED:
        return rising, None
    family = ledger.run(LAW, law_step, density, found, leaning)
    if family is not None and isinstance(family.law, CLOSED_FORMS):
        ledger.run(NUMERICAL_LOOK, numerical_look, density, found.statistic, family, points[0])
    return rising, family


def _claims(claim: dict[str, str], derived: Derived) -> tuple[tuple[Step, ...], None]:
    return claims_steps(claim, derived), None
