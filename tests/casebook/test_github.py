"""Annotations and the step summary: the right form, never more than ten, nothing that breaks out of its place."""

from __future__ import annotations

import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from verify.casebook.github import annotation_lines, step_summary
from verify.casebook.outcome import Message, Outcome, Result

COMMAND = re.compile(r"::error ((?:file|line|title)=[^,:\r\n]*)(,(?:file|line|title)=[^,:\r\n]*)*::[^\r\n]*")


def _results(count: int, outcome: Outcome = Outcome.DIFFERS, text: str = "off") -> list[Result]:
    message = Message("expect.c", text, 3)
    return [Result(f"demo/{i}", f"demo/{i}.case.toml", outcome, messages=(message,)) for i in range(count)]


@pytest.mark.parametrize(("count", "lines"), [(0, 0), (1, 1), (9, 9), (10, 10), (250, 10)])
def test_nine_and_how_many_more(count: int, lines: int) -> None:
    shown = annotation_lines([*_results(count), Result("demo/good", "good.case.toml", Outcome.PASS)])
    assert len(shown) == lines
    assert all(COMMAND.fullmatch(line) for line in shown)
    if count > 9:
        assert f"::{count - 9} more" in shown[-1]


@given(st.text(max_size=60), st.text(st.characters(codec="utf-8", exclude_characters="\0"), max_size=20))
def test_any_text_stays_in_its_place(text: str, name: str) -> None:
    result = Result(name, f"x/{name}.case.toml", Outcome.UNDECIDED, messages=(Message("", text, 1),))
    (line,) = annotation_lines([result])
    assert line.count("\n") == line.count("\r") == 0
    properties = line.removeprefix("::error ").partition("::")[0]
    assert [part.partition("=")[0] for part in properties.split(",")] == ["file", "line", "title"]


def test_the_place_is_named_from_the_root_of_the_repository(monkeypatch: pytest.MonkeyPatch, tmp_path) -> None:
    monkeypatch.setenv("GITHUB_WORKSPACE", str(tmp_path))
    result = Result("a", str(tmp_path / "book/a.case.toml"), Outcome.REFUTED)
    assert "file=book/a.case.toml," in annotation_lines([result])[0]


@pytest.mark.parametrize("outcome", [outcome for outcome in Outcome if outcome is not Outcome.PASS])
def test_the_summary_shows_what_failed_first(outcome: Outcome) -> None:
    text = step_summary([Result("demo/good", "g", Outcome.PASS), *_results(1, outcome, "a|b <script> `x`")], left=2)
    rows = [line for line in text.splitlines() if line.startswith("| demo")]
    assert f"**{outcome.value}**" in rows[0]
    assert "demo/good" in rows[1]
    assert "2 not run" in text
    assert "<script>" not in text
    assert all(row.count("|") == 7 for row in rows)


def test_a_long_summary_is_cut_and_says_so() -> None:
    text = step_summary(_results(1000, text="x" * 5000))
    assert "and 700 more" in text
    assert len(text.encode()) < 1_000_000
