"""Right rows at random are never called wrong, and no slip is named; 2 000 of them in the bench run, fewer each day."""

import random

import pytest
from random_rows import random_row

from verify import review


def alarms(count: int, seed: int) -> list:
    rng, found = random.Random(seed), []
    for _ in range(count):
        problem, derivation, style, numbers = random_row(rng)
        verdict = review(problem, derivation=derivation, style=style, digits=20, **numbers)
        if verdict.verdict != "agrees" or verdict.slips:
            found.append(
                (problem.density.formula, problem.null, problem.alpha, problem.n, style, numbers, str(verdict))
            )
    return found


def test_right_rows_raise_no_alarm() -> None:
    assert alarms(60, seed=4) == []


@pytest.mark.bench
def test_two_thousand_right_rows_raise_no_alarm() -> None:
    assert alarms(2000, seed=11) == []
