"""Shared by all tests: quick Hypothesis profiles and the folder's own helper modules."""

import sys
from pathlib import Path

from hypothesis import HealthCheck, settings

settings.register_profile("quick", max_examples=25, deadline=None, suppress_health_check=[HealthCheck.too_slow])
settings.load_profile("quick")

for folder in ("tests", "tests/derivation", "tests/solution"):
    sys.path.insert(0, str(Path(__file__).resolve().parents[1] / folder))
