"""Memory of work done: proven results kept in a directory, and proved again when they are read.

``solver(cache)`` is the hook: a function like :func:`verify.solution.solve.solve`, with a memory when ``cache`` names
a directory. ``watched(option, tell)`` gives that directory for a run, and says when it was damaged.
"""

from verify.memory.remembered import Remembered as Remembered
from verify.memory.remembered import solver as solver
from verify.memory.watched import cache_of as cache_of
from verify.memory.watched import watched as watched

__all__ = ["Remembered", "cache_of", "solver", "watched"]
