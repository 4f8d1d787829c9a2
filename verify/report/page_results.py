"""Sections four and five: the numbers, and how far double precision may be trusted."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from verify.report.math_boxes import Atom
from verify.report.page_blocks import Block, Digits, Math, Paragraph, Run, Runs, Section, Table, Text, words
from verify.report.page_numbers import V, expectation, in_full, joined, kind_of, name, numbers_of, power_of_ten
from verify.report.page_question import exact_box, is_checked, parameter_of
from verify.report.prose import prose

BETWEEN = ". A number that is not exact lies between the two decimals shown, lower end above, upper end below."
NOT_PROVED = (
    ". Two numerical routes put each number between the two decimals shown, lower end above, upper end below; "
    "neither route bounds its error."
)


def numbers_section(predicate: dict[str, Any]) -> Section:
    """Return the fourth section."""
    return Section("The numbers", [*_numbers(predicate), *_conditions(predicate), *_rounding(predicate)])


def _numbers(predicate: dict[str, Any]) -> list[Block]:
    test = predicate["test"]
    word = "checked" if is_checked(predicate) else "enclosed"
    rows = [[(name(key),), in_full(value), kind_of(value, word)] for key, value in numbers_of(test).items()]
    intro = (
        Text("Cutoffs are on the scale of "), Math(V),
        Text(NOT_PROVED if word == "checked" else BETWEEN),
    )  # fmt: skip
    table = Table(
        (words("Number"), words("Value"), words("Kind")), rows, (2, 14, 6), "Cutoffs and fractions of the test"
    )
    lattice = {key: test[key] for key in ("y", "y1", "y2") if key in test}
    moved = (predicate["law"]["scale"], predicate["law"]["shift"]) != ("1", "0")
    notes: list[Block] = []
    if lattice and moved:
        places = " and ".join(str(value) for value in dict.fromkeys(lattice.values()))
        notes.append(
            Paragraph(
                (Text("On the lattice of "), Math(Atom("name", "Y")), Text(f" the cutoffs are {places}.")), "small"
            )
        )
    if not any(key.startswith("gamma") for key in test):
        notes.append(Paragraph(words("The law is continuous: no fraction is needed at a cutoff."), "small"))
    return [Paragraph(intro, "intro"), table, *notes]


def _conditions(predicate: dict[str, Any]) -> list[Block]:
    t = parameter_of(predicate)
    rows = [
        [
            (Math(expectation(t, exact_box(entry["at"]), entry["of"])),),
            in_full(entry["target"]),
            in_full(entry["expectation"]),
        ]
        for entry in predicate["side_conditions"]
    ]
    head = (words("Expectation"), words("Target"), words("Attained, over all numbers within the enclosures above"))
    return [Table(head, rows, (4, 4, 14), "Side conditions")]


def _rounding(predicate: dict[str, Any]) -> list[Block]:
    rounding, t = predicate["rounding"], parameter_of(predicate)
    if not rounding["rows"]:
        return []
    keys = list(rounding["rows"][0]["numbers"])
    places = list(dict.fromkeys(entry["at"] for entry in predicate["side_conditions"]))
    head: list[Runs] = [words("Decimals"), *((name(key),) for key in keys)]
    head += [(Math(expectation(t, exact_box(at), "phi")),) for at in places]
    head += [words("Size")] if len(places) > 1 else []
    rows: list[list[Runs]] = []
    for entry in rounding["rows"]:
        cells: list[Runs] = [words(str(entry["decimals"]))]
        cells += [(Digits(entry["numbers"][key]),) for key in keys]
        cells += [_upper(value) for value in entry["expectations"]]
        cells += [_upper(entry["size"]) if "size" in entry else words("not located")] if len(places) > 1 else []
        rows.append(cells)
    intro = (
        f"When the numbers are printed to k decimals, the test attains the expectations below (rounded up). "
        f"{sufficient(rounding)}"
    )
    if not all("size" in entry for entry in rounding["rows"]):
        intro += (
            " The size is not located where the power halfway between the limits is not shown to be at least that at "
            "both; it is then at least the larger of the two expectations."
        )
    return [
        Paragraph(words(intro), "intro"),
        Table(
            head, rows, (3, *([4] * (len(head) - 1))), "True expectations and size of the test as printed to k decimals"
        ),
    ]


def sufficient(rounding: dict[str, Any]) -> str:
    """Say how many decimals keep the expectations within the tolerance."""
    k = rounding["decimals"]
    unit = "decimal" if k == 1 else "decimals"
    if not k:
        return f"No number of decimals tried keeps every expectation within {rounding['tolerance']} of its level."
    return f"The smallest k that keeps every expectation within {rounding['tolerance']} of its level is {k} {unit}."


def _upper(claim: Any) -> Runs:
    if isinstance(claim, str) and len(claim) <= 12:
        return (Digits(claim),)
    value = Fraction(claim) if isinstance(claim, str) else Fraction(claim["upper"])
    scaled = -(-value * 10**10 // 1) if value > Fraction(1, 10**4) else None
    if scaled is None:
        return (Text(power_of_ten(value) if value > 0 else "0"),)
    text = str(scaled).rjust(11, "0")
    return (Digits(f"{text[:-10]}.{text[-10:]}"),)


def double_section(predicate: dict[str, Any]) -> Section:
    """Return the fifth section."""
    found = predicate["double_precision"]
    keys = list(numbers_of(predicate["test"]))
    intro = (
        "The same numbers were computed in double precision by the routes below, which share no code with the proof. "
    )
    intro += (
        "A digit count is the number of significant digits to which the value agrees with the certified "
        "number (17 is the most that can be)."
    )
    rows: list[list[Runs]] = []
    for opinion in found["opinions"]:
        rows += _rows(opinion, keys)
    blocks: list[Block] = [Paragraph(words(intro))]
    if rows:
        head = (words("Route"), words("Number"), words("Value in double precision"), words("Digits agreed"))
        blocks.append(Table(head, rows, (5, 3, 9, 5), "Double precision against the certified numbers"))
    else:
        blocks.append(Paragraph(words("No route gave numbers.")))
    notes = [
        (Text(f"{opinion['route']}: "), *prose(opinion["note"], ())) for opinion in found["opinions"] if opinion["note"]
    ]
    blocks += [Paragraph(note, "small") for note in notes]
    return Section("How far double precision may be trusted", [*blocks, *_verdict(found, keys)])


def _rows(opinion: dict[str, Any], keys: list[str]) -> list[list[Runs]]:
    """A row for each number of a route that gave any."""
    given = {key: opinion["numbers"][key] for key in keys if key in opinion["numbers"]}
    if all(value is None for value in given.values()):
        return []
    return [
        [
            words(opinion["route"]),
            (name(key),),
            words("none") if value is None else (Digits(value),),
            words(str(opinion["digits"].get(key, ""))),
        ]
        for key, value in given.items()
    ]


def _verdict(found: dict[str, Any], keys: list[str]) -> list[Block]:
    blocks: list[Block] = []
    least = [min(opinion["digits"].values()) for opinion in found["opinions"] if opinion["digits"]]
    if least:
        routes = joined(
            [words(f"{o['route']} to {min(o['digits'].values())}") for o in found["opinions"] if o["digits"]]
        )
        blocks.append(
            Paragraph(
                (Text("For this problem every number agrees, in significant digits: ", strong=True), *routes, Text("."))
            )
        )
    if found["condition"]:
        text = (
            f"Condition: a relative error e in a tail of the law moves these numbers by up to about "
            f"{found['condition']} e."
        )
        blocks.append(Paragraph(words(text)))
    for flag in found["flags"]:
        runs: list[Run] = [Text(f"Warning, {flag['kind']}: ", strong=True), Text(flag["text"])]
        blocks.append(Paragraph(tuple(runs), "caution"))
    if not found["flags"]:
        blocks.append(
            Paragraph(words("No warning was raised. Other problems, even near ones, may behave differently."))
        )
    return blocks
