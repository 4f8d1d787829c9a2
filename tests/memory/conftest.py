"""A memory in an empty folder, and the folder's own helper module."""

import sys
from pathlib import Path

import pytest

from verify.memory import Remembered
from verify.memory.store import Store

sys.path.insert(0, str(Path(__file__).parent))


@pytest.fixture
def memory(tmp_path: Path) -> Remembered:
    return Remembered(Store(tmp_path))
