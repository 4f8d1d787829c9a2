"""The page of a certificate in HTML and PDF: its order, its bytes, hostile words, and what outside programs
say of it."""

from __future__ import annotations

import hashlib
import re
import shutil
import subprocess
from collections.abc import Callable
from html import unescape
from html.parser import HTMLParser
from pathlib import Path

import pytest

from verify.errors import InputError, UndecidedError
from verify.report.overview import overview_page
from verify.report.page import certificate_page
from verify.report.page_blocks import Figure, Page, Section
from verify.report.page_html import page_html
from verify.report.page_pdf import page_pdf
from verify.report.page_recheck import recheck_digest

Made = Callable[[str], bytes]
KEYS = ["outside", "two levels", "interval", "point", "one-sided", "one atom", "irrational", "falling", "lattice"]
HOSTILE = {
    "script": "<script>alert(1)</script><img src=x onerror=alert(1)>",
    "mathematics": "$x$ \\(y\\) $$z$$ \\input{secret}",
    "typst": '#read("/etc/passwd") #import "x.typ" = heading *bold* [link](http://a.invalid) @label <label>',
    "attribute": "\"><svg onload=alert(1)> ' & &amp; {{ 7*7 }} {% raw %}",
    "direction": "abc \u202e\u2066evil\u2069 \u05e9\u05dc\u05d5\u05dd \u0645\u0631\u062d\u0628\u0627 \u200b\ufeff end",
    "letters": "\u4e2d\u6587 \U0001f600 \u0416\u0437 \ue000 \x07 \u0301",
    "long": "Donaudampfschifffahrt" * 40 + " " + "9" * 300,
}
ORDER = [
    "What is certified", "The problem", "The derivation", "The numbers", "How far double precision may be "
    "trusted", "Figures",
    "How to recheck it", "Assumptions and cautions", "Signatures",
]  # fmt: skip


class Reader(HTMLParser):
    """Collects tags, attributes and text."""

    VOID = frozenset(("meta", "br", "wbr", "col", "link", "img", "hr"))

    def __init__(self, source: str) -> None:
        super().__init__()
        self.tags: list[str] = []
        self.attributes: list[tuple[str, str]] = []
        self.text = ""
        self.open: list[str] = []
        self.feed(source)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        self.attributes += [(name, value or "") for name, value in attrs]
        if tag not in self.VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.handle_starttag(tag, attrs)
        if tag not in self.VOID:
            self.open.pop()

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        self.text += data


def tool(name: str) -> str:
    found = shutil.which(name)
    if found is None:
        pytest.skip(f"{name} is not installed here; continuous integration installs it")
    return found


def ran(*words: object) -> str:
    done = subprocess.run(
        [str(word) for word in words], capture_output=True, text=True, errors="replace", check=False, timeout=120
    )
    assert done.returncode == 0, done.stdout + done.stderr
    return done.stdout


def require_harmless(source: str) -> Reader:
    reader = Reader(source)
    assert not reader.open
    assert not {"script", "iframe", "object", "embed", "link", "img", "base", "form"} & set(reader.tags)
    for name, value in reader.attributes:
        assert not name.startswith("on"), name
        assert name != "src"
        if name in ("href", "xlink:href"):
            assert value.startswith("#") or re.fullmatch(r"[\w.-]+\.html", value), value
    outside = [
        value for name, value in reader.attributes if re.search(r"(https?:)?//", value) and not name.startswith("xmlns")
    ]
    assert outside == []
    assert "@import" not in source
    assert not re.search(r"url\((?!#)", source)
    ids = [value for name, value in reader.attributes if name == "id"]
    assert len(ids) == len(set(ids))
    references = re.findall(r'(?:href="#|url\(#)([^")]+)', source)
    assert set(references) <= set(ids)
    return reader


@pytest.mark.parametrize("key", KEYS)
def test_every_form_has_a_page_of_identical_bytes(made: Made, key: str) -> None:
    data = made(key)
    first, second = (certificate_page("case", data) for _ in range(2))
    html = page_html(first)
    assert html == page_html(second)
    assert page_pdf(first, "letter") == page_pdf(second, "letter")
    reader = require_harmless(html.decode())
    assert [section.title for section in first.sections] == ORDER
    assert ("lang", "en") in reader.attributes
    assert hashlib.sha256(data).hexdigest() in reader.text
    assert recheck_digest() in reader.text
    assert "python -I -S recheck.py case.cert.json" in reader.text
    assert "never" not in first.sections[0].title


