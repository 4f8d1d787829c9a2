"""``sidecheck casebook`` as a command: statuses, files, streams."""

from __future__ import annotations

import json
import re
import subprocess
import sys
from pathlib import Path
from xml.etree import ElementTree

import pytest

ROOT = Path(__file__).parents[2]
COIN = """
[density]
formula = "p**x * (1 - p)**(1 - x)"
variable = "x"
support = "integers 0..1"
parameter = "p"
space = "0 < p < 1"
[problem]
null = "p <= 1/2"
alpha = "{alpha}"
n = 10
[expect]
c = "{c}"
"""


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "good.case.toml").write_text(COIN.format(alpha="0.05", c="8"), encoding="utf-8")
    return tmp_path


def _spoil(folder: Path, name: str, alpha: str = "0.05", c: str = "7") -> None:
    (folder / f"{name}.case.toml").write_text(COIN.format(alpha=alpha, c=c), encoding="utf-8")


def test_all_pass(sidecheck_here, folder: Path) -> None:
    done = sidecheck_here("casebook", str(folder))
    assert done.returncode == 0
    assert "1 case: 1 pass" in done.stdout
    assert done.stderr == ""


def test_a_difference_is_1_and_an_unusable_case_2(sidecheck_here, folder: Path) -> None:
    _spoil(folder, "unusable", alpha="5")
    assert sidecheck_here("casebook", str(folder)).returncode == 2
    _spoil(folder, "off")
    done = sidecheck_here("casebook", str(folder))
    assert done.returncode == 1
    assert "expect.c: expected 7, found 8" in done.stdout
    assert sidecheck_here("casebook", str(folder), "--only", "good").returncode == 0


@pytest.mark.parametrize(
    "words",
    [("no-such-folder",), (".", "--only", "nothing-like-this"), (".", "--workers", "0"), (".", "--workers", "x"),
     (".", "--junit", "no/such/folder/x.xml"), (".", "--jsonl", "."), ()],
)  # fmt: skip
def test_a_command_line_that_cannot_be_used_is_2_on_one_line(sidecheck_here, folder: Path, monkeypatch, words) -> None:
    monkeypatch.chdir(folder)
    done = sidecheck_here("casebook", *words)
    assert done.returncode == 2
    assert done.stderr.count("\n") == 1
    assert done.stdout == ""


def test_json_alone_on_stdout(sidecheck_here, folder: Path, monkeypatch) -> None:
    _spoil(folder, "off")
    monkeypatch.setenv("GITHUB_STEP_SUMMARY", str(folder / "summary.md"))
    done = sidecheck_here("casebook", str(folder), "--json", "--github")
    report = json.loads(done.stdout)
    assert (report["status"], report["counts"], report["not_run"]) == (1, {"pass": 1, "differs": 1}, 0)
    assert report["cases"][1]["messages"][0]["text"] == "expected 7, found 8"
    assert report["cases"][0]["cutoffs"]["c"] == {"lower": "8", "upper": "8"}
    assert done.stderr.startswith("::error file=")


def test_reports(sidecheck_here, folder: Path, monkeypatch) -> None:
    _spoil(folder, "off")
    _spoil(folder, "off-too")
    summary = folder / "summary.md"
    summary.write_text("from an earlier command\n", encoding="utf-8")
    monkeypatch.setenv("GITHUB_STEP_SUMMARY", str(summary))
    junit, jsonl = folder / "j.xml", folder / "l.jsonl"
    done = sidecheck_here(
        "casebook", str(folder), "--github", "--junit", str(junit), "--jsonl", str(jsonl), "--fail-fast"
    )
    assert done.returncode == 1
    assert "::error file=" in done.stdout
    text = summary.read_text(encoding="utf-8")
    assert text.startswith("from an earlier command\n")
    assert "2 cases: 1 pass, 1 differs; 1 not run" in text
    assert ElementTree.parse(junit).getroot().attrib["failures"] == "1"
    lines = jsonl.read_text(encoding="utf-8").splitlines()
    assert [json.loads(line)["outcome"] for line in lines] == ["pass", "differs"]
    assert not [path for path in folder.iterdir() if path.name.startswith(".")]


def test_a_cluster_that_loses_a_worker_changes_no_byte(folder: Path, cluster) -> None:
    """Alone, with two processes, and on a cluster whose worker is killed at work: the same reports and table."""
    for number in range(12):  # each about a parameter of its own, so that each is derived
        text = COIN.format(alpha=f"0.{2 * number + 5:02d}", c=8 - number // 3)
        (folder / f"coin-{number:02d}.case.toml").write_text(re.sub(r"\bp\b", f"p{number}", text), encoding="utf-8")
    _spoil(folder, "unusable", alpha="5")
    ways = {"alone": (), "two": ("--workers", "2"), "cluster": ("--scheduler", cluster.start_workers(2).address)}
    seen = []
    for name, words in ways.items():
        reports = [folder / f"{name}.{kind}" for kind in ("jsonl", "xml")]
        command = ["casebook", str(folder), "--jsonl", str(reports[0]), "--junit", str(reports[1]), *words]
        running = subprocess.Popen([sys.executable, "-m", "verify", *command], stdout=subprocess.PIPE, cwd=ROOT)
        if name == "cluster":
            cluster.kill_one_at_work()
        table, _ = running.communicate(timeout=120)
        untimed = re.sub(rb' time="[0-9.]+"', b"", reports[1].read_bytes())
        seen.append((running.returncode, table, reports[0].read_bytes(), untimed))
    assert seen[0][0] == 1
    assert b"14 cases" in seen[0][1]
    assert seen == [seen[0]] * 3


def test_a_whole_process_with_two_workers(sidecheck, folder: Path) -> None:
    _spoil(folder, "off")
    done = sidecheck("casebook", str(folder), "--workers", "2")
    assert done.returncode == 1
    assert "2 cases: 1 pass, 1 differs" in done.stdout
    assert "Traceback" not in done.stderr


def test_the_table_is_shown_where_a_report_finds_no_room(folder: Path) -> None:
    resource = pytest.importorskip("resource")
    _spoil(folder, "bad")
    done = subprocess.run(
        [sys.executable, "-B", "-m", "verify", "casebook", str(folder), "--junit", str(folder / "j.xml")],
        capture_output=True,
        text=True,
        check=False,
        preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_FSIZE, (16, 16)),
    )
    assert done.returncode == 2
    assert "2 cases: 1 pass, 1 differs" in done.stdout
    assert "j.xml: --junit: cannot write: File too large" in done.stderr
    assert not (folder / "j.xml").exists()
