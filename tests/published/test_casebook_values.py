"""Every number claimed in casebook/published and casebook/numerics, against the proved solution.

The source of each value stands in its case file, where ``[expect]`` says whether the printed numbers are
rounded (``agrees``), cut in their last place (``last digit``), or must not agree (``differs``).
"""

from __future__ import annotations

from functools import cache
from pathlib import Path

import pytest

import verify

ROOT = Path(__file__).parents[2] / "casebook"
NUMBERS = ("c", "gamma", "c1", "c2", "gamma1", "gamma2")
FILES = [path for folder in ("published", "numerics") for path in sorted((ROOT / folder).glob("*.case.toml"))]


def name_of(path: Path) -> str:
    return f"{path.parent.name}/{path.name.removesuffix('.case.toml')}"


@cache
def _derived(formula, variable, support, parameter, space, constants):
    density = verify.Density(formula, variable, support, parameter, space, dict(constants))
    return verify.derive(density)


def solved(case):
    density = case.density
    constants = tuple(sorted(density.constants.items()))
    derivation = _derived(
        density.formula, density.variable, density.support, density.parameter, density.space, constants
    )
    return verify.solve(case.problem, digits=25, derivation=derivation)


@pytest.mark.parametrize("path", FILES, ids=name_of)
def test_claimed_numbers(path, rounds_to) -> None:
    case = verify.read_case(str(path))
    assert case.source
    solution = solved(case)
    for condition in solution.side_conditions:
        target = condition.target
        assert not isinstance(target, int | float)
        assert condition.expectation.contains(target)
    claimed = {name: case.claim[name] for name in NUMBERS if name in case.claim}
    expected = {name: case.expect[name] for name in NUMBERS if name in case.expect}
    assert all(rounds_to(getattr(solution, name), text) for name, text in expected.items())
    round_off = [rounds_to(getattr(solution, name), text) for name, text in claimed.items()]
    cut_off = [rounds_to(getattr(solution, name), text, cut=True) for name, text in claimed.items()]
    verdicts = {"proved": not claimed, "agrees": all(round_off) and round_off != [],
                "last digit": all(cut_off) and not all(round_off), "differs": not all(cut_off)}  # fmt: skip
    assert [verdict for verdict, holds in verdicts.items() if holds] == [case.expect["verdict"]]


def test_every_published_case_names_its_source() -> None:
    assert len([path for path in FILES if path.parent.name == "published"]) >= 60
