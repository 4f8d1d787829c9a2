"""Many machines: a Dask scheduler that runs already, by its address."""

from __future__ import annotations

from collections import deque
from collections.abc import Callable, Iterable, Iterator
from concurrent.futures import CancelledError
from functools import cache
from itertools import islice
from typing import Any

from verify.errors import InputError, UndecidedError
from verify.parallel.batch import batches, do

SECONDS_TO_CONNECT = 30
AHEAD = 256
"""Batches handed out ahead of the one waited for."""

ENGINES = ("sympy", "mpmath", "python-flint", "numpy", "scipy")
Versions = tuple[tuple[str, str], ...]


def on_cluster(
    function: Callable[[Any], Any], items: Iterable[Any], scheduler: str, chunk: int
) -> Iterator[Any]:
    """Yield the results in order; Dask itself gives the work of a lost worker to another one."""
    with _connect(scheduler) as client:
        from distributed import KilledWorker
        from distributed.comm.core import CommClosedError

        waiting: deque[Any] = deque()
        work = batches(items, chunk)
        try:
            while True:
                for batch in islice(work, AHEAD - len(waiting)):
                    waiting.append(client.submit(do_checked, engines(), function, batch, pure=False))
                if not waiting:
                    return
                yield from waiting.popleft().result()
        except KilledWorker as error:
            raise UndecidedError(f"worker after worker died over one piece of work: {error}") from None
        except (CommClosedError, CancelledError):
            raise UndecidedError(f"the scheduler at {scheduler} was lost") from None


def _connect(scheduler: str) -> Any:
    """Return a client of a scheduler that has a worker."""
    try:
        from distributed import Client
    except ModuleNotFoundError:
        right = 'pip install "sidecheck[cluster]"'
        raise InputError("a scheduler needs Dask, which is not installed", right, key="scheduler") from None
    make: Any = Client
    try:
        client = make(scheduler, timeout=SECONDS_TO_CONNECT, set_as_default=False)
    except (OSError, ValueError, TypeError) as error:
        right = "give the address of a running Dask scheduler, e.g. tcp://127.0.0.1:8786"
        raise InputError(f"no scheduler answers at {scheduler}: {error}", right, key="scheduler") from None
    try:
        client.wait_for_workers(1, timeout=SECONDS_TO_CONNECT)
    except TimeoutError:
        client.close()
        right = f"start one: dask worker {scheduler}"
        raise InputError(f"the scheduler at {scheduler} has no workers", right, key="scheduler") from None
    return client


@cache
def engines() -> Versions:
    """Names and versions of what a result depends on; a worker with others is refused."""
    from importlib.metadata import PackageNotFoundError, version

    import verify

    def found(name: str) -> str:
        try:
            return version(name)
        except PackageNotFoundError:
            return "none"

    return (("sidecheck", verify.__version__), *((name, found(name)) for name in ENGINES))


def do_checked(wanted: Versions, function: Callable[[Any], Any], batch: tuple[Any, ...]) -> list[Any]:
    """Work on a batch on another machine, if that has the same engines."""
    pairs = zip(engines(), wanted, strict=True)
    others = [f"{name} {here} instead of {there}" for (name, here), (_, there) in pairs if here != there]
    if others:
        wrong = f"a worker of the cluster has {', '.join(others)}"
        raise InputError(wrong, "install the same versions everywhere", key="scheduler")
    return do(function, batch)
