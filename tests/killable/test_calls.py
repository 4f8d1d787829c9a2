"""Calls that hang, die, eat memory or raise become outcomes."""

import os
import time

import numpy as np

from verify.errors import NotAttempted
from verify.killable.calls import run_limited


def test_values_come_back_in_order():
    assert [outcome.value for outcome in run_limited([lambda: 1, lambda: "two", lambda: {"x": 3.0}])] == [
        1,
        "two",
        {"x": 3.0},
    ]


def test_a_sleeping_call_is_killed_and_the_next_one_runs():
    begun = time.monotonic()
    slow, quick = run_limited([lambda: time.sleep(60), lambda: 7], seconds=0.3)
    assert slow.failure == "stopped after 0.3 s"
    assert quick.value == 7
    assert time.monotonic() - begun < 30


def test_a_loop_in_c_is_killed():
    (outcome,) = run_limited([lambda: 10 ** (10**9)], seconds=0.3)
    assert outcome.failure == "stopped after 0.3 s"


def test_memory_is_limited():
    outcome, after = run_limited([lambda: np.ones(1 << 28).sum(), lambda: 1], seconds=20, memory=1 << 28)
    assert "MemoryError" in outcome.failure
    assert after.value == 1


def test_a_dying_process_is_an_outcome():
    dead, alive = run_limited([lambda: os.abort(), lambda: 1])
    assert dead.failure == "the process died (signal SIGABRT)"
    assert alive.value == 1


def test_an_exception_is_an_outcome_and_a_refusal_another():
    broken, declined = run_limited([lambda: [][0], _decline])
    assert broken.failure.startswith("IndexError")
    assert declined.not_attempted == "too many atoms"
    assert declined.failure == ""


def _decline():
    raise NotAttempted("too many atoms")


def test_nothing_is_printed(capfd):
    run_limited([lambda: os.write(1, b"noise") and print("more")])
    assert capfd.readouterr() == ("", "")
