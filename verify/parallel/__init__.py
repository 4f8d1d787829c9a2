"""One function over many items, in this process, in several, or on a cluster: see :func:`run_all`."""

from verify.parallel.run import run_all as run_all

__all__ = ["run_all"]
