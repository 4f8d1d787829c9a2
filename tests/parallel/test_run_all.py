"""The same results, in order, whoever does the work; and workers that die are survived."""

import os
import signal
from functools import partial
from pathlib import Path

import pytest

from verify.errors import InputError, UndecidedError
from verify.parallel import run_all


def square(x: int) -> int:
    return x * x


def refuse_three(x: int) -> int:
    if x == 3:
        raise InputError("three", "another number", key="x")
    return x


def die_once(folder: str, x: int) -> int:
    """Take the process down the first time that 5 comes by."""
    flag = Path(folder) / "died"
    if x == 5 and not flag.exists():
        flag.touch()
        os.kill(os.getpid(), signal.SIGKILL)
    return x


def always_die(x: int) -> int:
    if x == 2:
        os.kill(os.getpid(), signal.SIGKILL)
    return x


@pytest.mark.parametrize("workers", [1, 2])
@pytest.mark.parametrize("chunk", [1, 7])
def test_results_come_in_order(workers, chunk):
    assert list(run_all(square, range(40), workers, chunk=chunk)) == [x * x for x in range(40)]


def test_no_items_no_results():
    assert list(run_all(square, [], 2)) == []


def test_an_exception_arrives_at_its_place():
    results = run_all(refuse_three, range(6), 2)
    assert [next(results) for _ in range(3)] == [0, 1, 2]
    with pytest.raises(InputError, match="x: three; another number"):
        next(results)


def test_a_lost_process_is_replaced(tmp_path):
    assert list(run_all(partial(die_once, str(tmp_path)), range(12), 2)) == list(range(12))
    assert (tmp_path / "died").exists()


def test_an_item_that_kills_every_worker_is_named():
    results = run_all(always_die, range(6), 2)
    assert [next(results), next(results)] == [0, 1]
    with pytest.raises(UndecidedError, match=r"3 worker processes died over one piece of work: 2"):
        next(results)


def test_items_are_read_lazily():
    taken = []

    def items():
        for x in range(10_000):
            taken.append(x)
            yield x

    results = run_all(square, items(), 2)
    assert next(results) == 0
    assert len(taken) < 200
    results.close()


@pytest.mark.parametrize("workers", [0, 257])
def test_an_impossible_number_of_workers_is_refused(workers):
    with pytest.raises(InputError, match=rf"workers: {workers} workers; ask for 1 to 256"):
        run_all(square, [1], workers)
