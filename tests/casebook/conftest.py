"""What the tests of the casebook share."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

collect_ignore = ["example_project"]

COIN = """
title = "Coin"
[density]
formula = "p**x * (1 - p)**(1 - x)"
variable = "x"
support = "integers 0..1"
parameter = "p"
space = "0 < p < 1"
[problem]
null = "p <= 1/2"
alpha = "0.05"
n = 10
"""

ROOTS = """
title = "Square roots: sums of them lie on no lattice"
[density]
kernel = "exp(t*sqrt(x + 2))"
variable = "x"
support = "integers 0..4"
parameter = "t"
space = "reals"
[problem]
null = "t <= 0"
alpha = "0.05"
n = 3
"""


@pytest.fixture
def book(tmp_path: Path) -> Callable[..., Path]:
    """Return a function that writes cases: the name, then lines to add to ten tosses of a coin (or a whole text)."""

    def write(**cases: str) -> Path:
        folder = tmp_path / "book"
        folder.mkdir(exist_ok=True)
        for name, text in cases.items():
            whole = text if "[density]" in text else COIN + text
            (folder / f"{name}.case.toml").write_text(whole, encoding="utf-8")
        return folder

    return write


@pytest.fixture(scope="session")
def mixed(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A book with a case of every outcome but an internal error."""
    folder = tmp_path_factory.mktemp("mixed") / "mixed"
    folder.mkdir()
    texts = {
        "a-passes": COIN + '[expect]\nverdict = "proved"\nc = "8"\n',
        "b-differs": COIN + '[expect]\nc = "7"\n',
        "c-claim-differs": COIN + '[claim]\nc = "9"\ngamma = "0.893"\n',
        "d-refuted": COIN.replace("p**x *", "2*p**x *"),
        "e-unusable": COIN.replace('"0.05"', '"5"'),
        "f-undecided": ROOTS + '[expect]\nverdict = "undecided"\n',
        "g-expected-refusal": COIN.replace("p**x *", "2*p**x *") + '[expect]\nverdict = "refuted"\n',
    }
    for name, text in texts.items():
        (folder / f"{name}.case.toml").write_text(text, encoding="utf-8")
    return folder