def test_the_sentence_has_the_numbers(made: Made) -> None:
    text = Reader(page_html(certificate_page("lot", made("outside"))).decode()).text
    lead = re.sub(r"\s+", "", text[text.index("For 10 independent") :])
    assert lead.startswith(
        "For10independentobservations,theuniformlymostpowerfultestofλ≤8orλ≥12against8<λ<12atlevel1/20rejectsthenullhypothesiswhen94<V<103,"
    )
    assert "withprobabilityγ1=0.08671466460…whenV=94andwithprobabilityγ2=0.5147444920…whenV=103" in lead


def test_one_atom_is_said_to_be_one(made: Made) -> None:
    text = re.sub(r"\s+", "", Reader(page_html(certificate_page("c", made("one atom"))).decode()).text)
    assert "rejectsthenullhypothesiswithprobabilityγ1=1953125/7838208whenV=5andneverotherwise" in text


def test_figures_are_described(made: Made) -> None:
    page = certificate_page("lot", made("outside"))
    figures = [block for section in page.sections for block in section.blocks if isinstance(block, Figure)]
    assert len(figures) == 2
    assert "cutoffs at 94 and 103" in figures[0].alt
    assert "level 0.05" in figures[1].alt
    assert all(f'aria-label="{figure.alt[:20]}' in page_html(page).decode() for figure in figures)


@pytest.mark.parametrize("kind", HOSTILE)
def test_hostile_words_stay_text(retitled: Made, kind: str) -> None:
    page = certificate_page("case", retitled(HOSTILE[kind]))
    source = page_html(page).decode()
    reader = require_harmless(source)
    assert HOSTILE[kind].split(" ")[0][:12] in reader.text
    assert not re.search("[\u202a-\u202e\u2066-\u2069]", source)
    for paper in ("a4", "letter"):
        pdf = page_pdf(page, paper)
        assert pdf.startswith(b"%PDF-1.7")
        assert b"root:" not in pdf


@pytest.mark.parametrize("kind", HOSTILE)
def test_overview_of_hostile_titles(made: Made, retitled: Made, kind: str) -> None:
    page = overview_page({"one": made("interval"), "two": retitled(HOSTILE[kind])})
    reader = require_harmless(page_html(page).decode())
    assert {("href", "one.html"), ("href", "two.html")} <= set(reader.attributes)
    assert HOSTILE[kind].split(" ")[0][:12] in reader.text
    assert page_pdf(page) == page_pdf(page)


def test_undrawable_laws_are_said_to_be_so(made: Made, monkeypatch: pytest.MonkeyPatch) -> None:
    def fails(predicate: object, family: object) -> None:
        raise UndecidedError("no budget left")

    monkeypatch.setattr("verify.report.figure_data.laws_figure", fails)
    page = certificate_page("lot", made("outside"))
    assert "could not be drawn: no budget left" in page_html(page).decode()


def test_hostile_words_in_the_pdf(retitled: Made, tmp_path: Path) -> None:
    pdftotext = tool("pdftotext")
    path = tmp_path / "page.pdf"
    path.write_bytes(page_pdf(certificate_page("case", retitled(HOSTILE["typst"]))))
    text = re.sub(r"\s+", " ", ran(pdftotext, path, "-"))
    assert '#read("/etc/passwd") #import "x.typ" = heading *bold* [link](http://a.invalid) @label <label>' in text
    assert "/bin/" not in text
    path.write_bytes(page_pdf(certificate_page("case", retitled(HOSTILE["long"]))))
    lines = ran(pdftotext, "-bbox", path, "-")
    width = max(float(x) for x in re.findall(r'xMax="([\d.]+)"', lines))
    assert width <= 595.3 - 70


