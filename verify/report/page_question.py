"""The first two sections: what is certified, in one sentence with the numbers, and the problem."""

from __future__ import annotations

from typing import Any

from verify.problem.hypothesis import Form
from verify.problem.optimality import optimality
from verify.report.formula_tree import read_formula
from verify.report.math_boxes import Atom, Box, Fence, Row, Script, boxes, relation, row, symbol
from verify.report.page_blocks import (
    Block,
    Code,
    Equation,
    Math,
    Paragraph,
    Run,
    Runs,
    Section,
    Table,
    Text,
    words,
)
from verify.report.page_numbers import V, box_of, joined, name, numbers_of
from verify.report.prose import formula, prose

SHOWN_WEIGHTS = 24
TRUSTED_LAW = "no closed form"


def names_of(predicate: dict[str, Any]) -> list[str]:
    """Return the names that may stand in formulas of this problem."""
    density = predicate["problem"]["density"]
    return [density["variable"], density["parameter"], *density["constants"], "m"]


def parameter_of(predicate: dict[str, Any]) -> Box:
    """Return the parameter as it is written."""
    return symbol(predicate["problem"]["density"]["parameter"])


def exact_box(text: str) -> Box:
    """Return an exact number within a formula."""
    return boxes(read_formula(text))


def certified(predicate: dict[str, Any]) -> Section:
    """Return the first section."""
    sentence: list[Run] = [*_subject(predicate), Text(" rejects the null hypothesis "), *rejection(predicate["test"])]
    sentence += [Text(", where "), Math(sum_of_statistics(predicate)), Text(".")]
    return Section("What is certified", [Paragraph(tuple(sentence), "lead"), Paragraph(_grades(predicate))])


def _subject(predicate: dict[str, Any]) -> Runs:
    problem, known = predicate["problem"], names_of(predicate)
    levels = list(dict.fromkeys(problem["alpha"]))
    level = [Text(" at level "), *formula(levels[0])]
    if len(levels) > 1:
        pairs = zip(problem["alpha"], predicate["side_conditions"], strict=False)
        level = [Text(" with "), *joined([_level(predicate, alpha, entry["at"]) for alpha, entry in pairs])]
    count, sense = problem["n"], optimality(Form(predicate["test"]["form"]), levels).sense
    data = "one observation" if count == 1 else f"{count} independent observations"
    before, after = (f"{sense} ", "") if len(levels) == 1 else ("", f", {sense},")
    return (
        Text(f"For {data}, the {before}test of "),
        *prose(problem["null"], known),
        Text(" against "),
        *prose(problem["alternative"], known),
        *level,
        *([Text(after)] if after else []),
    )


def _level(predicate: dict[str, Any], alpha: str, at: str) -> Runs:
    where = row(parameter_of(predicate), relation("="), exact_box(at))
    return (Text("level "), *formula(alpha), Text(" at "), Math(where))


def rejection(test: dict[str, Any]) -> Runs:
    """Say when the test rejects, with its numbers."""
    known = {key: box_of(value) for key, value in numbers_of(test).items()}
    ends = [key for key in known if key.startswith("c")]
    one_atom = len(ends) == 2 and test["c1"] == test["c2"] and isinstance(test["c1"], str)
    neighbours = "y1" in test and test["y2"] - test["y1"] == 1
    certain = _certain(test["rejects"], [known[key] for key in ends], nothing_between=one_atom or neighbours)
    fractions = [key for key in known if key.startswith("gamma")]
    if one_atom:
        ends, fractions = ends[:1], fractions[:1]
    drawn = [
        (Text("with probability "), Math(row(name(gamma).box, relation("="), known[gamma])), Text(" when "),
         Math(row(V, relation("="), known[c])))
        for gamma, c in zip(fractions, ends, strict=False)
    ]  # fmt: skip
    parts: list[Runs] = [certain] if certain else []
    rest = joined([*parts, *drawn])
    return rest if certain else (*rest, Text(" and never otherwise"))


def _certain(rejects: str, c: list[Box], *, nothing_between: bool) -> Runs:
    if rejects == "inside":
        if nothing_between:
            return ()
        return (Text("when "), Math(row(c[0], relation("<"), V, relation("<"), c[1])))
    if rejects == "outside":
        low, high = row(V, relation("<"), c[0]), row(V, relation(">"), c[-1])
        return (Text("when "), Math(low), Text(" or "), Math(high))
    return (Text("when "), Math(row(V, relation(">" if rejects == "above" else "<"), c[0])))


def sum_of_statistics(predicate: dict[str, Any]) -> Box:
    """Return V = T(X1) + ... + T(Xn), with T put in."""
    n, statistic = predicate["problem"]["n"], predicate["derivation"]["statistic"]
    variable = predicate["problem"]["density"]["variable"]

    def term(index: str) -> Box:
        x: Box = Script(Atom("name", "X"), below=Atom("number", index)) if n > 1 else Atom("name", "X")
        return x if statistic == variable else row(Atom("name", "T"), Fence(x))

    plus, dots = Atom("operator", "+"), Atom("number", "⋯")
    terms: list[Box] = [term("1")]
    if n == 2:
        terms += [plus, term("2")]
    elif n == 3:
        terms += [plus, term("2"), plus, term("3")]
    elif n > 3:
        terms += [plus, dots, plus, term(str(n))]
    named = () if statistic == variable else (
        Atom("operator", ","), Atom("space", "\u2003"), Atom("name", "T"), Fence(symbol(variable)), relation("="),
        boxes(read_formula(statistic)),
    )  # fmt: skip
    return Row((V, relation("="), *terms, *named))


