"""Running a book: every outcome, the same results with any number of workers, mistakes shown and not swallowed."""

from __future__ import annotations

import os
import signal
import time
from collections.abc import Callable
from pathlib import Path

import pytest

from verify.casebook import run
from verify.casebook.find import find_cases
from verify.casebook.lines import json_lines
from verify.casebook.outcome import Outcome, Result, status_of, summary

ROOT = Path(__file__).parents[2]
EXPECTED = {
    "a-passes": Outcome.PASS,
    "b-differs": Outcome.DIFFERS,
    "c-claim-differs": Outcome.DIFFERS,
    "d-refuted": Outcome.REFUTED,
    "e-unusable": Outcome.UNUSABLE,
    "f-undecided": Outcome.UNDECIDED,
    "g-expected-refusal": Outcome.PASS,
}


def _short(result: Result) -> str:
    return result.name.rpartition("/")[2]


@pytest.fixture(scope="module")
def ran(mixed: Path) -> list[Result]:
    return run.run_book(find_cases([mixed]))


def test_the_casebook_of_this_repository_passes(monkeypatch: pytest.MonkeyPatch) -> None:
    """Every case of demo, laws, numerics, published and refusals, with two workers."""
    monkeypatch.chdir(ROOT)
    paths = find_cases(["casebook"])
    assert len(paths) >= 120
    results = run.run_book(paths, workers=2)
    assert [str(message) for result in results for message in result.messages] == []
    assert status_of(results) == 0, summary(results)
    assert len(results) == len(paths)


def test_every_outcome(ran: list[Result]) -> None:
    assert {_short(result): result.outcome for result in ran} == EXPECTED
    assert status_of(ran) == 1
    assert all(bool(result.messages) != result.passed for result in ran)


def test_messages_say_what_was_expected_and_found_and_where(ran: list[Result]) -> None:
    by_name = {_short(result): result for result in ran}
    (message,) = by_name["b-differs"].messages
    assert (message.key, message.text) == ("expect.c", "expected 7, found 8")
    lines = Path(by_name["b-differs"].path).read_text(encoding="utf-8").splitlines()
    assert lines[message.line - 1].startswith("c = ")
    assert "c is printed as 9, right is 8" in str(by_name["c-claim-differs"].messages[0])
    claim = by_name["c-claim-differs"]
    assert Path(claim.path).read_text(encoding="utf-8").splitlines()[claim.messages[0].line - 1] == "[claim]"
    assert "the upper cutoff one support point off" in str(by_name["c-claim-differs"].messages[0])
    assert "the sum of the density over its support is 2" in str(by_name["d-refuted"].messages[0])
    assert by_name["e-unusable"].messages[0].key == "problem.alpha"
    assert "stayed open" in str(by_name["f-undecided"].messages[0])


def test_workers_change_nothing(mixed: Path, ran: list[Result]) -> None:
    side_by_side = run.run_book(find_cases([mixed]), workers=2)
    assert json_lines(side_by_side) == json_lines(ran)
    assert side_by_side == ran


def deadly(path: str, how: run.How) -> Result:
    """Run a case; one of them takes its process down every time."""
    if "c-claim" in path:
        os.kill(os.getpid(), signal.SIGKILL)
    return run.run_case_file(path, how)


def test_a_case_that_no_worker_survives_is_undecided_and_the_others_are_run(mixed: Path, ran, monkeypatch) -> None:
    with monkeypatch.context() as patched:
        patched.setattr(run, "run_case_file", deadly)
        results = run.run_book(find_cases([mixed]), workers=2)
    assert [result.name for result in results] == [result.name for result in ran]
    [given_up] = [result for result in results if result not in ran]
    assert (given_up.name.rpartition("/")[2], given_up.outcome) == ("c-claim-differs", Outcome.UNDECIDED)
    assert "3 worker processes died over one piece of work" in str(given_up.messages[0])
    assert status_of(results) != 0


@pytest.mark.parametrize("workers", [1, 2])
def test_fail_fast_stops_behind_the_first_in_order(mixed: Path, ran: list[Result], workers: int) -> None:
    assert run.run_book(find_cases([mixed]), workers=workers, fail_fast=True) == ran[:2]


