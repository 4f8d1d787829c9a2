"""Local worker processes: none is left behind, however a run ends, and a slow item keeps only its own worker busy."""

import os
import signal
import subprocess
import sys
import threading
import time
from functools import partial
from pathlib import Path

import pytest
from dask_cluster import wait_until

from verify.errors import InputError
from verify.parallel import processes, run_all

PROGRAM = """
import sys
from functools import partial
sys.path.insert(0, sys.argv[1])
from test_processes import linger
from verify.parallel import run_all
if __name__ == "__main__":
    list(run_all(partial(linger, sys.argv[2]), range(2), 2))
"""

MASKS = """
import sys
sys.path.insert(0, sys.argv[1])
from test_processes import deaf
from verify.parallel import run_all
print(list(run_all(deaf, range(8), 2)))  # without the usual guard: workers do not run this again
"""


def deaf(x: int) -> bool:
    return signal.SIGINT in signal.pthread_sigmask(signal.SIG_BLOCK, ())


def linger(folder: str, x: int) -> None:
    """Have a child, write down both processes, and do not end."""
    child = os.fork()
    (Path(folder) / str(os.getpid())).touch()
    time.sleep(120)
    os._exit(child == 0)


def pause(folder: str, x: int) -> int:
    """Wait at 0 until all the others are done."""
    (Path(folder) / str(x)).touch()
    if x == 0:
        wait_until(lambda: len(list(Path(folder).iterdir())) == 20, "the other items")
    return x


def with_a_lock(x: int) -> object:
    return threading.Lock() if x == 1 else x


class OddError(Exception):
    """Pickles, but does not come back."""

    def __init__(self, first: str, second: str) -> None:
        super().__init__(f"{first} {second}")


def odd(x: int) -> int:
    raise OddError("an odd", "error")


def lives(pid: int) -> bool:
    try:
        return Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()[0] != "Z"
    except OSError:
        return False


@pytest.mark.skipif(not Path("/proc/self/stat").exists(), reason="processes are looked up in /proc")
@pytest.mark.parametrize("how", [signal.SIGINT, signal.SIGKILL, signal.SIGTERM])
def test_a_run_that_is_ended_leaves_no_process(tmp_path, how):
    (tmp_path / "main.py").write_text(PROGRAM)
    pids = tmp_path / "pids"
    pids.mkdir()
    words = [sys.executable, str(tmp_path / "main.py"), str(Path(__file__).parent), str(pids)]
    path = os.pathsep.join(sys.path)
    running = subprocess.Popen(words, stderr=subprocess.PIPE, text=True, env=os.environ | {"PYTHONPATH": path})
    wait_until(lambda: len(list(pids.iterdir())) == 4 or running.poll() is not None, "two workers and their children")
    running.send_signal(how)
    _, error = running.communicate()
    assert error.count("Traceback") == (how == signal.SIGINT), error
    wait_until(lambda: not any(lives(int(pid.name)) for pid in pids.iterdir()), "the end of all")


@pytest.mark.skipif(not hasattr(signal, "pthread_sigmask"), reason="interrupts can be held elsewhere only")
@pytest.mark.parametrize("how", ["a file", "standard input"])
def test_no_worker_hears_the_keyboard_from_its_start(tmp_path, how):
    place = tmp_path / "main.py"
    place.write_text(MASKS)
    words = [sys.executable, "-" if how == "standard input" else str(place), str(Path(__file__).parent)]
    env = os.environ | {"PYTHONPATH": os.pathsep.join(sys.path)}
    ended = subprocess.run(words, input=MASKS, capture_output=True, text=True, env=env, check=False)
    assert (ended.stdout, ended.stderr) == (f"{[True] * 8}\n", "")


def test_a_slow_item_does_not_stop_the_other_worker(tmp_path):
    assert list(run_all(partial(pause, str(tmp_path)), range(20), 2)) == list(range(20))


def test_a_result_that_cannot_travel_is_an_error():
    results = run_all(with_a_lock, range(3), 2)
    assert next(results) == 0
    with pytest.raises(Exception, match=r"cannot pickle '_thread.lock' object"):
        next(results)


def test_an_error_that_cannot_travel_ends_the_run():
    with pytest.raises(RuntimeError, match="failed to un-serialize"):
        list(run_all(odd, range(3), 2))


def test_a_system_that_gives_no_lock_is_named(monkeypatch):
    def none_left(*_: object, **__: object) -> None:
        raise OSError(24, "Too many open files")

    monkeypatch.setattr(processes, "ProcessPoolExecutor", none_left)
    with pytest.raises(InputError, match="no process can be started: Too many open files; ask for fewer workers"):
        list(run_all(abs, [1], 2))