def is_checked(predicate: dict[str, Any]) -> bool:
    """Whether the numbers lean on a law of the sum that is checked numerically, not enclosed."""
    return any(step["name"] == "law of the sum" for step in predicate["derivation"]["steps"])


def _grades(predicate: dict[str, Any]) -> Runs:
    grade, digits = predicate["derivation"]["grade"], predicate["problem"]["digits"]
    if is_checked(predicate):
        numbers = (
            "two numerical routes agree on them, neither of which bounds its error; the producing program states them "
            "and the rechecker takes them on trust"
        )
    elif predicate["law"]["name"].startswith(TRUSTED_LAW):
        numbers = (
            "they are stated by the producing program and taken on trust by the rechecker, for this law "
            "has no closed form"
        )
    else:
        numbers = f"each is exact or enclosed between two decimals of {digits} significant digits, rounded outward"
    return (
        Text("Derivation: "), Text(grade, strong=True), Text(", the weakest grade of its steps (the numerical "
        "look apart). "),
        Text("Numbers: "), Text(numbers + ". In the sentence above they are cut after ten digits; section 4 "
        "gives them in full."),
    )  # fmt: skip


def problem_section(predicate: dict[str, Any]) -> Section:
    """Return the second section."""
    problem, known = predicate["problem"], names_of(predicate)
    density, variable = problem["density"], Math(symbol(problem["density"]["variable"]))
    rows: list[list[Runs]] = [
        [words("Support"), (Text("of "), variable, Text(": "), *prose(density["support"], known))],
        [words("Parameter"), (Math(parameter_of(predicate)), Text(", space: "), *prose(density["space"], known))],
    ]
    if density["constants"]:
        parts = [
            (Math(row(symbol(key), relation("="), exact_box(value))),) for key, value in density["constants"].items()
        ]
        rows.append([words("Known constants"), joined(list(parts))])
    levels = [
        _level(predicate, a, e["at"]) for a, e in zip(problem["alpha"], predicate["side_conditions"], strict=False)
    ]
    rows += [
        [words("Null hypothesis"), prose(problem["null"], known)],
        [words("Alternative"), prose(problem["alternative"], known)],
        [words("Level"), joined(levels)],
        [words("Observations"), words(f"{problem['n']}, independent, with the density above")],
        [words("Digits asked for"), words(str(problem["digits"]))],
    ]
    if problem["source"]:
        rows.append([words("Source"), words(problem["source"])])
    return Section("The problem", [*_density(predicate), Table((), rows, (3, 10))])


def _density(predicate: dict[str, Any]) -> list[Block]:
    density = predicate["problem"]["density"]
    variable, parameter = symbol(density["variable"]), parameter_of(predicate)
    if "weights" in density:
        return _weights(density)
    left = density_sign(predicate)
    text = density.get("formula", density.get("kernel"))
    sign = relation("=" if "formula" in density else "∝")
    which = "the density" if "formula" in density else "a density proportional to"
    body = boxes(read_formula(text), stacked=True)
    intro: Runs = (Text("In "), Math(variable), Text(", with parameter "), Math(parameter))
    blocks: list[Block] = [Paragraph((*intro, Text(f", one observation has {which}")), "intro")]
    blocks.append(Equation(row(left, sign, body)))
    blocks.append(Paragraph((Text("written in the case file as "), Code(text), Text(".")), "small"))
    return blocks


def density_sign(predicate: dict[str, Any]) -> Box:
    """Return f(x; t)."""
    variable = symbol(predicate["problem"]["density"]["variable"])
    inner = row(variable, Atom("operator", ";"), Atom("space", "\u2009"), parameter_of(predicate))
    return row(Atom("name", "f"), Fence(inner))


def _weights(density: dict[str, Any]) -> list[Block]:
    variable, parameter = symbol(density["variable"]), symbol(density["parameter"])
    kernel = row(Atom("name", "h"), Fence(variable), Atom("space", "\u2009"), Script(parameter, above=variable))
    shown = ", ".join(density["weights"][:SHOWN_WEIGHTS])
    more = len(density["weights"]) - SHOWN_WEIGHTS
    rest = f" and {more} more, all of them in the certificate" if more > 0 else ""
    inner = row(variable, Atom("operator", ";"), Atom("space", "\u2009"), parameter)
    left = row(Atom("name", "f"), Fence(inner))
    return [
        Paragraph(words("One observation has a density proportional to"), "intro"),
        Equation(row(left, relation("∝"), kernel)),
        Paragraph(
            (*words("with the weights "), Math(row(Atom("name", "h"), Fence(variable))), Text(f" = {shown}{rest}.")),
            "small",
        ),
    ]
