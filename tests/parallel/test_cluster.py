"""A real Dask cluster that loses workers, has none, or has others than ours."""

import signal
import sys
import time
from operator import neg

import pytest
from dask_cluster import PATIENCE

from verify.errors import InputError, UndecidedError
from verify.parallel import run_all
from verify.parallel.cluster import do_checked
from verify.versions import versions


def test_a_killed_worker_changes_no_result_and_no_order(cluster):
    cluster.start_workers(2)
    items = [0.02] * 60
    results = run_all(time.sleep, items, scheduler=cluster.address)
    assert next(results) is None
    cluster.kill_one_at_work()
    assert [*results] == [None] * 59
    assert [*run_all(neg, range(100), scheduler=cluster.address, chunk=7)] == [-x for x in range(100)]


def test_a_cluster_that_cannot_work_is_told_in_one_line(cluster, tmp_path, monkeypatch):
    def complaint() -> str:
        with pytest.raises(InputError) as raised:
            list(run_all(neg, [1], scheduler=cluster.address))
        return str(raised.value)

    monkeypatch.setattr("verify.parallel.cluster.SECONDS_FOR_WORKERS", 1)
    address = cluster.address
    assert complaint() == f"scheduler: the scheduler at {address} has no workers; start one: dask worker {address}"
    monkeypatch.setattr("verify.parallel.cluster.SECONDS_FOR_WORKERS", PATIENCE)
    older, without = tmp_path / "older.py", tmp_path / "without.py"
    older.write_text("import verify; verify.__version__ = '0.0'")
    without.write_text("import sys; sys.modules['verify'] = None")
    cluster.start_workers(1, "--preload", older)
    assert "a worker of the cluster has sidecheck 0.0 instead of" in complaint()
    cluster.kill("worker-0")
    cluster.start_workers(1, "--preload", without)
    assert "a worker of the cluster has no sidecheck; install the same versions everywhere" in complaint()


@pytest.mark.parametrize("lost", ["workers", "scheduler"])
def test_a_lost_cluster_ends_the_wait(cluster, monkeypatch, capfd, lost):
    cluster.start_workers(1)
    results = run_all(time.sleep, [0.01, 60, 60], scheduler=cluster.address)
    assert next(results) is None
    monkeypatch.setattr("verify.parallel.cluster.SECONDS_FOR_WORKERS", 1)
    victim = cluster.workers["worker-0"] if lost == "workers" else cluster.scheduler
    victim.send_signal(signal.SIGKILL)
    with pytest.raises(UndecidedError, match=r"the scheduler at tcp://\S+ (was lost|has lost all its workers)"):
        next(results)
    assert capfd.readouterr().err == ""


@pytest.mark.parametrize("address", ["nonsense", "127.0.0.1", "http://127.0.0.1:1", "tcp://127.0.0.1:9"])
def test_an_address_where_nothing_answers_is_named(monkeypatch, address):
    monkeypatch.setattr("verify.parallel.cluster.SECONDS_TO_CONNECT", 0.5)
    with pytest.raises(InputError, match=rf"scheduler: no scheduler answers at {address}: .*; give the address of"):
        list(run_all(neg, [1], scheduler=address))


def test_without_dask_the_advice_names_the_extra(monkeypatch):
    monkeypatch.setitem(sys.modules, "distributed", None)
    with pytest.raises(InputError, match=r'a scheduler needs Dask, which is not installed; run pip install "\.\[clus'):
        list(run_all(neg, [1], scheduler="tcp://127.0.0.1:8786"))


def test_a_worker_with_other_engines_is_refused():
    other = (("sidecheck", "0.0"), *versions()[1:])
    with pytest.raises(InputError, match=r"a worker of the cluster has sidecheck \S+ instead of 0\.0"):
        do_checked(other, neg, (1,))
