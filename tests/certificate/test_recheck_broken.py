# ruff: noqa: E501 (tables of cases, one a line)
"""Deliberately broken producers: each breaks one thing, computes everything else consistently, and is rejected."""

from __future__ import annotations

import copy
from collections.abc import Callable
from fractions import Fraction
from types import ModuleType
from typing import Any

import pytest

from verify.certificate import recheck


def cases(maker: ModuleType) -> dict[str, Any]:
    import sys

    found: dict[str, Any] = sys.modules["certificate_cases"].all_cases(maker.Case)
    return found


def status(maker: ModuleType, certificate: dict[str, Any]) -> int:
    found: int = recheck.verdict(maker.canonical(certificate))[0]
    return found


def law_text(**parameters: str) -> Callable[[Any, ModuleType], None]:
    """Another law, in the certificate as well as in the computation."""

    def change(case: Any, maker: ModuleType) -> None:
        case.law = {**case.law, "parameters": {**case.law["parameters"], **parameters}}

    return change


def law_numbers(function: Callable[..., tuple[Any, ...]]) -> Callable[[Any, ModuleType], None]:
    """Another law in the computation only."""

    def change(case: Any, maker: ModuleType) -> None:
        case.breaks = {"law": function}

    return change


def numbers(function: Callable[..., Any]) -> Callable[[Any, ModuleType], None]:
    def change(case: Any, maker: ModuleType) -> None:
        case.breaks = {"numbers": function}

    return change


def attribute(**values: Any) -> Callable[[Any, ModuleType], None]:
    def change(case: Any, maker: ModuleType) -> None:
        for key, value in values.items():
            setattr(case, key, value)

    return change


def weights(values: list[str]) -> Callable[[Any, ModuleType], None]:
    def change(case: Any, maker: ModuleType) -> None:
        case.law = {**case.law, "weights": values}

    return change


BREAKS: dict[str, tuple[str, Callable[[Any, ModuleType], None]]] = {
    "a mean one percent off, everywhere": ("poisson outside", law_text(mean="lam*101/100")),
    "a mean one percent off, in the numbers": ("poisson outside", law_numbers(lambda m, *_: (m * Fraction(101, 100),))),
    "one trial too many, everywhere": ("binomial interval", law_text(trials="m+1")),
    "success and failure exchanged": ("binomial interval", law_text(probability="1-p")),
    "a size one off": ("negative binomial point", law_text(size="r+1")),
    "rate for scale": ("gamma interval", law_text(rate="1/b")),
    "a shape one half off": ("gamma interval", law_text(shape="a+1/2")),
    "standard deviation for variance": ("normal interval", law_text(variance="s")),
    "the variance of a mean for that of a sum": ("normal interval", law_numbers(lambda m, v: (m, v / 9))),
    "shape of one for shape of the sum": ("inverse Gaussian interval", law_numbers(lambda m, k: (m, k / 6))),
    "n left out": ("poisson interval", attribute(breaks={"n": -1})),
    "n counted once too often": ("gamma point", attribute(breaks={"n": 1})),
    "a lattice point off, lower": ("poisson outside", numbers(lambda y, g: ([y[0] - 1, y[1]], g))),
    "a lattice point off, upper": ("poisson interval", numbers(lambda y, g: ([y[0], y[1] + 1], g))),
    "fractions exchanged": ("binomial interval", numbers(lambda y, g: (y, g[::-1]))),
    "fractions complemented": ("poisson point", numbers(lambda y, g: (y, [1 - x for x in g]))),
    "ends exchanged": ("normal interval", numbers(lambda c: c[::-1])),
    "a cutoff off by 1e-15": ("gamma outside", numbers(lambda c: [c[0] + c[0] / 10**15, c[1]])),
    "a cutoff off by one unit in the 20th place": ("inverse Gaussian point", numbers(lambda c: [c[0], c[1] * (1 + c[1] ** 0 / 10**19)])),
    "the sign of the statistic": ("power outside", attribute(T="-log(x)")),
    "the sign of the scale": ("power outside", attribute(law={"name": "gamma", "parameters": {"shape": "1", "rate": "th"}, "scale": "1", "shift": "0"})),
    "the wrong side, declared": ("poisson above", attribute(rejects="below")),
    "the wrong direction, declared": ("negative binomial above", attribute(rising=True, rejects="above")),
    "the natural parameter's sign": ("gamma above", attribute(Q="b")),
    "the log-normaliser without its factor": ("gamma interval", attribute(A="-log(b)")),
    "the levels exchanged": ("binomial interval", attribute(alpha=["1/20", "1/50"])),
    "a weight wrong": ("table outside", weights(["1", "5/2", "0", "7/3", "2"])),
    "a weight of a kernel wrong": ("kernel interval", weights(["6", "60", "121", "60", "6"])),
    "a weight of a truncated law wrong": ("truncated outside", attribute()),
}  # fmt: skip


