"""Whole-command runs of plan and decide."""

import json
import subprocess
import sys
from pathlib import Path

import jsonschema

ROOT = Path(__file__).resolve().parents[2]
CASE = str(ROOT / "casebook" / "demo" / "lot-release.case.toml")


def run(*words: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "verify", *words], capture_output=True, text=True, cwd=ROOT, check=False
    )


def schema(name: str) -> dict:
    return json.loads((ROOT / "verify" / "report" / "schemas" / f"{name}.schema.json").read_text())


def test_plan_as_text_and_json():
    text = run("plan", CASE, "--at", "10", "--power", "0.9")
    assert text.returncode == 0
    assert "n = 28: power 0.909" in text.stdout
    assert "Traceback" not in text.stderr
    form = run("plan", CASE, "--at", "10", "--power", "0.9", "--scan-to", "30", "--json")
    value = json.loads(form.stdout)
    jsonschema.validate(value, schema("plan"))
    assert value["n"] == 28


def test_decide_as_text_and_json():
    text = run("decide", CASE, "--data", "9,9,10,11,9,8,10,9,10,9")
    assert "V = 94" in text.stdout
    assert "with probability phi" in text.stdout
    form = run("decide", CASE, "--statistic", "94", "--u", "0.01", "--json", "--digits", "20")
    value = json.loads(form.stdout)
    jsonschema.validate(value, schema("decide"))
    assert value["after_randomisation"] == "reject"


def test_power_inside_the_null_is_refused_in_words():
    """lam = 7 and, at its edge, lam = 12: neither a small power nor a large one is planned there."""
    for at, power in (("7", "0.03"), ("7", "0.06"), ("12", "0.9")):
        done = run("plan", CASE, "--at", at, "--power", power)
        assert (done.returncode, done.stdout) == (2, "")
        assert f"{at} is in the null" in done.stderr
        assert "8 < lam < 12" in done.stderr


def test_misuse_is_one_line_and_status_2():
    for words in (("plan", CASE, "--at", "-3", "--power", "0.9"), ("plan", CASE, "--at", "10", "--power", "2"),
                  ("plan", CASE, "--at", "8", "--power", "0.5"),
                  ("decide", CASE, "--statistic", "9.5"), ("decide", CASE, "--data", "1,2")):  # fmt: skip
        done = run(*words)
        assert done.returncode == 2
        assert len(done.stderr.strip().splitlines()) == 1
        assert done.stdout == ""
