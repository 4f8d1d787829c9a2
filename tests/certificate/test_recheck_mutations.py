# ruff: noqa: E501 (tables of cases, one a line)
"""Change every field of certificates of every law and form, one at a time: each change is rejected.

The changed predicate gets a fresh seal, so that the checks themselves are tested and not only the seal. The
changes that are
accepted are listed in ``HARMLESS`` with the reason why the certificate then still states the truth.
"""

from __future__ import annotations

import copy
import importlib.util
import re
from collections.abc import Callable
from itertools import islice
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest

from verify.certificate import recheck

HARMLESS = {
    # Texts for the reader, about which nothing is claimed. Without a fresh seal their change is rejected too.
    r"problem\.(title|source) ": "free text",
    r"derivation\.steps\.(\d\.reason|[0124]\.statement) ": "free text; the grade, which is checked, decides what is on trust",
    r"derivation\.steps\.5\.statement ": "a law without closed form is not named; of named ones nothing else passes (`allowed`)",
    r"double_precision\.(condition|opinions\.\d+\.(route|note)|flags\.\d+\.(kind|number|text)) ": "free text",
    r"double_precision\.(opinions|flags) ": "a report of fewer opinions, or the same one twice",
    r"double_precision\.opinions\.\d+\.numbers\.\w+ (one unit|empty)": "another number is reported, of the same stated agreement",
    r"(versions|versions\.\w+|issued) ": "free text: who wrote it, and when, in the words of the user",
    # Mathematical statements that stay true.
    r"problem\.(alpha\.\d|density\.constants\.\w+) (not in lowest|spelled)|law\.(scale|shift|parameters\.\w+) spelled": "the same number",
    r"problem\.density\.constants\.k another fraction": "the law changes with it by less than the 12 digits stated here",
    r"problem\.density\.kernel times": "a kernel is given up to a factor",
    r"law\.weights without the last": "the table still reaches the cutoffs",
    r"problem\.density\.space with another digit": "another space that contains the limits: fewer alternatives, the same test",
    r"problem\.digits (plus|minus)": "where every number is exact, digits round nothing",
    r"rounding\.tolerance ": "the same number of decimals suffices for a slightly different tolerance",
    r"derivation\.log_normaliser ": "a kernel carries no normaliser, so nothing is claimed",
}
KERNELS = ("table", "kernel")


