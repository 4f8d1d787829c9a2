"""JUnit reports against a strict schema: never skipped, never green by mistake."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from xml.etree import ElementTree

import pytest
import xmlschema
from hypothesis import given
from hypothesis import strategies as st

from verify.casebook.junit import clean, junit_xml
from verify.casebook.outcome import Message, Outcome, Result

SCHEMA = xmlschema.XMLSchema(str(Path(__file__).with_name("junit.xsd")))


def _read(results: Sequence[Result]) -> ElementTree.Element:
    data = junit_xml(results)
    SCHEMA.validate(data.decode())
    return ElementTree.fromstring(data)


def _result(outcome: Outcome, path: str = "book/demo/a.case.toml", text: str = "c1: expected 1, found 2") -> Result:
    messages = () if outcome is Outcome.PASS else (Message("", text),)
    return Result("demo/a", path, outcome, messages=messages, seconds=1.23456)


@pytest.mark.parametrize(
    ("outcome", "tag", "kind"),
    [
        (Outcome.DIFFERS, "failure", "differs"),
        (Outcome.REFUTED, "failure", "differs"),
        (Outcome.UNDECIDED, "failure", "undecided"),
        (Outcome.UNUSABLE, "error", "unusable"),
        (Outcome.INTERNAL, "error", "internal"),
    ],
)
def test_everything_but_a_pass_is_red(outcome: Outcome, tag: str, kind: str) -> None:
    root = _read([_result(outcome)])
    (case,) = root.iter("testcase")
    (reason,) = case
    assert (reason.tag, reason.attrib["type"]) == (tag, kind)
    assert "expected 1, found 2" in (reason.text or "")
    assert root.attrib["failures" if tag == "failure" else "errors"] == "1"
    assert case.attrib == {"classname": "book.demo", "name": "a", "time": "1.235"}


def test_a_pass_has_nothing_inside() -> None:
    (case,) = _read([_result(Outcome.PASS)]).iter("testcase")
    assert len(case) == 0


def test_one_suite_a_folder_and_counts_that_add_up() -> None:
    names = ["b/x/1", "b/x/2", "b/y/1", "b/x/3", "1", "b.x/1"]
    paths = [f"{name}.case.toml" for name in names]
    outcomes = [Outcome.PASS, Outcome.UNDECIDED, Outcome.UNUSABLE, Outcome.REFUTED, Outcome.PASS, Outcome.PASS]
    root = _read([_result(outcome, path) for outcome, path in zip(outcomes, paths, strict=True)])
    assert [suite.attrib["name"] for suite in root] == ["b.x", "b.y", "b.x (2)", ".", "b.x (3)"]
    for key in ("tests", "failures", "errors"):
        assert int(root.attrib[key]) == sum(int(suite.attrib[key]) for suite in root)
    assert (root.attrib["failures"], root.attrib["errors"]) == ("2", "1")


@given(st.lists(st.tuples(st.sampled_from(Outcome), st.text(max_size=40), st.text(max_size=8)), min_size=1, max_size=6))
def test_any_text_and_any_name_give_a_valid_report(parts: list[tuple[Outcome, str, str]]) -> None:
    results = [_result(outcome, f"book/{name}.case.toml", text) for outcome, text, name in parts]
    root = _read(results)
    assert len(list(root.iter("testcase"))) == len(results)


@pytest.mark.parametrize("bad", ["\x00", "\x08", "\x1b", "\x7f", "\ud800", "\ufffe", "\uffff"])
def test_what_xml_cannot_hold_is_stripped(bad: str) -> None:
    assert clean(f"a{bad}b\n") == "ab\n"


def test_the_schema_is_strict() -> None:
    good = junit_xml([_result(Outcome.DIFFERS)]).decode()
    assert SCHEMA.is_valid(good)
    for old, new in [
        ('time="1.235"', 'time="1.2346"'),
        ('type="differs"', 'type="skipped"'),
        ("<failure", "<properties /><failure"),
        ('name="a"', 'name=""'),
        ('errors="0"', ""),
    ]:
        assert old in good
        assert not SCHEMA.is_valid(good.replace(old, new))
    doubled = good.replace("</testsuite>", '<testcase classname="book.demo" name="a" time="1" /></testsuite>')
    assert not SCHEMA.is_valid(doubled)
