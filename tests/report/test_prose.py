"""Sentences with formulas in them."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from verify.report.math_text import plain
from verify.report.page_blocks import Math, Text
from verify.report.prose import prose


def marked(text: str, *names: str) -> str:
    return "".join(
        f"<{plain(run.box)}>" if isinstance(run, Math) else run.text
        for run in prose(text, names)
        if isinstance(run, Math | Text)
    )


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        (
            "Q(p) = log(1 - p) is strictly decreasing for 0 < p < 1",
            "<Q(p) = log(1 − p)> is strictly decreasing for <0 < p < 1>",
        ),
        ("sign of Q'(p) = -1/(1 - p)", "sign of <Q′(p) = −1/(1 − p)>"),
        ("binomial theorem, DLMF 15.4.6", "binomial theorem, DLMF 15.4.6"),
        ("the 3-fold convolution agrees to 30 digits", "the 3-fold convolution agrees to 30 digits"),
        ("the support integers >= 0 does not depend on p", "the support integers ≥ 0 does not depend on <p>"),
        ("T has the law Poisson(mean = p)", "<T> has the law Poisson(mean = <p>)"),
        ("p <= 3/5 or p >= 9/10", "<p ≤ 3/5> or <p ≥ 9/10>"),
        ("zero-one p-value p", "zero-one p-value <p>"),
    ],
)
def test_sentences(text: str, shown: str) -> None:
    assert marked(text, "p", "x") == shown


@given(st.text(max_size=60))
def test_any_text_passes(text: str) -> None:
    runs = prose(text, ["x", "p"])
    assert all(isinstance(run, Math | Text) for run in runs)
    if not any(isinstance(run, Math) for run in runs):
        assert marked(text, "x", "p") == text.replace("<=", "≤").replace(">=", "≥") or "oo" in text
