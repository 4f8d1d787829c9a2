"""The third section: the derivation in typeset mathematics, and its ledger with grades."""

from __future__ import annotations

import re
from typing import Any

from verify.errors import InputError
from verify.report.formula_tree import read_formula
from verify.report.math_boxes import WIDE, Atom, Box, Fence, boxes, relation, row, symbol
from verify.report.math_text import plain
from verify.report.page_blocks import Block, Break, Equation, Math, Paragraph, Run, Runs, Section, Table, Text, words
from verify.report.page_numbers import expectation
from verify.report.page_question import density_sign, exact_box, names_of, parameter_of, sum_of_statistics
from verify.report.prose import prose

ONE_LINE = 72
"""Characters of equations that fit side by side."""
GRADES = (
    "Grades: proved, a symbolic identity or an enclosure for all parameter values; enclosed, ball arithmetic "
    "over the interval named; "
    "checked numerically, to the digits named."
)


def derivation_section(predicate: dict[str, Any]) -> Section:
    """Return the section."""
    return Section(
        "The derivation", [*_family(predicate), *_law(predicate), *_conditions(predicate), *_ledger(predicate)]
    )


def _of(letter: str, argument: Box) -> Box:
    return row(Atom("name", letter), Fence(argument))


def _family(predicate: dict[str, Any]) -> list[Block]:
    derivation, density = predicate["derivation"], predicate["problem"]["density"]
    x, t = symbol(density["variable"]), parameter_of(predicate)
    exponent = row(_of("Q", t), Atom("space", "\u2009"), _of("T", x), Atom("operator", "−"), _of("A", t))
    f = row(
        density_sign(predicate),
        relation("="),
        _of("h", x),
        Atom("space", "\u2009"),
        Atom("word", "exp"),
        Fence(exponent, "{", "}"),
    )
    parts = {_key: derivation[_key] for _key in ("natural_parameter", "statistic", "log_normaliser")}
    way = "increasing" if derivation["rising"] else "decreasing"
    intro = "The densities form a one-parameter exponential family,"
    blocks: list[Block] = [Paragraph(words(intro), "intro"), Equation(f), Paragraph(words("with"), "intro")]
    equations: list[Box] = [
        row(_of(letter, argument), relation("="), _stacked(text))
        for letter, argument, text in zip("QTA", (t, x, t), parts.values(), strict=True)
    ]
    base = _base(derivation["steps"])
    if base is not None:
        equations.append(row(_of("h", x), relation("="), base))
    blocks += [Equation(box) for box in _side_by_side(equations)]
    close: Runs = (
        Text("The natural parameter "), Math(_of("Q", t)), Text(f" is strictly {way} in "), Math(t),
        Text(", so that the likelihood ratio is monotone in the sufficient statistic"),
    )  # fmt: skip
    return [*blocks, Paragraph(close, "intro"), Equation(sum_of_statistics(predicate))]


def _side_by_side(equations: list[Box]) -> list[Box]:
    """Put short equations on one line."""
    if sum(len(plain(box)) for box in equations) > ONE_LINE:
        return equations
    parts = [equations[0]]
    for box in equations[1:]:
        parts += [Atom("operator", ","), WIDE, box]
    return [row(*parts)]


def _stacked(text: str) -> Box:
    try:
        return boxes(read_formula(text), stacked=True)
    except InputError:
        return Atom("word", text)


def _base(steps: list[dict[str, str]]) -> Box | None:
    """The factor h(x) as the ledger states it."""
    for step in steps:
        found = re.search(r"\bh\(\w+\) = (.*), A\(", step["statement"]) if step["name"] == "factorisation" else None
        if found:
            return _stacked(found[1])
    return None


def _law(predicate: dict[str, Any]) -> list[Block]:
    law = predicate["law"]
    n = predicate["problem"]["n"]
    if not law["name"].startswith("no closed form") and law["name"] != "lattice":
        parts: list[Run] = [
            Text("For one observation, "),
            Math(_affine(law)),
            Text(f" has the {law['name']} law with "),
        ]
        for place, (key, text) in enumerate(law["parameters"].items()):
            parts += [
                Text((" and " if place == len(law["parameters"]) - 1 else ", ") if place else ""),
                Text(f"{key} "),
                Math(exact_box(text)),
            ]
        summed = SUMS[law["name"]].format(n=n, square=n * n)
        closing = "." if n == 1 else f"; the sum of the {n} values has the same law with {summed}."
        return [Paragraph((*parts, Text(closing)))]
    if law["name"] == "lattice":
        text = (
            f"one observation lies on a lattice; its masses are a table of {len(law['weights'])} weights "
            f"times powers of "
        )
        return [
            Paragraph(
                (
                    Text("The statistic of " + text),
                    Math(exact_box(law["parameters"]["base"])),
                    Text(", both in the certificate."),
                )
            )
        ]
    return [Paragraph(words(f"The law of the statistic has {law['name']}."))]


