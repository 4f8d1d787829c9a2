"""Every case file of the casebook can be read, says what it expects, and names where it comes from."""

from pathlib import Path

import pytest

import verify

ROOT = Path(__file__).parents[1] / "casebook"
FILES = sorted(ROOT.rglob("*.case.toml"))
VERDICTS = {"proved", "agrees", "last digit", "differs", "refuted", "undecided"}


@pytest.mark.parametrize(
    "path", FILES, ids=lambda path: f"{path.parent.name}/{path.name}"[: -len(".case.toml")]
)
def test_case_file(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    case = verify.read_case(path, text)
    assert case.title
    assert case.expect["verdict"] in VERDICTS
    assert ("step" in case.expect) == (case.expect["verdict"] == "refuted")
    if path.parent.name in ("published", "numerics"):
        assert case.source
    if path.parent.name == "demo":
        assert "Invented" in text


def test_there_are_many_and_no_two_are_the_same() -> None:
    assert len(FILES) >= 120
    asked = [path.read_text(encoding="utf-8").partition("[density]")[2] for path in FILES]
    assert len(set(asked)) == len(asked)
