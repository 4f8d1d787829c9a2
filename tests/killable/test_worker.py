"""The killable child: time, memory, crashes, and what is passed through."""

from __future__ import annotations

import multiprocessing
import os
import time

import pytest

from verify.errors import InputError, UndecidedError
from verify.killable.worker import Worker


def _sleep_in_one_c_call(seconds):
    time.sleep(seconds)


def _never_ends():
    return pow(7, 10**9, 10 ** (10**5) + 1)


def _eat():
    return bytearray(8 * 2**30)


def _die():
    os._exit(7)


def _surrender():
    raise NotImplementedError("no rule for this")


def _complain():
    raise InputError("a bad formula", key="density.formula")


def _pid():
    return os.getpid()


def test_time_is_a_real_stop_and_the_worker_goes_on():
    with Worker(0.3) as worker:
        first = worker.run(_pid)
        with pytest.raises(UndecidedError, match=r"budget of 0\.3 s"):
            worker.run(_never_ends)
        with pytest.raises(ProcessLookupError):
            os.kill(first, 0)
        assert worker.run(pow, 2, 5) == 32


def test_one_child_serves_all_calls():
    with Worker(5.0) as worker:
        assert worker.run(_pid) == worker.run(_pid) != os.getpid()


def test_memory_is_limited():
    with Worker(10.0, memory=2**28) as worker, pytest.raises(UndecidedError, match="memory limit"):
        worker.run(_eat)


def test_a_crash_is_undecided():
    with Worker(5.0) as worker:
        with pytest.raises(UndecidedError, match="ended abnormally"):
            worker.run(_die)
        assert worker.run(pow, 2, 5) == 32


def test_a_surrender_keeps_its_words():
    with Worker(5.0) as worker, pytest.raises(UndecidedError, match="NotImplementedError: no rule for this"):
        worker.run(_surrender)


def test_errors_on_purpose_pass_through():
    with Worker(5.0) as worker, pytest.raises(InputError) as caught:
        worker.run(_complain)
    assert caught.value.key == "density.formula"


def test_the_child_is_gone_after_the_block():
    with Worker(5.0) as worker:
        child = worker.run(_pid)
    with pytest.raises(ProcessLookupError):
        os.kill(child, 0)


def test_spawned_where_the_system_cannot_fork():
    with Worker(30.0, method="spawn") as worker:
        assert worker.run(pow, 2, 10) == 1024


def _inside(connection):
    with Worker(5.0) as worker:
        connection.send(worker.run(pow, 3, 4))


def test_inside_a_daemonic_process():
    """Workers of a cluster are daemonic, and such a process may not start children through
    multiprocessing."""
    mine, theirs = multiprocessing.Pipe()
    process = multiprocessing.get_context("fork").Process(target=_inside, args=(theirs,), daemon=True)
    process.start()
    assert mine.poll(20)
    assert mine.recv() == 81
    process.join()
