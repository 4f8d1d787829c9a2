"""Thousands of generated problems of each law and form: is every one proved, and where do doubles fail?

Run by hand, from the root of the repository; it goes on where it was interrupted::

    python -m tests.bench.sweep sweep.jsonl --count 10000 --compare 200 --workers 2
    python -m tests.bench.sweep sweep.jsonl --report

One job is a law, a form, a profile and a seed, and up to ``BLOCK`` problems: Hypothesis draws some of them more than
once, and those are counted once.
"""

from __future__ import annotations

import argparse
import json
import time
from collections import Counter
from collections.abc import Iterator
from functools import cache
from pathlib import Path
from typing import Any

from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import seed as seeded

from verify.comparison.compare import compare
from verify.derivation.derive import derive
from verify.errors import UndecidedError
from verify.parallel import run_all
from verify.problem.hypothesis import Form
from verify.problem.numbers import exact_text
from verify.problem.problem import Problem
from verify.solution.solve import Solution, solve
from verify.strategies import LAWS, PROFILES, problems

BLOCK = 100
SLOW = 5.0
"""Seconds from which a problem is listed as slow."""

Job = dict[str, Any]
derivation = cache(derive)


def jobs(count: int, compared: int, share: float) -> Iterator[Job]:
    """Yield the jobs, law by law within a seed, so that an interrupted sweep has some of each."""
    adversarial = int(count * share)
    counts = {"sane": count - adversarial, "adversarial": adversarial}
    for start in range(0, count, BLOCK):
        for profile in PROFILES:
            size = min(BLOCK, counts[profile] - start)
            for law in LAWS if size > 0 else ():
                for form in Form:
                    some = max(0, min(size, compared // 2 - start))
                    yield {"law": law, "form": form.value, "profile": profile, "seed": start // BLOCK,
                           "size": size, "compared": some}  # fmt: skip


def work(job: Job) -> Job:
    """Solve a block of problems; say what came of them."""
    found: Job = {"outcomes": Counter(), "bad": [], "slow": [], "flags": [], "compared_really": 0}
    seen: set[tuple[str, ...]] = set()
    started = time.monotonic()

    @seeded(job["seed"])
    @settings(
        max_examples=job["size"], deadline=None, database=None, phases=[Phase.generate],
        suppress_health_check=list(HealthCheck),
    )  # fmt: skip
    @given(problems(job["law"], job["form"], job["profile"]))
    def each(problem: Problem) -> None:
        what = text_of(problem)
        if what in seen:
            return
        seen.add(what)
        solution = _solved(problem, what, found)
        if solution is not None and len(seen) <= job["compared"]:
            found["compared_really"] += 1
            flags = {(flag.kind, flag.route, flag.number) for flag in compare(solution).flags}
            found["flags"] += [[*flag, *what] for flag in sorted(flags)]

    each()
    return job | found | {"problems": len(seen), "seconds": round(time.monotonic() - started, 2)}


def _solved(problem: Problem, what: tuple[str, ...], found: Job) -> Solution | None:
    started = time.monotonic()
    try:
        solution = solve(problem, digits=15, derivation=derivation(problem.density))
    except UndecidedError as error:
        found["outcomes"]["undecided"] += 1
        found["bad"].append([*what, str(error)])
        return None
    except Exception as error:  # a crash is what a sweep looks for: it is counted and reported
        found["outcomes"]["crashed"] += 1
        found["bad"].append([*what, f"{type(error).__name__}: {error}"])
        return None
    finally:
        seconds = time.monotonic() - started
        if seconds > SLOW:
            found["slow"].append([*what, round(seconds, 1)])
    right = all(side.expectation.contains(side.target) for side in solution.side_conditions if _rational(side.target))
    found["outcomes"][solution.grade.value if right else "side condition missed"] += 1
    if not right:
        found["bad"].append([*what, "a side condition does not contain its target"])
    return solution


def _rational(target: Any) -> bool:
    return hasattr(target, "numerator")


def text_of(problem: Problem) -> tuple[str, ...]:
    """Say what a problem asks."""
    density = problem.density
    return exact_text(density.expr), problem.null, str(problem.alpha), str(problem.n)


def key_of(job: Job) -> tuple[Any, ...]:
    """Name a job."""
    return tuple(job[name] for name in ("law", "form", "profile", "seed", "size", "compared"))


def report(place: Path) -> str:
    """Summarise a file of finished jobs."""
    done = [json.loads(line) for line in place.read_text().splitlines()]
    lines = []
    for law in LAWS:
        for form in Form:
            outcomes: Counter[str] = Counter()
            for job in done:
                if (job["law"], job["form"]) == (law, form.value):
                    outcomes.update({f"{job['profile']} {kind}": n for kind, n in job["outcomes"].items()})
            shown = ", ".join(f"{n} {kind}" for kind, n in sorted(outcomes.items()))
            lines.append(f"{law:18} {form.value:14} {shown}")
    total, seconds = sum(job["problems"] for job in done), sum(job["seconds"] for job in done)
    lines.append(f"{total} problems in {seconds:.0f} s of work")
    lines += [f"BAD  {' | '.join(map(str, bad))}" for job in done for bad in job["bad"]]
    lines += [f"SLOW {' | '.join(map(str, slow))}" for job in done for slow in job["slow"]]
    compared = sum(job["compared_really"] for job in done)
    lines.append(f"{compared} compared with double precision; problems flagged, by profile, kind, route, law and form:")
    kinds: Counter[tuple[str, ...]] = Counter()
    for job in done:
        for kind, route, *_ in {(*flag[:2], *flag[3:]) for flag in job["flags"]}:
            kinds[job["profile"], kind, route or "-", job["law"], job["form"]] += 1
    ordered = sorted(kinds.items(), key=lambda item: (item[0][:3], -item[1]))
    lines += [f"{n:5} {' | '.join(kind)}" for kind, n in ordered]
    return "\n".join(lines)


def main() -> None:
    """Run or report."""
    from tests.bench.sweep import work  # by its place, which a worker can import, and not as a part of __main__

    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("file", type=Path, help="finished jobs, one JSON object a line")
    parser.add_argument("--count", type=int, default=10_000, help="problems of each law and form")
    parser.add_argument("--adversarial", type=float, default=0.5, help="share of them that is adversarial")
    parser.add_argument("--compare", type=int, default=200, help="how many of them to compare with double precision")
    parser.add_argument("--workers", type=int, default=1)
    parser.add_argument("--report", action="store_true")
    args = parser.parse_args()
    if args.report:
        print(report(args.file))
        return
    done = {key_of(json.loads(line)) for line in args.file.read_text().splitlines()} if args.file.exists() else set()
    left = [job for job in jobs(args.count, args.compare, args.adversarial) if key_of(job) not in done]
    with open(args.file, "a", encoding="utf-8") as stream:
        for number, result in enumerate(run_all(work, left, args.workers), 1):
            print(json.dumps(result), file=stream, flush=True)
            print(f"{number}/{len(left)} {result['law']}, {result['form']}, {result['profile']}: "
                  f"{dict(result['outcomes'])} in {result['seconds']} s", flush=True)  # fmt: skip


if __name__ == "__main__":
    main()