SUMS = {
    "Poisson": "{n} times the mean",
    "binomial": "{n} times the trials",
    "negative binomial": "{n} times the size",
    "gamma": "{n} times the shape",
    "normal": "{n} times the mean and {n} times the variance",
    "inverse Gaussian": "{n} times the mean and {square} times the shape",
}
"""What the law of the sum of n values has instead."""


def _affine(law: dict[str, Any]) -> Box:
    """Return T = scale Y + shift solved for the variable that has the law."""
    scale, shift = law["scale"], law["shift"]
    T, Y = Atom("name", "T"), Atom("name", "Y")
    if (scale, shift) == ("1", "0"):
        return T
    text = {"1": "Y", "-1": "-Y"}.get(scale, f"({scale})*Y")
    text += "" if shift == "0" else f" + ({shift})"
    tree = re.sub(r"\((-?\d+)\)", r"\1", text).replace("+ -", "- ")
    return row(
        Y,
        Atom("operator", ","),
        Atom("space", "\u2009"),
        Atom("word", "where"),
        Atom("space", "\u2009"),
        row(T, relation("="), boxes(read_formula(tree))),
        Atom("operator", ","),
    )


def _conditions(predicate: dict[str, Any]) -> list[Block]:
    t = parameter_of(predicate)
    theorem = next(
        (line.removeprefix("theorem: ") for line in predicate["assumptions"] if line.startswith("theorem: ")), ""
    )
    intro = (Text(f"By {theorem}. " if theorem else ""), Text("The side conditions that fix the numbers are"))
    parts: list[Box] = []
    for place, entry in enumerate(predicate["side_conditions"]):
        parts += [Atom("operator", ","), WIDE] if place else []
        target = exact_box(entry["target"]) if isinstance(entry["target"], str) else _target(predicate, entry)
        parts += [row(expectation(t, exact_box(entry["at"]), entry["of"]), relation("="), target)]
    return [Paragraph(intro, "intro"), Equation(row(*parts))]


def _target(predicate: dict[str, Any], entry: dict[str, Any]) -> Box:
    """An irrational target, in words of the problem."""
    level = exact_box(predicate["problem"]["alpha"][0])
    if entry["of"] == "phi":
        places = [e["at"] for e in predicate["side_conditions"] if e["of"] == "phi"]
        return exact_box(predicate["problem"]["alpha"][places.index(entry["at"])])
    where = row(parameter_of(predicate), relation("="), exact_box(entry["at"]))
    from verify.report.math_boxes import Script

    mean = row(Script(Atom("word", "E"), below=where), Atom("operator", "["), Atom("name", "V"), Atom("operator", "]"))
    return row(level, Atom("space", "\u2009"), mean)


def _ledger(predicate: dict[str, Any]) -> list[Block]:
    known = names_of(predicate)
    rows = [
        [
            words(step["name"]),
            (*_sentence(step["statement"], known), Break(), *_reason(step["reason"], known)),
            (Text(step["grade"], strong=True),),
        ]
        for step in predicate["derivation"]["steps"]
    ]
    head = (words("Step"), words("What was shown, and why it holds"), words("Grade"))
    return [Table(head, rows, (4, 14, 4), "Ledger of the derivation"), Paragraph(words(GRADES), "small")]


def _sentence(text: str, known: list[str]) -> Runs:
    shown = re.sub(r"\) exp\(Q T - (\w)\)", r")*exp(Q*T - \1)", text)
    is_word = len(shown.split(" ")[0]) > 1 and shown[:2].isalpha()
    return prose(shown[:1].upper() + shown[1:] if is_word else shown, known)


def _reason(text: str, known: list[str]) -> Runs:
    return (Text("Reason: "), *prose(text, known)) if text else ()
