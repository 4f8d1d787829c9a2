"""Many machines: a Dask scheduler that runs already, by its address."""

from __future__ import annotations

import logging
from collections import deque
from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import CancelledError
from contextlib import contextmanager, suppress
from itertools import islice
from typing import Any

from verify.errors import InputError, UndecidedError, missing_extra
from verify.parallel.batch import Lost, batches, do, given_up
from verify.versions import Versions, versions

SECONDS_TO_CONNECT, SECONDS_FOR_WORKERS = 10, 30
"""How long a scheduler may take to answer, and its first worker to come."""
AHEAD = 256
"""Batches handed out ahead of the one waited for."""


def on_cluster(
    function: Callable[[Any], Any], items: Iterable[Any], scheduler: str, chunk: int, lost: Lost | None
) -> Iterator[Any]:
    """Yield the results in order; Dask itself gives the work of a lost worker to another one."""
    with _connect(scheduler) as client, _only_our_words():
        waiting: deque[tuple[Any, Any]] = deque()
        work = batches(items, chunk)
        while True:
            for batch in islice(work, AHEAD - len(waiting)):
                waiting.append((batch, client.submit(do_checked, versions(), function, batch, pure=False)))
            if not waiting:
                return
            yield from _results(client, scheduler, *waiting.popleft(), lost)


def _results(client: Any, scheduler: str, batch: tuple[Any, ...], answer: Any, lost: Lost | None) -> list[Any]:
    """Wait for the results of a batch, as long as there are workers."""
    from distributed import KilledWorker
    from distributed.comm.core import CommClosedError

    try:
        while not answer.done():
            with suppress(TimeoutError):
                answer.result(timeout=SECONDS_FOR_WORKERS)
            if not (answer.done() or client.nthreads()):
                raise UndecidedError(f"the scheduler at {scheduler} has lost all its workers")
        results: list[Any] = answer.result()
        return results
    except KilledWorker:
        return given_up(batch, "worker after worker", lost)
    except (CommClosedError, CancelledError):
        raise UndecidedError(f"the scheduler at {scheduler} was lost") from None


def _connect(scheduler: str) -> Any:
    """Return a client of a scheduler that has a worker."""
    try:
        from distributed import Client
        from distributed.comm.addressing import get_address_host_port
    except ModuleNotFoundError:
        raise missing_extra("a scheduler needs Dask", "cluster", key="scheduler") from None
    make: Any = Client
    try:
        get_address_host_port(scheduler)  # a client of no address would take a minute to be deleted
        client = make(scheduler, timeout=SECONDS_TO_CONNECT, set_as_default=False)
    except (OSError, ValueError, TypeError) as error:
        right = "give the address of a running Dask scheduler, e.g. tcp://127.0.0.1:8786"
        raise InputError(f"no scheduler answers at {scheduler}: {error}", right, key="scheduler") from None
    try:
        client.wait_for_workers(1, timeout=SECONDS_FOR_WORKERS)
    except TimeoutError:
        client.close()
        right = f"start one: dask worker {scheduler}"
        raise InputError(f"the scheduler at {scheduler} has no workers", right, key="scheduler") from None
    _require_this_package(client)
    return client


def _require_this_package(client: Any) -> None:
    """Look for this package on the workers: one without it would leave the cluster with the first piece of work."""

    def has(name: str) -> bool:  # within another function, so that it travels whole and not by its name in here
        from importlib.util import find_spec

        return find_spec(name) is not None

    answers = client.run(has, __name__.partition(".")[0], on_error="ignore")  # of those that have not died since
    if not all(answers.values()):
        client.close()
        raise _other_software("a worker of the cluster has no sidecheck")


@contextmanager
def _only_our_words() -> Iterator[None]:
    """Keep Dask's log of a lost connection off stderr: what it means is said by what is raised."""
    log = logging.getLogger("distributed.client")
    before, log.disabled = log.disabled, True
    try:
        yield
    finally:
        log.disabled = before


def do_checked(wanted: Versions, function: Callable[[Any], Any], batch: tuple[Any, ...]) -> list[Any]:
    """Work on a batch on another machine, if that has the same engines."""
    pairs = zip(versions(), wanted, strict=True)
    others = [f"{name} {here} instead of {there}" for (name, here), (_, there) in pairs if here != there]
    if others:
        raise _other_software(f"a worker of the cluster has {', '.join(others)}")
    return do(function, batch)


def _other_software(wrong: str) -> InputError:
    return InputError(wrong, "install the same versions everywhere", key="scheduler")
