"""A remembered result is the solved one to the last bit, and is proved again before it is believed."""

import subprocess
import sys
from dataclasses import replace
from fractions import Fraction
from functools import cache

import pytest

from verify.arithmetic.enclosure import Enclosure
from verify.derivation.derive import derive
from verify.memory import Remembered, cache_of, solver
from verify.memory.key import key_of
from verify.memory.place import Place
from verify.memory.store import FILE, DamagedError, Store
from verify.problem.density import Density
from verify.problem.problem import Problem
from verify.solution.solve import solve

POISSON = Density("exp(-t)*t**x/factorial(x)", variable="x", support="integers >= 0", parameter="t", space="t > 0")
GAP = Density("exp(-x/t)/t", variable="x", support="reals > 0", parameter="t", space="t > 0")
COIN = Density("t**x*(1-t)**(1-x)", variable="x", support="integers 0..1", parameter="t", space="0 < t < 1")
NULLS = ["t <= 8 or t >= 12", "8 <= t <= 12", "t = 8", "t <= 8", "t >= 8"]

derivation = cache(derive)


def ask(density: Density, null: str, alpha: str = "0.05", n: int = 10) -> Problem:
    return Problem(density, null, alpha, n)


def moved(end: int | Enclosure) -> int | Enclosure:
    if isinstance(end, int):
        return end + 1
    return Enclosure(end.lower + Fraction(1, 10**7), end.upper + Fraction(1, 10**7))


@pytest.fixture
def memory(tmp_path):
    return Remembered(Store(tmp_path))


def same(first, second) -> bool:
    parts = ("critical", "side_conditions", "steps", "prec", "digits", "laws")
    return all(getattr(first, part) == getattr(second, part) for part in parts)


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


def test_other_digits_level_size_or_null_are_other_questions(memory):
    known = derivation(POISSON)
    base = ask(POISSON, NULLS[0])
    others = [ask(POISSON, NULLS[0], "0.01"), ask(POISSON, NULLS[1]), ask(POISSON, NULLS[0], n=11)]
    keys = {key_of(problem, 20, known) for problem in (base, *others)} | {key_of(base, 21, known)}
    assert len(keys) == 5
    assert key_of(ask(POISSON, NULLS[0], "1/20"), 20, known) == key_of(base, 20, known)


@pytest.mark.parametrize("density", [POISSON, GAP], ids=["lattice", "continuous"])
@pytest.mark.parametrize("null", NULLS)
def test_a_forged_place_is_not_believed(memory, density, null):
    """A text with a right digest but a wrong place: found out by the proof, solved afresh, and replaced."""
    problem, known = ask(density, null), derivation(density)
    first = memory.solve(problem, 20, known)
    key = key_of(problem, 20, known)
    kept = memory.store.get(key)
    place = Place.read(kept)
    memory.store.put(key, replace(place, ends=tuple(map(moved, place.ends))).text())
    assert same(memory.solve(problem, 20, known), first)
    assert (memory.found, memory.store.refused()) == (0, 1)
    assert memory.store.get(key) == kept


@pytest.mark.parametrize("null", [NULLS[0], NULLS[3]])
def test_a_forged_side_condition_is_not_believed(memory, null):
    problem, known = ask(GAP, null), derivation(GAP)
    first = memory.solve(problem, 20, known)
    key = key_of(problem, 20, known)
    place = Place.read(memory.store.get(key))
    wrong = tuple(Enclosure(Fraction(1, 25), Fraction(1, 24)) for _ in place.sides)
    memory.store.put(key, replace(place, sides=wrong).text())
    assert same(memory.solve(problem, 20, known), first)
    assert (memory.found, memory.store.refused()) == (0, 1)


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
def test_a_text_that_no_place_has_is_refused(memory, text):
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


def test_a_damaged_text_is_not_read(memory, tmp_path):
    store = memory.store
    store.put("a", "text")
    with store._open() as connection, connection:
        connection.execute("UPDATE results SET text = 'other'")
    assert (store.get("a"), store.refused()) == (None, 1)


def test_a_text_under_another_key_is_not_taken(memory):
    store = memory.store
    store.put("a", "text")
    with store._open() as connection, connection:
        connection.execute("UPDATE results SET key = 'b'")
    assert store.get("b") is None


def test_a_tie_is_solved_each_time(memory):
    problem, known = ask(COIN, "t = 1/2", "1/16", 5), derivation(COIN)
    assert same(memory.solve(problem, 20, known), memory.solve(problem, 20, known))
    assert memory.found == 0


def test_a_file_that_is_no_database_is_named(tmp_path):
    (tmp_path / FILE).write_bytes(b"not a database, but long enough to be looked at as one" * 100)
    with pytest.raises(DamagedError, match=f"--cache: the memory is damaged: file is not a database; delete {FILE}"):
        Store(tmp_path).get("a")


def test_a_store_that_breaks_in_the_run_costs_no_result(memory, tmp_path):
    problem, known = ask(POISSON, NULLS[0]), derivation(POISSON)
    first = memory.solve(problem, 20, known)
    memory.store.close()
    (tmp_path / FILE).write_bytes(b"no database" * 1000)
    assert same(memory.solve(problem, 20, known), first)
    assert memory.found == 0


def test_many_processes_write_at_once(tmp_path):
    code = (
        "import sys\nfrom verify.memory.store import Store\nstore = Store(sys.argv[1])\n"
        "for i in range(60): store.put(f'{sys.argv[2]}-{i}', 'x' * 1000)"
    )
    running = [subprocess.Popen([sys.executable, "-c", code, str(tmp_path), name]) for name in "abc"]
    assert [process.wait() for process in running] == [0, 0, 0]
    store = Store(tmp_path)
    assert all(store.get(f"{name}-{i}") for name in "abc" for i in range(60))


def test_the_memory_is_off_unless_named(monkeypatch):
    monkeypatch.delenv("SIDECHECK_CACHE", raising=False)
    assert cache_of(None) is None
    assert solver(None) is solve
    monkeypatch.setenv("SIDECHECK_CACHE", "/somewhere")
    assert cache_of(None) == "/somewhere"
    assert cache_of("/elsewhere") == "/elsewhere"


def test_a_derivation_without_a_law_is_undecided_as_ever(memory):
    from verify.errors import UndecidedError

    with pytest.raises(UndecidedError):
        memory.solve(ask(POISSON, NULLS[0]), 20, replace(derivation(POISSON), family=None))