def test_progress_counts(mixed: Path) -> None:
    seen: list[int] = []
    run.run_book(find_cases([mixed], ["[ab]-*"]), progress=seen.append)
    assert seen == [1, 2]


def test_a_mistake_of_the_program_is_shown_and_is_red(book: Callable[..., Path], monkeypatch) -> None:
    def broken(*_: object, **__: object) -> None:
        raise ZeroDivisionError("of our own")

    folder = book(a="", b="")
    monkeypatch.setattr(run, "find", broken)
    results = run.run_book(find_cases([folder]))
    assert [result.outcome for result in results] == [Outcome.INTERNAL] * 2
    assert "ZeroDivisionError" in str(results[0].messages[0])
    assert status_of(results) == 70


@pytest.mark.parametrize(
    ("lines", "outcome"),
    [
        ('[expect]\nerror = "no such error"\n', Outcome.DIFFERS),
        ('[expect]\nverdict = "prooved"\n', Outcome.UNUSABLE),
        ("[expect\n", Outcome.UNUSABLE),
        ('[expect]\nc3 = "8"\n', Outcome.UNUSABLE),
        ('[expect]\ngamma = "0.8933"\n', Outcome.PASS),
        ('[expect]\ngamma = "0.8933' + "0" * 60 + '"\n', Outcome.DIFFERS),
        ('[claim]\nc = "8"\ngamma = "0.893"\n', Outcome.PASS),
        ('[claim]\nc = "8"\ngamma = "0.894"\n', Outcome.PASS),
        ('[claim]\nc = "8"\ngamma = "0.892"\n', Outcome.DIFFERS),
        ('[claim]\nc1 = "8"\nc2 = "9"\n', Outcome.UNUSABLE),
        ('[claim]\nnatural_parameter = "p"\n', Outcome.REFUTED),
        ('[claim]\nnatural_parameter = "p"\n[expect]\nverdict = "refuted"\nstep = "claims"\nc = "8"\n', Outcome.PASS),
        ('[expect]\nform = "one-sided"\nlaw = "binomial"\nstatistic = "x"\ngrade = "proved"\n', Outcome.PASS),
    ],
)
def test_one_case(book: Callable[..., Path], lines: str, outcome: Outcome) -> None:
    (path,) = find_cases([book(case=lines)])
    result = run.run_case_file(path)
    assert result.outcome is outcome, result


def test_a_published_case_names_its_source(tmp_path: Path, book: Callable[..., Path]) -> None:
    folder = book(case="").rename(tmp_path / "published")
    (result,) = run.run_book(find_cases([folder]))
    assert result.outcome is Outcome.UNUSABLE
    assert "source" in str(result.messages[0])


@pytest.mark.bench
def test_wall_time_of_the_casebook_by_workers(monkeypatch: pytest.MonkeyPatch) -> None:
    """A measurement: the whole casebook with one worker and with two, and how evenly they were busy."""
    monkeypatch.chdir(ROOT)
    paths, lines, walls = find_cases(["casebook"]), [], []
    for workers in (1, 2):
        start, before = time.perf_counter(), os.times()
        results = run.run_book(paths, workers=workers)
        walls.append(time.perf_counter() - start)
        lines.append(json_lines(results))
        spent = sum(os.times()[:4]) - sum(before[:4])
        busy = sum(result.seconds for result in results) / workers / walls[-1]
        longest = max(result.seconds for result in results)
        print(f"\n{len(paths)} cases, {workers} workers: {walls[-1]:.1f} s, {spent:.1f} s of processors")
        print(f"{busy:.0%} of the workers' time in cases, the longest {longest:.1f} s")
    print(f"two workers are {walls[0] / walls[1]:.2f} times as fast as one")
    assert lines[0] == lines[1]


@pytest.mark.bench
def test_wall_time_of_the_casebook_with_a_memory(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    """A measurement: without a memory, with an empty one, with a full one; derivations are made anew each time."""
    monkeypatch.chdir(ROOT)
    paths, lines = find_cases(["casebook"]), []
    run.run_book(paths)
    for name, cache in (("without", None), ("cold", str(tmp_path)), ("warm", str(tmp_path))):
        start = time.perf_counter()
        lines.append(json_lines(run.run_book(paths, run.How(cache=cache))))
        print(f"\n{name}: {time.perf_counter() - start:.1f} s")
    assert lines == [lines[0]] * 3
