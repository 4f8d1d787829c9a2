"""``sidecheck recheck`` on files that are no certificates; acceptance is tested beside the checker itself."""

import json
import subprocess
import sys


def test_what_is_no_certificate_is_malformed(sidecheck_here, tmp_path) -> None:
    path = tmp_path / "x.cert.json"
    for text in ("", "{}", "[1, 2", '{"_type": 1}', "\x00"):
        path.write_text(text)
        done = sidecheck_here("recheck", str(path))
        assert done.returncode == 2
        assert done.stdout.startswith("MALFORMED")


def test_json_is_one_object(sidecheck_here, tmp_path) -> None:
    path = tmp_path / "x.cert.json"
    path.write_text("{}")
    answer = json.loads(sidecheck_here("recheck", str(path), "--json").stdout)
    assert (answer["verdict"], answer["status"]) == ("malformed", 2)


def test_missing_files_are_one_line(sidecheck_here, tmp_path) -> None:
    path = tmp_path / "x.cert.json"
    path.write_text("{}")
    for words in (["no-such.cert.json"], [str(path), "--case", "no-such.case.toml"]):
        done = sidecheck_here("recheck", *words)
        assert done.returncode == 2
        assert done.stderr.count("\n") == 1


def test_nothing_heavy_is_loaded() -> None:

    code = (
        "import sys; from verify.cli import main; main(['recheck', 'README.md']); "
        "print([m for m in ('sympy', 'flint', 'mpmath', 'numpy', 'scipy') if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.splitlines()[-1] == "[]"
