"""The memo: a section for each row that does not agree, the ledger, the caution; nothing in it is left unescaped."""

from html.parser import HTMLParser
from pathlib import Path

import pytest

from verify.cli.main import main
from verify.report.memo_blocks import Heading, Items, Paragraph, Rows, html, markdown

ROOT = Path(__file__).parents[2]
CASE, TABLE = (str(ROOT / "casebook" / "demo" / f"claims.{end}") for end in ("case.toml", "csv"))


@pytest.fixture(scope="module")
def memos(tmp_path_factory) -> dict[str, str]:
    folder, out = tmp_path_factory.mktemp("memo"), {}
    small = folder / "claims.csv"
    lines = Path(TABLE).read_text("utf-8").splitlines(keepends=True)
    small.write_text("".join([lines[0], lines[1], lines[18], lines[35], 'E1,lot-release,"<b>x</b>",1,,,,,,,\n']))
    for ending in ("md", "html"):
        assert main(["review", CASE, str(small), "--memo", str(folder / f"m.{ending}")]) == 1
        out[ending] = (folder / f"m.{ending}").read_text("utf-8")
    return out


def test_a_section_for_each_row_that_does_not_agree(memos) -> None:
    text = memos["md"]
    sections = [line for line in text.splitlines() if line.startswith("### ")]
    assert len(sections) == 3
    assert sections[0] == "### Row 3 (B03) differs"
    assert "agrees but for the last digit" in sections[1] or "differs" in sections[1]
    assert "could not be used" in sections[2]


def test_what_a_statistician_needs_is_there(memos) -> None:
    for text in memos.values():
        for piece in ("Review memo", "1 - gamma", "true size", "against the best test", "qualified statisticians",
                      "Derivation: lot-drift", "Morris 1982", "Reviewed by", "SHA-256"):  # fmt: skip
            assert piece in text
    assert "**Result. 4 rows: 1 agrees" in memos["md"]


def test_text_from_the_table_is_escaped(memos) -> None:
    assert "<b>x</b>" not in memos["html"]
    assert "<b>x</b>" not in memos["md"]


class Balance(HTMLParser):
    """Counts open tags."""

    VOID = frozenset({"meta", "br", "hr"})

    def __init__(self) -> None:
        super().__init__()
        self.open: list[str] = []

    def handle_starttag(self, tag, attrs) -> None:
        if tag not in self.VOID:
            self.open.append(tag)

    def handle_endtag(self, tag) -> None:
        assert self.open.pop() == tag


def test_the_page_is_whole_and_loads_nothing(memos) -> None:
    page = memos["html"]
    parser = Balance()
    parser.feed(page)
    assert parser.open == []
    assert "http" not in page
    assert "<script" not in page


def test_blocks() -> None:
    blocks = [Heading(2, "a_b"), Paragraph("x < y", True), Items(["*"]), Rows(["h"], [["a|b"]])]
    assert "".join(markdown(blocks)) == "## a\\_b\n\n**x \\< y**\n\n- \\*\n\n| h |\n| --- |\n| a\\|b |\n\n"
    page = "".join(html(blocks, "t & u"))
    assert "<title>t &amp; u</title>" in page
    assert '<p class="strong">x &lt; y</p>' in page


def test_a_claim_without_fractions_is_shown_the_right_ones(tmp_path) -> None:
    table = tmp_path / "t.csv"
    header = Path(TABLE).read_text("utf-8").splitlines()[0]
    table.write_text(f"{header}\nF1,lot-release,90,110,,,,,,,\n")
    assert main(["review", CASE, str(table), "--memo", str(tmp_path / "m.md")]) == 1
    text = (tmp_path / "m.md").read_text("utf-8")
    assert "| gamma1 | not printed | 0.086714664601 |" in text
    assert "| Row 2 (F1) | differs | no slip found |" in text
