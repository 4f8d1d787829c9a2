"""The bound on symbolic work, and that it leaves a profiler alone."""

import cProfile
import sys

import pytest

from verify.errors import InputError
from verify.problem.numbers import exact
from verify.problem.work import bounded_work


def loop() -> None:
    with bounded_work(InputError("too much"), seconds=0.01):
        while True:
            abs(1)


def test_a_loop_is_left():
    with pytest.raises(InputError, match="too much"):
        loop()
    assert sys.getprofile() is None


def test_a_profiler_goes_on():
    profiler = cProfile.Profile()
    profiler.enable()
    try:
        exact("2*sqrt(2)")
        assert sys.getprofile() is profiler
    finally:
        profiler.disable()
