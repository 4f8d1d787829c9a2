"""Every case file of the casebook can be read, says what it expects, and names where it comes from."""

from pathlib import Path

import pytest

from verify.problem.casefile import read_case_text

ROOT = Path(__file__).parents[1] / "casebook"
FILES = sorted(ROOT.rglob("*.case.toml"))
VERDICTS = {"proved", "checked numerically", "agrees", "last digit", "differs", "refuted", "unusable"}


@pytest.mark.parametrize(
    "path", FILES, ids=lambda path: f"{path.parent.name}/{path.name}"[: -len(".case.toml")]
)
def test_case_file(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    case = read_case_text(path, text)
    expect = case.expect
    assert case.tables["title"]
    assert expect["verdict"] in VERDICTS
    assert ("step" in expect) == (expect["verdict"] == "refuted")
    assert ("error" in expect) == ("key" in expect) == (expect["verdict"] == "unusable")
    if expect["verdict"] in ("proved", "agrees", "last digit"):
        assert expect["grade"] in ("proved", "enclosed", "checked numerically")
    if expect["verdict"] == "checked numerically":
        assert expect["grade"] == "checked numerically"
    if expect["verdict"] in ("proved", "checked numerically") and path.parent.name != "published":
        assert "c" in expect or {"c1", "c2"} <= expect.keys()
    if path.parent.name in ("published", "numerics"):
        assert case.tables["source"]
    if path.parent.name == "demo":
        assert "Invented" in text


def test_there_are_many_and_no_two_are_the_same() -> None:
    assert len(FILES) >= 120
    asked = [path.read_text(encoding="utf-8").partition("[density]")[2] for path in FILES]
    assert len(set(asked)) == len(asked)
