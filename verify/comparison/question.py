"""What the routes are asked: the problem in plain doubles, the formula, and the proven test.

A route sees nothing else. It shares no code with the solution: it gets the law's name and its parameters as
numbers, or the formula, never a function.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from verify.solution.solve import Solution


@dataclass(frozen=True)
class Question:
    """One testing problem in double precision.

    Attributes
    ----------
    form : str
        ``"one-sided"``, ``"outside null"``, ``"interval null"`` or ``"point null"``.
    null_below : bool
        One-sided only: whether the null is t <= t0.
    levels : tuple of float
        One for each limit.
    limits : tuple of float
        The parameter values of the side conditions.
    n : int
        Number of observations.
    rising : bool
        Whether Q is increasing.
    law : str
        Name of the law of Y, "" when there is none. V = scale * Y + shift.
    parameters : tuple of dict
        Parameters of the law of Y at each limit.
    scale, shift : float
        The affine map from Y to V; the shift holds the n shifts of the observations.
    density : Any
        The asked density: its formula as a tree, its names, its support.
    statistic : Any
        T(x) as a tree.
    test : dict of str to float
        The proven cutoffs and fractions, rounded to doubles: each route evaluates the expectations of this
        test.
    """

    form: str
    null_below: bool
    levels: tuple[float, ...]
    limits: tuple[float, ...]
    n: int
    rising: bool
    law: str
    parameters: tuple[dict[str, float], ...]
    scale: float
    shift: float
    density: Any
    statistic: Any
    test: dict[str, float]

    @property
    def inside(self) -> bool:
        """Whether the test rejects inside its window."""
        return self.form == "outside null"

    @property
    def point(self) -> bool:
        """Whether the null is one point."""
        return self.form == "point null"


@dataclass(frozen=True)
class Answer:
    """What a route found.

    Attributes
    ----------
    numbers : dict of str to float
        Cutoffs and fractions, and its expectations of the proven test, as far as it came.
    note : str
        What the method is, or where the library is known to be weak.
    claimed : int or None
        Digits that the method itself claims; None for all that a double has.
    failure : str
        Why numbers are missing.
    """

    numbers: dict[str, float]
    note: str = ""
    claimed: int | None = None
    failure: str = ""


def question(solution: Solution) -> Question:
    """Write a solution's problem in doubles.

    Raises
    ------
    OverflowError
        When a number of the problem does not fit into a double.
    """
    problem, derivation, family = solution.problem, solution.derivation, solution.family
    hypothesis = problem.hypothesis
    return Question(
        form=hypothesis.form.value,
        null_below=bool(hypothesis.null_below),
        levels=tuple(float(level) for level in problem.levels),
        limits=tuple(float(limit) for limit in hypothesis.limits),
        n=problem.n,
        rising=bool(derivation.rising),
        law=solution.laws[0].name if family is not None else "",
        parameters=tuple(_floats(law.parameters) for law in solution.laws) if family is not None else (),
        scale=float(family.scale) if family is not None else 1.0,
        shift=float(problem.n * family.shift) if family is not None else 0.0,
        density=problem.density,
        statistic=derivation.statistic,
        test={name: float(enclosure.mid) for name, enclosure in solution.numbers.items()},
    )


def _floats(parameters: dict[str, Any]) -> dict[str, float]:
    """The numeric parameters as doubles; a general law also holds formulas, which no route needs."""
    return {name: float(value) for name, value in parameters.items() if hasattr(value, "__float__")}
