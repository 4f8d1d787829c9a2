"""Memory of work done: proven results kept in a directory, and proved again when they are read.

``solver(cache)`` is the hook: a function like :func:`verify.solution.solve.solve`, with a memory when ``cache`` names
a directory.
"""

from verify.memory.remembered import Remembered as Remembered
from verify.memory.remembered import cache_of as cache_of
from verify.memory.remembered import solver as solver

__all__ = ["Remembered", "cache_of", "solver"]
