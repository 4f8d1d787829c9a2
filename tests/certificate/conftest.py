"""The independent maker, its cases, and the certificates it makes (once a session)."""

from __future__ import annotations

import importlib.util
import sys
from functools import cache
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest

HERE = Path(__file__).parent


@cache
def load(name: str) -> ModuleType:
    spec = importlib.util.spec_from_file_location(f"certificate_{name}", HERE / f"{name}.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module
    spec.loader.exec_module(module)
    return module


@pytest.fixture(scope="session")
def maker() -> ModuleType:
    return load("maker")


@pytest.fixture(scope="session")
def certificates(maker: ModuleType) -> dict[str, dict[str, Any]]:
    return {name: maker.make(case) for name, case in load("cases").all_cases(maker.Case).items()}


@pytest.fixture(scope="session")
def short(maker: ModuleType) -> dict[str, dict[str, Any]]:
    """The same with few digits and a short rounding table, where many copies are checked."""
    cases = load("cases").all_cases(maker.Case)
    for case in cases.values():
        case.digits, case.tolerance = 12, "1/200"
    return {name: maker.make(case) for name, case in cases.items()}
