"""Shared by all tests: quick Hypothesis profiles and the folder's own helper modules."""

import sys
from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING

import pytest
from hypothesis import HealthCheck, settings

settings.register_profile("quick", max_examples=25, deadline=None, suppress_health_check=[HealthCheck.too_slow])
settings.load_profile("quick")

if TYPE_CHECKING:
    from dask_cluster import Cluster

for folder in ("tests", "tests/derivation", "tests/solution"):
    sys.path.insert(0, str(Path(__file__).resolve().parents[1] / folder))


@pytest.fixture
def cluster(tmp_path_factory: pytest.TempPathFactory) -> "Iterator[Cluster]":
    """A real Dask scheduler on this machine, on which a test starts workers and kills them."""
    from dask_cluster import Cluster

    made = Cluster(tmp_path_factory.mktemp("cluster"))
    yield made
    made.stop()
