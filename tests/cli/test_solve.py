"""``sidecheck derive`` and ``solve`` from the outside: text, JSON against the published schemas, statuses."""

import json
from decimal import Decimal
from pathlib import Path

import jsonschema
import pytest

ROOT = Path(__file__).parents[2]
SCHEMAS = ROOT / "verify" / "report" / "schemas"
LOT = "casebook/demo/lot-release.case.toml"


def check(value: dict, name: str) -> None:
    schema = json.loads((SCHEMAS / f"{name}.schema.json").read_text())
    jsonschema.Draft202012Validator.check_schema(schema)
    jsonschema.Draft202012Validator(schema).validate(value)


@pytest.mark.parametrize(
    ("case", "form", "rejects"),
    [
        (LOT, "outside null", "inside"),
        ("casebook/demo/lot-drift.case.toml", "interval null", "outside"),
        ("casebook/demo/diameter-target.case.toml", "point null", "outside"),
        ("casebook/demo/nozzle-drop-outs.case.toml", "one-sided", None),
        ("casebook/numerics/single-trial.case.toml", "outside null", "inside"),
    ],
)
def test_solve_json_fits_its_schema(sidecheck, case, form, rejects) -> None:
    done = sidecheck("solve", case, "--json", "--digits", "30")
    assert (done.returncode, done.stderr) == (0, "")
    answer = json.loads(done.stdout)
    check(answer, "solve")
    assert answer["form"] == form
    assert rejects in (None, answer["rejects"])
    assert answer["grade"] == "proved"
    for condition in answer["side_conditions"]:
        ends = {key: Decimal(text) for key, text in condition["expectation"].items()}
        assert ends["lower"] <= ends["upper"]


@pytest.mark.parametrize("name", ["demo/lot-release", "refusals/cauchy-location", "laws/pareto"])
def test_derive_json_fits_its_schema(sidecheck, name) -> None:
    done = sidecheck("derive", f"casebook/{name}.case.toml", "--json")
    answer = json.loads(done.stdout)
    check(answer, "derive")
    assert done.returncode == (1 if answer["grade"] == "refuted" else 0)


def test_solve_of_a_refuted_density_fits_the_schema_and_is_status_1(sidecheck) -> None:
    done = sidecheck("solve", "casebook/refusals/uniform-end.case.toml", "--json")
    assert done.returncode == 1
    answer = json.loads(done.stdout)
    check(answer, "solve")
    assert answer["cutoffs"] is None
    assert answer["grade"] == "refuted"


def test_error_json_fits_its_schema(sidecheck) -> None:
    check(json.loads(sidecheck("solve", "-", "--json", stdin="a = 1").stdout), "error")


def test_standard_input_is_the_same_as_the_file(sidecheck) -> None:
    text = (ROOT / LOT).read_text()
    assert sidecheck("solve", "-", "--json", stdin=text).stdout == sidecheck("solve", LOT, "--json").stdout


def test_text_says_what_a_review_needs(sidecheck) -> None:
    done = sidecheck("solve", LOT)
    assert (done.returncode, done.stderr) == (0, "")
    headings = ["1. Asked", "2. Derived", "3. Solved to 50 digits", "4. Compared"]
    for piece in [*headings, "Poisson", "log(lam)", "gamma2", "[proved]"]:
        assert piece in done.stdout
    assert "qualified" in done.stdout
    assert max(map(len, done.stdout.splitlines())) <= 88


def test_many_digits_are_wrapped_not_flooding_one_line(sidecheck) -> None:
    done = sidecheck("solve", LOT, "--digits", "2000", "--no-compare")
    assert done.returncode == 0
    assert max(map(len, done.stdout.splitlines())) <= 88
    digits = "".join(done.stdout.split("gamma1 = ")[1].split("gamma2")[0].split())
    assert len(digits) >= 2000


def test_a_wrong_claim_is_refuted_and_the_right_test_still_shown(sidecheck) -> None:
    done = sidecheck("solve", "casebook/demo/claim-wrong-parameter.case.toml", "--json")
    assert done.returncode == 1
    answer = json.loads(done.stdout)
    assert answer["cutoffs"] is not None
    assert "refuted" in [step["grade"] for step in answer["steps"] if step["name"] == "claims"]


def test_a_sum_without_a_bound_says_everywhere_that_it_is_checked(sidecheck) -> None:
    """The grade is in the text and in the JSON; nothing is called enclosed, and no number proved."""
    case = "casebook/laws/half-normal-cut.case.toml"
    done = sidecheck("solve", case, "--digits", "15")
    assert (done.returncode, done.stderr) == (0, "")
    text = " ".join(done.stdout.split())
    assert "2. Derived checked numerically" in text
    assert "3. Solved to 15 digits checked numerically" in text
    assert "[checked numerically] law of the sum:" in text
    assert "neither bounds its error" in text
    assert "enclosed within" not in text
    done = sidecheck("solve", case, "--digits", "15", "--json")
    answer = json.loads(done.stdout)
    check(answer, "solve")
    grades = {step["name"]: step["grade"] for step in answer["steps"]}
    assert answer["grade"] == grades["numbers"] == grades["law of the sum"] == "checked numerically"


def test_more_digits_than_the_two_routes_share_are_undecided(sidecheck) -> None:
    done = sidecheck("solve", "casebook/laws/half-normal-cut.case.toml", "--digits", "200")
    assert done.returncode == 3
    assert "digits, not 200" in done.stderr + done.stdout
