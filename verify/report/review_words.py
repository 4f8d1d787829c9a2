"""What follows from printed numbers, in sentences."""

from __future__ import annotations

from collections.abc import Iterator
from fractions import Fraction

from verify.arithmetic.enclosure import Enclosure
from verify.review.record import Record, plain

KEPT = {
    True: "the level is kept",
    False: "the level is exceeded",
    None: "whether the level is kept stayed open",
}


def consequence_sentences(result: Record, parameter: str) -> Iterator[str]:
    """Yield what follows from the printed numbers, a sentence each."""
    parts = [_expectation(e, parameter) for e in result["expectations"]]
    yield "As printed, the test has these properties: " + "; ".join(parts) + "."
    if result["size"]:
        where = _at(result["size_at"], parameter)
        yield (
            f"Its true size over the whole null is {between(result['size'])}, {where}: {KEPT[result['level_kept']]}."
        )
    else:
        yield f"Its true size over the whole null stayed open: {KEPT[result['level_kept']]}."
    if result["power_lost"]:
        yield _loss(result, parameter)


def _expectation(e: Record, parameter: str) -> str:
    what = "rejection probability" if e["of"] == "phi" else "moment E[(V - EV) phi]"
    where = f"at {parameter} = {plain(e['at'])}"
    return f"{where} its {what} is {between(e['expectation'])} where {plain(e['target'])} is right"


def _at(text: str, parameter: str) -> str:
    if "->" in text:
        return f"approached as {text}"
    about = text.startswith("about ")
    return f"at {parameter} {'near' if about else '='} {plain(text.removeprefix('about '))}"


def _loss(result: Record, parameter: str) -> str:
    lost, gain = result["power_lost"], result["power_lost"]["upper"].startswith("-")
    verb = "It loses" if not gain else "It has more power than the best test of this level, by"
    if gain:
        lost = {"lower": lost["upper"][1:], "upper": lost["lower"][1:]}
    rest = " of power against the best test" if not gain else ""
    where = f"at {parameter} = {plain(result['power_lost_at'])}"
    best = between(result["best_power"], 6)
    return f"{verb} {between(lost, 4)}{rest} {where}, where the best test has {best}."


def sentence(text: str) -> str:
    """Return a note as a sentence; a formula at its head keeps its small letter.

    Examples
    --------
    >>> sentence("the level is kept"), sentence("a cutoff is"), sentence("f = h(x) exp(Q T - A)")
    ('The level is kept.', 'A cutoff is.', 'f = h(x) exp(Q T - A).')
    """
    head = text[:1].upper() if text[1:2].isalpha() or text.startswith("a ") else text[:1]
    return head + text[1:] + ("" if text.endswith(".") else ".")


def between(ends: dict[str, str], digits: int = 8) -> str:
    """Return an enclosure as text, with no digit that is not guaranteed.

    Examples
    --------
    >>> between({"lower": "0.0499997262823282", "upper": "0.0499997262823283"})
    '0.049999726'
    """
    return Enclosure(Fraction(ends["lower"]), Fraction(ends["upper"])).text(digits)