def mutate() -> ModuleType:
    spec = importlib.util.spec_from_file_location("certificate_mutate", Path(__file__).parent / "mutate.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@pytest.fixture(autouse=True)
def _remembered(monkeypatch: pytest.MonkeyPatch) -> None:
    """Remember pure functions between the thousands of checks: the checks stay the same, and the suite short."""
    for name in ("gamma_kernel", "series", "normal_cdf", "log", "exp"):
        monkeypatch.setattr(recheck, name, memo(getattr(recheck, name)))
    for name in ("check_density", "check_numbers"):
        monkeypatch.setattr(recheck, name, memo_check(getattr(recheck, name)))


def memo(function: Callable[..., Any]) -> Callable[..., Any]:
    known: dict[Any, Any] = {}

    def remembering(*arguments: Any) -> Any:
        key = (
            recheck.down.prec,
            *((x.low, x.high) if isinstance(x, recheck.Interval) else x for x in arguments),
        )
        if key not in known:
            known[key] = function(*arguments)
        return known[key]

    return remembering


def memo_check(function: Callable[..., None]) -> Callable[..., None]:
    """Remember the outcome of a check by all that it reads: the question, and of the predicate what `check_numbers` gets."""
    known: dict[Any, Any] = {}

    def remembering(q: Any, predicate: dict[str, Any] | None = None) -> None:
        derivation = {key: value for key, value in q.derivation.items() if key != "steps"}
        read = [recheck.down.prec, q.density, q.law, derivation, q.limit_texts, q.form]
        if predicate is not None:
            read += [q.side, q.alphas, q.n, q.digits, q.test, predicate["side_conditions"], predicate["rounding"]]
        key = recheck.canonical(read)
        if key not in known:
            try:
                known[key] = function(q) if predicate is None else function(q, predicate)
            except Exception as reason:
                known[key] = reason
        if known[key] is not None:
            raise known[key]

    return remembering


def status(maker: ModuleType, predicate: dict[str, Any]) -> int:
    found: int = recheck.verdict(maker.canonical(maker.statement(predicate)))[0]
    return found


def allowed(name: str, label: str) -> bool:
    if label.startswith("derivation.log_normaliser") and not name.startswith(KERNELS):
        return False
    if label.startswith("derivation.steps.5.statement") and not name.startswith((*KERNELS, "truncated")):
        return False
    if label.startswith("problem.digits") and not name.startswith((*KERNELS, "binomial")):
        return False
    return any(re.match(pattern, label) for pattern in HARMLESS)


NAMES = [
    "poisson outside", "poisson interval", "poisson point", "poisson above", "poisson below",
    "binomial outside", "binomial interval", "binomial point", "binomial above",
    "negative binomial outside", "negative binomial interval", "negative binomial point", "negative binomial below",
    "gamma outside", "gamma interval", "gamma point", "gamma above", "power outside", "power point", "power above",
    "normal outside", "normal interval", "normal point", "normal above",
    "inverse Gaussian outside", "inverse Gaussian interval", "inverse Gaussian point", "inverse Gaussian below",
    "table outside", "table point", "kernel interval", "kernel above", "truncated outside", "truncated point", "truncated above",
]  # fmt: skip


WHOLE = {
    "poisson outside", "binomial interval", "negative binomial point", "gamma point", "power above", "normal outside",
    "inverse Gaussian interval", "table point", "kernel above", "truncated outside",
}  # fmt: skip
"""Every change of these (each law, each form); of the others, which repeat their structure, every twentieth."""


@pytest.mark.parametrize("name", NAMES)
def test_every_change_of_one_field_is_rejected(maker: ModuleType, short: dict[str, Any], name: str) -> None:
    predicate = short[name]["predicate"]
    assert status(maker, predicate) == 0
    changes = mutate().mutations(predicate)
    if name not in WHOLE:
        changes = islice(changes, NAMES.index(name) % 20, None, 20)
    accepted = [label for label, changed in changes if status(maker, changed) == 0]
    assert [label for label in accepted if not allowed(name, label)] == []


@pytest.mark.parametrize("name", ["poisson outside", "power outside", "negative binomial point"])
def test_the_ledger_cannot_tell_another_story(maker: ModuleType, short: dict[str, Any], name: str) -> None:
    """The sentences on T and Q, and on a named law, with one thing changed: by value, not by spelling."""
    predicate = copy.deepcopy(short[name]["predicate"])
    steps = {step["name"]: step for step in predicate["derivation"]["steps"]}
    for step, changes in {
        "factorisation": [(r"T\(x\) = (.+), Q", r"T(x) = 2*(\1), Q"), (r"Q\((\w+)\) = (.+), h", r"Q(\1) = 1 - (\2), h"), (", h.*", "")],
        "law": [(r"T (has|=).* law [^(]*", "T has the law normal"), (r"(\w+) = ([^,]+)\)$", r"\1 = (\2)*2)"),
                (r"(\w+) = ([^,]+)\)$", r"other = \2)"), (r"T (has the|= .* of) law", "T = 2*Y with Y of law"), (r"T (has the|= .* of) law", "T = Y + 1/2 with Y of law")],
    }.items():  # fmt: skip
        said = steps[step]["statement"]
        for old, new in changes:
            steps[step]["statement"] = re.sub(old, new, said)
            assert steps[step]["statement"] != said
            assert status(maker, predicate) in (1, 2), steps[step]["statement"]
        steps[step]["statement"] = re.sub(r"= (\w+)", r"= (2*\1 - \1)", said, count=1)
        assert status(maker, predicate) == 0, steps[step]["statement"]
        steps[step]["statement"] = said


def test_without_a_fresh_seal_every_change_is_rejected(maker: ModuleType, certificates: dict[str, Any]) -> None:
    certificate = certificates["gamma point"]
    for label, changed in mutate().mutations(certificate["predicate"]):
        assert recheck.verdict(maker.canonical({**certificate, "predicate": changed}))[0] in (1, 2), label


def test_every_change_of_the_statement_is_rejected(maker: ModuleType, certificates: dict[str, Any]) -> None:
    """The seal covers the subject too. With a fresh seal its name and digest are about a file that is not here: --case."""
    certificate = certificates["poisson point"]
    envelope = {**certificate, "predicate": {}}
    for label, changed in mutate().mutations(envelope):
        if label.startswith("predicate with"):
            continue
        whole = {**changed, "predicate": certificate["predicate"]} if "predicate" in changed else changed
        assert recheck.verdict(maker.canonical(whole))[0] in (1, 2), label


@pytest.mark.parametrize(("old", "new"), [
    (b'"n":', b'"n":10,"n":'), (b'"n":10', b'"n":10.0'), (b'"n":10', b'"n":1e1'), (b'"n":10', b'"n":NaN'), (b'"n":10', b'"n": 10'),
    (b'"n":10', b'"n":010'), (b'"n":10', b'"n":-Infinity'), (b'{"_type"', b'\xef\xbb\xbf{"_type"'), (b"lam", b"l\\u0061m"),
    (b'"lam', b'"\xff'), (b"}", b"}\n"),
])  # fmt: skip
def test_other_bytes_are_malformed(
    maker: ModuleType, certificates: dict[str, Any], tmp_path: Path, old: bytes, new: bytes
) -> None:
    data = maker.canonical(certificates["poisson outside"])
    changed = data.replace(old, new, 1) if old != b"}" else data + b"\n"
    assert changed != data
    path = tmp_path / "bytes.cert.json"
    path.write_bytes(changed)
    assert recheck.main([str(path)]) == 2
