"""From a claim and its setting to a verdict."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from fractions import Fraction

from verify.arithmetic.enclosure import Enclosure
from verify.derivation.ledger import LAW_OF_THE_SUM, Grade
from verify.derivation.sum_step import with_sum_step
from verify.errors import UndecidedError
from verify.problem.hypothesis import Form
from verify.review.claim import Claim
from verify.review.claimed import claimed_test
from verify.review.consequences import Consequences, consequences, level_kept
from verify.review.matching import Comparison, compare
from verify.review.printed import Match
from verify.review.setting import Setting
from verify.review.size import PowerCurve, sizes
from verify.review.slip_table import TRUNCATED, TRUNCATED_WORDS
from verify.review.slips import find_slips
from verify.review.verdict import Outcome, SlipFound, Verdict
from verify.solution.critical import CriticalFunction
from verify.solution.precision import bits_for

NO_SLIP = "No slip of the list reproduces every printed number."
NOT_PROVED = "the right numbers are checked numerically, not proved: two routes to the law of the sum share them"
BY_MATCH = {
    Match.SAME: Outcome.AGREES,
    Match.LAST: Outcome.LAST_DIGIT,
    Match.OTHER: Outcome.DIFFERS,
    Match.OPEN: Outcome.UNDECIDED,
}


@dataclass(frozen=True)
class Options:
    """How much is computed.

    Attributes
    ----------
    loss : bool
        Whether the power lost is computed for a claim that agrees too.
    """

    loss: bool = True


def judge(setting: Setting, claim: Claim, options: Options | None = None) -> Verdict:
    """Judge the printed numbers of one claim.

    Raises
    ------
    InputError
        When the printed numbers do not describe a test of this form.
    """
    verdict = Verdict(Outcome.UNDECIDED, setting.problem, claim, setting.derivation)
    try:
        known = with_sum_step(setting.derivation, setting.laws, bits_for(setting.digits))
        verdict = replace(verdict, derivation=known)
        return _leaning(_judged(verdict, setting, claim, options or Options()))
    except UndecidedError as error:
        return _leaning(replace(verdict, notes=(str(error),)))


def _judged(verdict: Verdict, setting: Setting, claim: Claim, options: Options) -> Verdict:
    notes: list[str] = []
    if claim.fractions and not setting.lattice:
        notes.append("the statistic is continuous: fractions at the cutoffs have no effect and were not judged")
        claim = claim.without_fractions()
    claimed = claimed_test(claim, setting)
    if setting.lattice and not claim.fractions and claimed.critical is not None:
        remarked = replace(verdict, notes=(*notes, *claimed.notes))
        return _without_fractions(remarked, setting, claim, claimed.critical)
    right = setting.right(claimed.critical)
    found = compare(claim, setting.numbers, setting.problem.n, setting.step)
    outcome = BY_MATCH[found.match]
    slips, more = _slips(claim, setting, found, outcome)
    agreed = outcome is Outcome.AGREES
    read = _as_read(claimed.critical, right, found, claimed.notes) if agreed else claimed.critical
    result = None if read is None else consequences(read, setting, with_loss=options.loss or not agreed)
    remarks = () if agreed else claimed.notes
    notes += [note for note in (found.note, *remarks, *more, _rounding_note(outcome, result)) if note]
    return replace(
        verdict,
        outcome=outcome,
        solution=setting.solution_of(right),
        correct=found.report,
        off=_off(found),
        consequences=result,
        slips=slips,
        notes=tuple(notes),
    )


def _as_read(
    literal: CriticalFunction | None, right: CriticalFunction, found: Comparison, notes: tuple[str, ...]
) -> CriticalFunction | None:
    """The printed test of a claim that agrees.

    Where its cutoffs were printed short, they are the right ones, with the printed fractions.
    """
    if literal is None or not (found.note or notes) or right.phi1 is None or literal.phi1 is None:
        return literal
    near = all(
        mine is not None and printed is not None and abs(mine.mid - printed.mid) < Fraction(1, 2)
        for mine, printed in ((right.phi1, literal.phi1), (right.phi2, literal.phi2))
    )
    return replace(right, phi1=literal.phi1, phi2=literal.phi2) if near else right


def _off(found: Comparison) -> tuple[str, ...]:
    return tuple(name for name, match in found.each.items() if match is not Match.SAME)


def _slips(
    claim: Claim, setting: Setting, found: Comparison, outcome: Outcome
) -> tuple[tuple[SlipFound, ...], tuple[str, ...]]:
    if outcome is Outcome.AGREES:
        return (), ()
    if found.truncated:
        return (SlipFound(TRUNCATED, TRUNCATED_WORDS),), ()
    slips, open_ones = find_slips(claim, setting)
    notes = () if slips or outcome is not Outcome.DIFFERS else (NO_SLIP,)
    if open_ones:
        notes = (*notes, f"not computed: the numbers under {', '.join(open_ones)}")
    return slips, notes


def _rounding_note(outcome: Outcome, result: Consequences | None) -> str:
    if outcome is not Outcome.AGREES or result is None or result.level_kept is not False:
        return ""
    excess = _short(result.excess)
    return f"taken literally, the rounded numbers exceed the level by at most {excess}; that is rounding alone"


def _short(x: Fraction) -> str:
    return f"{Enclosure.of(x).strings(2)['upper']}"


def _without_fractions(verdict: Verdict, setting: Setting, claim: Claim, test: CriticalFunction) -> Verdict:
    """Judge a claim that does not randomise: is the level kept, and is a larger rejection region within it too?"""
    right, result = setting.right(), consequences(test, setting)
    larger = larger_within(test, setting) if result.level_kept else {}
    found = compare(claim, setting.numbers.without_fractions(), setting.problem.n, setting.step)
    outcome = _outcome_by_level(result.level_kept, larger, wrong_side=test.region != right.region)
    notes = [
        *verdict.notes,
        "no fractions are printed: judged as a test that does not randomise",
    ]
    notes.append(_level_note(result))
    notes += _larger_notes(larger)
    if outcome is Outcome.AGREES:
        notes.append("no region larger by one support point at either end is within the level")
    slips: tuple[SlipFound, ...] = ()
    if outcome is Outcome.DIFFERS and found.match is not Match.SAME:
        slips, more = find_slips(claim, setting)
        notes += [*more] if slips else [NO_SLIP, *more]
    return replace(
        verdict,
        outcome=outcome,
        solution=setting.solution_of(right),
        correct=_full_report(claim, setting),
        off=_off(found) if outcome is Outcome.DIFFERS else (),
        consequences=result,
        slips=slips,
        notes=tuple(notes),
    )


def _outcome_by_level(kept: bool | None, larger: Mapping[str, bool | None], *, wrong_side: bool) -> Outcome:
    """Judge a test without randomisation: it agrees where its level is kept, and where no larger region's is.

    What stayed open is never taken for an answer.
    """
    if kept is False or True in larger.values() or (kept and wrong_side):
        return Outcome.DIFFERS
    return Outcome.UNDECIDED if kept is None or None in larger.values() else Outcome.AGREES


def _larger_notes(larger: Mapping[str, bool | None]) -> list[str]:
    """Say which larger regions are within the level, and of which that stayed open."""
    within = [
        f"the region that also rejects at {point} is within the level too" for point, fits in larger.items() if fits
    ]
    open_ones = [point for point, fits in larger.items() if fits is None]
    return within + [
        f"whether the region that also rejects at {point} is within the level too stayed open" for point in open_ones
    ]


def _full_report(claim: Claim, setting: Setting) -> dict[str, Enclosure]:
    return claim.style.readings(setting.numbers, setting.problem.n, setting.step)[0][0]


def _level_note(result: Consequences) -> str:
    answer = {
        True: "the level is kept",
        False: "the level is not kept",
        None: "whether the level is kept stayed open",
    }
    return answer[result.level_kept]


def larger_within(test: CriticalFunction, setting: Setting) -> dict[str, bool | None]:
    """Say, for each support point of V that could be added to the rejection region at its ends, whether the level is
    then still kept; None where that stayed open.
    """
    found: dict[str, bool | None] = {}
    for grown, point in _grown(test, setting):
        try:
            parts = sizes(PowerCurve(grown, setting))
        except UndecidedError:
            parts = ()
        found[_point_text(point, setting)] = level_kept(parts)
    return found


def _point_text(y: int, setting: Setting) -> str:
    numbers = setting.numbers_of(CriticalFunction("inside", y, y, Enclosure.of(1), Enclosure.of(1)))
    return f"V = {numbers.c1.text(12)}"


def _grown(test: CriticalFunction, setting: Setting) -> list[tuple[CriticalFunction, int]]:
    """The rejection region with one support point more, at each end in turn."""
    one, out = Enclosure.of(1), []
    sign = 1 if test.region == "inside" else -1
    ends = [("c1", "phi1", -sign), ("c2", "phi2", sign)]
    if setting.form is Form.ONE_SIDED:
        ends = [("c1", "phi1", -1 if test.region == "above" else 1)]
    low, high = setting.laws[0].support
    for c, phi, outward in ends:
        place = getattr(test, c)
        point = place if getattr(test, phi) != one else place + outward
        if (low is not None and point < low) or (high is not None and point > high):
            continue
        if setting.form is Form.ONE_SIDED:
            out.append((replace(test, c1=point, c2=point, phi1=one, phi2=one), point))
        elif test.c1 == test.c2 and test.phi1 != one:
            out.append((replace(test, phi1=one, phi2=one), point))
        else:
            grown = replace(test, **{c: point, phi: one})
            if grown.c1 < grown.c2:
                out.append((grown, point))
    return out


def _leaning(verdict: Verdict) -> Verdict:
    """A verdict is no firmer than the derivation that it leans on."""
    refuted = verdict.refuted_steps
    if refuted:
        reasons = tuple(
            f"{step.name}: {step.statement}" + (f" ({step.witness})" if step.witness else "") for step in refuted
        )
        return replace(verdict, outcome=Outcome.REFUTED, notes=(*reasons, *verdict.notes))
    if verdict.derivation.grade is Grade.UNDECIDED and verdict.outcome in (
        Outcome.AGREES,
        Outcome.LAST_DIGIT,
    ):
        open_steps = ", ".join(step.name for step in verdict.derivation.steps if step.grade is Grade.UNDECIDED)
        return replace(
            verdict,
            outcome=Outcome.UNDECIDED,
            notes=(f"the derivation stayed open at: {open_steps}", *verdict.notes),
        )
    if verdict.derivation.step(LAW_OF_THE_SUM) is not None:
        return replace(verdict, notes=(NOT_PROVED, *verdict.notes))
    return verdict
