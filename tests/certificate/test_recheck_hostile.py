# ruff: noqa: E501 (tables of cases, one a line)
"""Hostile files end within the resource limit, with status 2 or 3 and without a traceback."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest

from verify.certificate import recheck

Change = Callable[[dict[str, Any]], None]


def setter(*path: Any, value: Any) -> Change:
    def change(predicate: dict[str, Any]) -> None:
        node: Any = predicate
        for key in path[:-1]:
            node = node[key]
        node[path[-1]] = value

    return change


def window(points: int) -> Change:
    def change(predicate: dict[str, Any]) -> None:
        predicate["test"] |= {"y2": points, "c2": str(points)}

    return change


HOSTILE: dict[str, tuple[str, Change, tuple[int, ...]]] = {
    "a window of 1e12 terms": ("poisson outside", window(10**12), (3,)),
    "a mean of 1e15": ("poisson point", setter("problem", "n", value=10**14), (1, 3)),
    "1e14 trials": ("binomial point", setter("problem", "n", value=10**14), (1, 3)),
    "a power tower": ("poisson outside", setter("law", "parameters", "mean", value="9**9**9**9"), (1, 2, 3)),
    "a huge exponent": ("poisson outside", setter("law", "parameters", "mean", value="2**(10**9)"), (1, 2, 3)),
    "a huge exponential": ("poisson outside", setter("law", "parameters", "mean", value="exp(exp(100))"), (1, 2, 3)),
    "a huge factorial": ("poisson outside", setter("problem", "density", "formula", value="factorial(10**9)"), (3,)),
    "a huge binomial": ("poisson outside", setter("problem", "density", "formula", value="binomial(10**9, 10**8)"), (3,)),
    "a huge gamma function": ("gamma point", setter("problem", "density", "formula", value="gamma(a*10**30+1/3)*b"), (3,)),
    "deep brackets": ("poisson outside", setter("law", "parameters", "mean", value="(" * 1500 + "1" + ")" * 1500), (2,)),
    "a long expression": ("poisson outside", setter("law", "parameters", "mean", value="1+" * 10**6 + "1"), (2,)),
    "a quotient of many powers": ("poisson outside", setter("law", "parameters", "mean", value="*".join(["2**59000/3**37000"] * 200)), (1, 3)),
    "many signs": ("poisson outside", setter("law", "parameters", "mean", value="-" * 3900 + "1"), (1, 2)),
    "many powers": ("poisson outside", setter("law", "parameters", "mean", value="**".join(["2"] * 900)), (1, 2, 3)),
    "a decimal exponent of 1e9": ("gamma point", setter("test", "c1", value={"lower": "1e-999999999", "upper": "1"}), (2,)),
    "a decimal exponent of 99999": ("gamma point", setter("test", "c1", value={"lower": "1e-99999", "upper": "1"}), (2, 3)),
    "a fraction of a million digits": ("poisson outside", setter("test", "c1", value="1" * 10**6), (2,)),
    "a shape of 1e18": ("gamma point", setter("problem", "n", value=10**14 * 3), (1, 3)),
    "a million digits asked": ("gamma point", setter("problem", "digits", value=10**6), (2,)),
    "a table raised to the power 1e9": ("table point", setter("problem", "n", value=10**9), (1, 3)),
    "a table raised to the power 1e6": ("table point", setter("problem", "n", value=10**6), (1, 3)),
    "an inverse Gaussian of huge shape": ("inverse Gaussian point", setter("problem", "n", value=10**12), (1, 3)),
    "a thousand rows": ("poisson outside", setter("rounding", "rows", value=[{}] * 1000), (2,)),
}  # fmt: skip


@pytest.fixture(autouse=True)
def _smaller_limit(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(recheck, "LIMIT", 2_000_000)


@pytest.mark.parametrize("name", sorted(HOSTILE))
def test_a_hostile_predicate_ends_early(maker: ModuleType, certificates: dict[str, Any], name: str) -> None:
    base, change, wanted = HOSTILE[name]
    predicate = json.loads(json.dumps(certificates[base]["predicate"]))
    change(predicate)
    status, lines = recheck.verdict(maker.canonical(maker.statement(predicate)))
    assert status in wanted, lines
    assert len(lines) == 1


@pytest.mark.parametrize(("data", "wanted"), [
    (b"[" * 100_000 + b"]" * 100_000, 3), (b'{"a":' * 50_000 + b"1" + b"}" * 50_000, 3), (b"1" * 10_000, 2), (b"", 2), (b"null", 2), (b"[]", 2),
    (b"{}", 2), (b"\xff\xfe", 2), (b'"\\ud800"', 2), (b" " * (recheck.FILE_LIMIT + 1), 3), (b'{"_type":1e999}', 2),
])  # fmt: skip
def test_a_hostile_file_ends_early(tmp_path: Path, data: bytes, wanted: int) -> None:
    path = tmp_path / "hostile.cert.json"
    path.write_bytes(data)
    assert recheck.main([str(path)]) == wanted


def test_misuse_has_a_usage_line(capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    assert recheck.main([]) == 2
    assert recheck.main(["--help"]) == 2
    assert recheck.main(["a", "--case"]) == 2
    assert "usage:" in capsys.readouterr().err
    assert recheck.main([str(tmp_path / "missing")]) == 2