@pytest.mark.parametrize("name", sorted(BREAKS))
def test_a_broken_producer_is_rejected(maker: ModuleType, certificates: dict[str, Any], name: str) -> None:
    base, change = BREAKS[name]
    case = cases(maker)[base]
    if name == "a weight of a truncated law wrong":
        case.law = copy.deepcopy(case.law)
        case.law["weights"][3] = "1/25"
    solved_levels = list(case.alpha)
    change(case, maker)
    certificate = maker.make(case)
    if name == "the levels exchanged":
        certificate["predicate"]["problem"]["alpha"] = solved_levels
        certificate = maker.statement(certificate["predicate"])
    assert status(maker, certificate) in (1, 2)


def test_a_cdf_with_the_wrong_sign(
    maker: ModuleType, certificates: dict[str, Any], monkeypatch: pytest.MonkeyPatch
) -> None:
    """Phi(-z) for Phi(z): the one-sided cutoff comes out mirrored at the mean."""
    right = maker.SMOOTH["normal"]

    def mirrored(mean: Any, variance: Any) -> dict[str, Any]:
        law = right[0](mean, variance)
        return {**law, "cdf": lambda y: 1 - law["cdf"](y)}

    monkeypatch.setitem(maker.SMOOTH, "normal", (mirrored, *right[1:]))
    case = cases(maker)["normal above"]
    case.start = (2,)
    assert status(maker, maker.make(case)) == 1


@pytest.mark.parametrize("step", [1, -1])
def test_a_cutoff_beside_the_right_one_with_the_level_kept(
    maker: ModuleType, certificates: dict[str, Any], step: int
) -> None:
    """All expectations are as stated and the level is kept, but by a fraction above 1, or below 0."""
    case = cases(maker)["poisson above"]
    (y,) = (certificates["poisson above"]["predicate"]["test"][key] for key in ("y",))
    law = maker.poisson(case.limits()[0] * case.n)
    rest = maker.real(Fraction(1, 100)) - sum(mass for k, mass in law.items() if k > y + step)
    case.breaks = {"numbers": lambda ys, gs: ([ys[0] + step], [rest / law[y + step]])}
    certificate = maker.make(case)
    gamma = Fraction(certificate["predicate"]["test"]["gamma"]["lower"])
    assert gamma > 1 if step == 1 else gamma < 0
    assert recheck.verdict(maker.canonical(certificate)) == (
        1,
        ["REJECTED: a fraction outside (0, 1]: this is not the test"],
    )


def test_one_atom_that_keeps_one_level_only(maker: ModuleType, certificates: dict[str, Any]) -> None:
    """All expectations are as stated, but one is not the level."""
    case = cases(maker)["binomial outside"]
    certificate = maker.make(case)
    test = certificate["predicate"]["test"]
    gamma = Fraction(test["gamma1"]) * Fraction(9, 10)
    case.breaks = {"numbers": lambda ys, gs: ([5, 5], [gamma, gamma])}
    for levels in (["9/200", "1/20"], ["1/20", "1/20"]):
        changed = maker.make(case)["predicate"]
        changed["problem"]["alpha"] = levels
        for condition, level in zip(changed["side_conditions"], levels, strict=True):
            condition["target"] = level
        assert recheck.verdict(maker.canonical(maker.statement(changed)))[0] == 1


def test_swapped_limits(maker: ModuleType, certificates: dict[str, Any]) -> None:
    """The numbers of the test with the limits' levels exchanged, and a null whose limits descend."""
    predicate = copy.deepcopy(certificates["poisson irrational"]["predicate"])
    predicate["side_conditions"] = predicate["side_conditions"][::-1]
    assert status(maker, maker.statement(predicate)) == 1
    predicate = copy.deepcopy(certificates["poisson outside"]["predicate"])
    predicate["problem"]["null"] = "lam <= 12 or lam >= 8"
    predicate["problem"]["alternative"] = "12 < lam < 8"
    assert status(maker, maker.statement(predicate)) == 1


def test_the_test_of_another_form(maker: ModuleType, certificates: dict[str, Any]) -> None:
    """The numbers of the interval null under the text of the outside null."""
    predicate = copy.deepcopy(certificates["gamma interval"]["predicate"])
    predicate["problem"]["null"] = "b <= 1 or b >= 3"
    predicate["problem"]["alternative"] = "1 < b < 3"
    predicate["test"] |= {"form": "outside null", "rejects": "inside"}
    predicate["assumptions"][0] = f"theorem: {recheck.BETWEEN}"
    assert status(maker, maker.statement(predicate)) == 1


@pytest.mark.parametrize(
    ("name", "wrong"),
    [
        ("binomial interval", "UNBIASED"),
        ("poisson irrational", "BETWEEN"),
        ("poisson interval", "TWO"),
        ("gamma above", "BETWEEN"),
        ("gamma point", "UMP"),
    ],
)
def test_another_theorem(maker: ModuleType, certificates: dict[str, Any], name: str, wrong: str) -> None:
    """Unbiased at two levels is false; of the others, each states another theorem than the question's."""
    predicate = copy.deepcopy(certificates[name]["predicate"])
    assert status(maker, maker.statement(predicate)) == 0
    predicate["assumptions"][0] = f"theorem: {getattr(recheck, wrong)}"
    assert status(maker, maker.statement(predicate)) == 1
