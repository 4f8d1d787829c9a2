"""A remembered result is the solved one to the last bit; what cannot be used costs no result."""

from dataclasses import replace

import pytest
from questions import COIN, GAP, NULLS, POISSON, ask, derivation, same

from verify.errors import UndecidedError
from verify.memory.key import key_of
from verify.memory.store import FILE
from verify.solution.solve import solve


@pytest.mark.parametrize("density", [POISSON, GAP], ids=["lattice", "continuous"])
@pytest.mark.parametrize("null", NULLS)
@pytest.mark.parametrize("digits", [15, 60])
def test_a_remembered_solution_is_the_solved_one(memory, density, null, digits):
    problem, known = ask(density, null), derivation(density)
    first = memory.solve(problem, digits, known)
    again = memory.solve(problem, digits, known)
    assert memory.found == 1
    assert same(first, again)
    assert same(again, solve(problem, digits=digits, derivation=known))


@pytest.mark.parametrize(
    "text",
    [
        "", "[]", "{}", "null", '{"ends": 3, "sides": [], "prec": 9}', '{"ends": ["3", "8"], "sides": [], "prec": 128}',
        '{"ends": ["3", "zz"], "sides": [["1/10", "1/f"], ["1/10", "1/f"]], "prec": 128}',
        '{"ends": ["3", "8"], "sides": [["1/10", "1/0"], ["1/10", "1/f"]], "prec": 128}',
        '{"ends": [["1/2", "1/3"], "8"], "sides": [["1/10", "1/f"], ["1/10", "1/f"]], "prec": 128}',
        '{"ends": [["1/3", "1/2"], "8"], "sides": [["1/10", "1/f"], ["1/10", "1/f"]], "prec": 128}',
        '{"ends": ["3", "8", "9"], "sides": [["1/10", "1/f"], ["1/10", "1/f"]], "prec": 128}',
        '{"ends": [null, "8"], "sides": [["1/10", "1/f"], ["1/10", "1/f"]], "prec": 128}',
        '{"ends": ["3", "8"], "sides": [["1/10", "1/f"], ["1/10", "1/f"]], "prec": 99999999999}',
        '{"ends": ["3", "8"], "sides": [["1/10", "1/f"], ["1/10", "1/f"]], "prec": true}',
        '{"ends": ["-3", "8"], "sides": [["1/10", "1/f"], ["1/10", "1/f"]], "prec": 128}',
    ],
)  # fmt: skip
def test_a_text_that_no_result_has_is_solved_afresh(memory, text):
    problem, known = ask(POISSON, NULLS[0]), derivation(POISSON)
    memory.store.put(key_of(problem, 20, known), text)
    assert same(memory.solve(problem, 20, known), solve(problem, digits=20, derivation=known))
    assert (memory.found, memory.store.refused()) == (0, 1)
    assert memory.solve(problem, 20, known)
    assert memory.found == 1


def test_long_numbers_are_remembered(memory):
    problem, known = ask(GAP, NULLS[3]), derivation(GAP)
    assert same(memory.solve(problem, 5000, known), memory.solve(problem, 5000, known))
    assert memory.found == 1


def test_a_tie_is_solved_each_time(memory):
    problem, known = ask(COIN, "t = 1/2", "1/16", 5), derivation(COIN)
    assert same(memory.solve(problem, 20, known), memory.solve(problem, 20, known))
    assert memory.found == 0


def test_a_store_that_breaks_in_the_run_costs_no_result(memory, tmp_path):
    problem, known = ask(POISSON, NULLS[0]), derivation(POISSON)
    first = memory.solve(problem, 20, known)
    memory.store.close()
    (tmp_path / FILE).write_bytes(b"no database" * 1000)
    assert same(memory.solve(problem, 20, known), first)
    assert memory.found == 0


def test_a_derivation_without_a_law_is_undecided_as_ever(memory):
    with pytest.raises(UndecidedError):
        memory.solve(ask(POISSON, NULLS[0]), 20, replace(derivation(POISSON), family=None))
