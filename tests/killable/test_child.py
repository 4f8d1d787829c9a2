"""The forked child: how it ends, that it is gone, and systems that lack a limit."""

import os
import signal
import time

import pytest

from verify.killable import calls, child
from verify.killable.calls import run_limited
from verify.killable.child import ForkedChild
from verify.killable.worker import Worker


def test_the_child_talks_and_says_how_it_ended():
    talks = ForkedChild(lambda pipe: pipe.send(os.getpid()))
    assert talks.connection.recv() == talks.pid != os.getpid()
    assert talks.how_it_ended() == "exit status 0"
    talks.kill()  # nothing is left to be killed
    fails = ForkedChild(lambda pipe: pipe.no_such_thing)
    assert fails.how_it_ended() == "exit status 1"
    shot = ForkedChild(lambda pipe: os.kill(os.getpid(), signal.SIGTERM))
    assert shot.how_it_ended() == "signal SIGTERM"


def test_a_killed_child_is_gone():
    sleeper = ForkedChild(lambda pipe: time.sleep(60))
    sleeper.kill()
    with pytest.raises(ProcessLookupError):
        os.kill(sleeper.pid, 0)
    sleeper.kill()


@pytest.mark.parametrize("lacking", ["resource", "proc", "both"])
def test_where_the_system_lacks_a_limit_the_work_is_done_all_the_same(monkeypatch, tmp_path, lacking):
    if lacking in ("resource", "both"):
        monkeypatch.setattr(child, "resource", None)
    if lacking in ("proc", "both"):
        monkeypatch.setattr(child, "HELD", str(tmp_path / "statm"))
    slow, quick = run_limited([lambda: time.sleep(60), lambda: 7], seconds=0.3)
    assert (slow.failure, quick.value) == ("stopped after 0.3 s", 7)
    with Worker(5.0) as worker:
        assert worker.run(pow, 2, 5) == 32


def test_a_limit_that_the_system_refuses_is_left_as_it_is(monkeypatch):
    class Refusing:
        RLIMIT_CPU, RLIM_INFINITY = 0, -1

        @staticmethod
        def getrlimit(which):
            return -1, -1

        @staticmethod
        def setrlimit(which, pair):
            raise ValueError("not this limit")

    monkeypatch.setattr(child, "resource", Refusing)
    child.limit_processor_time(1.0)


def test_without_fork_no_call_is_run_without_its_limit(monkeypatch):
    monkeypatch.setattr(calls, "can_fork", lambda: False)
    (outcome,) = run_limited([lambda: 1])
    assert outcome.not_attempted == "this system cannot fork a process that can be killed"
    assert outcome.value is None