@pytest.mark.parametrize(("paper", "size"), [("a4", "595.276 x 841.89"), ("letter", "612 x 792")])
@pytest.mark.parametrize("key", ["outside", "lattice"])
def test_pdf_by_outside_programs(made: Made, tmp_path: Path, paper: str, size: str, key: str) -> None:
    qpdf, pdffonts, pdfinfo, pdftotext = (tool(name) for name in ("qpdf", "pdffonts", "pdfinfo", "pdftotext"))
    data = made(key)
    path = tmp_path / "page.pdf"
    path.write_bytes(page_pdf(certificate_page("lot", data), paper))
    ran(qpdf, "--check", path)
    fonts = ran(pdffonts, path).splitlines()[2:]
    assert fonts
    assert all(line.split()[-5] == "yes" for line in fonts), fonts
    info = ran(pdfinfo, path)
    assert f"Page size:       {size}" in info
    assert re.search(r"JavaScript:\s+no", info)
    assert re.search(r"Encrypted:\s+no", info)
    assert re.search(r"Tagged:\s+yes", info)
    assert re.search(r"CreationDate:.*2026", info)
    plain = ran(qpdf, "--qdf", "--object-streams=disable", path, "-") if key != "lattice" else ""
    if plain:
        assert "<pdfaid:part>2</pdfaid:part>" in plain
        assert "<pdfaid:conformance>B</pdfaid:conformance>" in plain
        assert "/EmbeddedFile" not in plain
        assert "/Outlines" in plain
    pages = ran(pdftotext, "-layout", path, "-").split("\f")[:-1]
    foot = "SHA-256 " + hashlib.sha256(data).hexdigest()[:16]
    assert all(foot in page for page in pages)
    assert all(f"Page {count} of {len(pages)}" in page for count, page in enumerate(pages, 1))


def test_contents_from_five_pages(made: Made, tmp_path: Path) -> None:
    pdftotext = tool("pdftotext")
    path = tmp_path / "page.pdf"
    page = certificate_page("lot", made("outside"))
    path.write_bytes(page_pdf(page))
    assert re.search(r"Signatures[ .]+\W*\d", ran(pdftotext, "-l", "1", "-layout", path, "-"))
    short = Page(page.title, page.subtitle, page.facts, page.sections[:2], page.digest)
    path.write_bytes(page_pdf(short))
    assert not re.search(r"The problem[ .]{5}", ran(pdftotext, "-l", "1", "-layout", path, "-"))


def test_chromium_shows_it_without_a_request(made: Made, tmp_path: Path) -> None:
    chromium = tool("chromium")
    path = tmp_path / "page.html"
    path.write_bytes(page_html(certificate_page("lot", made("outside"))))
    log = tmp_path / "net.json"
    quiet = ["background-networking", "component-update", "sync", "gpu"]
    words = [
        chromium, "--headless", "--no-sandbox", "--no-first-run", *(f"--disable-{word}" for word in quiet),
        f"--user-data-dir={tmp_path / 'profile'}", "--enable-logging=stderr", "--log-level=0",
        f"--log-net-log={log}", "--net-log-capture-mode=Everything", "--dump-dom", path.as_uri(),
    ]  # fmt: skip
    done = subprocess.run(words, capture_output=True, text=True, check=False, timeout=120)
    assert done.returncode == 0
    assert "CONSOLE" not in done.stderr, done.stderr
    assert "</footer>" in done.stdout
    asked = set(re.findall(r'"url":"((?:https?|file|ftp|wss?):[^"]*)"', log.read_text(errors="replace")))
    browser_only = ("google.com", "googleapis.com", "gvt1.com", "google.internal")
    assert {url for url in asked if not any(host in url for host in browser_only)} <= {path.as_uri()}
    assert all(url.startswith("file:") or any(host in url for host in browser_only) for url in asked)


def test_other_paper_is_refused() -> None:
    with pytest.raises(InputError, match="not known"):
        page_pdf(Page("t", "s", (), (Section("a", ()),)), "a5")


def test_title_in_the_tab_is_text(retitled: Made) -> None:
    source = page_html(certificate_page("case", retitled(HOSTILE["script"]))).decode()
    title = re.search(r"<title>(.*?)</title>", source, re.DOTALL)
    assert title is not None
    assert unescape(title[1]).startswith(HOSTILE["script"])


def test_the_first_sentence_says_no_more_than_the_theorem(made: Made) -> None:
    """With two levels a test is most powerful only among those with its two expectations."""
    lead = {
        key: Reader(page_html(certificate_page("lot", made(key))).decode()).text.partition("Derivation:")[0]
        for key in KEYS
    }
    assert {key for key, text in lead.items() if "uniformly" not in text} == {"two levels"}
    assert "most powerful at every alternative among the tests with these two expectations" in lead["two levels"]
    assert {key for key, text in lead.items() if "unbiased" in text} == {"interval", "point"}
