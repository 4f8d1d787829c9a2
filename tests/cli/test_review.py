"""``sidecheck review`` from the outside: statuses, JSON against its schema, text and memo."""

import json
from pathlib import Path

import jsonschema
import pytest

ROOT = Path(__file__).parents[2]
SCHEMA = json.loads((ROOT / "verify" / "report" / "schemas" / "review.schema.json").read_text())
LOT = (ROOT / "casebook" / "demo" / "lot-release.case.toml").read_text().partition("[expect]")[0]
RIGHT = 'c1 = "94"\nc2 = "103"\ngamma1 = "0.0867"\ngamma2 = "0.5147"\n'


@pytest.mark.parametrize(
    ("claim", "verdict", "status"),
    [
        (RIGHT, "agrees", 0),
        (RIGHT.replace("0.0867", "0.0868"), "last digit", 0),
        (RIGHT.replace('"94"', '"95"'), "differs", 1),
        (RIGHT + 'law = "Poisson(lam)"\n', "refuted", 1),
        ('natural_parameter = "log(lam)"\n', "agrees", 0),
    ],
)
def test_a_claim_of_a_case_file(sidecheck, claim, verdict, status) -> None:
    done = sidecheck("review", "-", "--json", "--digits", "20", stdin=f"{LOT}\n[claim]\n{claim}")
    assert (done.returncode, done.stderr) == (status, "")
    answer = json.loads(done.stdout)
    jsonschema.Draft202012Validator(SCHEMA).validate(answer)
    (row,) = answer["rows"]
    assert row["verdict"] == verdict
    if "c1" in claim:
        assert row["correct"]["c1"] == {"lower": "94", "upper": "94"}


def test_an_unreadable_number_is_one_line_with_its_key(sidecheck) -> None:
    done = sidecheck("review", "-", stdin=f'{LOT}\n[claim]\nc1 = "94"\nc2 = "many"\n')
    assert done.returncode == 2
    assert "c2" in done.stderr
    assert done.stderr.count("\n") == 1


def test_text_names_the_slip_and_what_follows(sidecheck) -> None:
    wrong = RIGHT.replace("0.0867", "x").replace("0.5147", "0.0867").replace("x", "0.5147")
    done = sidecheck("review", "-", stdin=f"{LOT}\n[claim]\n{wrong}")
    assert done.returncode == 1
    for piece in ("Verdict: differs", "gamma1 and gamma2 in each other's place", "true size", "lam = 8", "best test"):
        assert piece in done.stdout
    assert "\x1b[" not in done.stdout


def test_a_density_that_is_no_family_is_refuted(sidecheck, tmp_path) -> None:
    memo = tmp_path / "memo.html"
    done = sidecheck("review", "casebook/refusals/cauchy-location.case.toml", "--memo", str(memo))
    assert done.returncode == 1
    assert "refuted" in done.stdout
    assert "Witness" in memo.read_text()


def test_a_cutoff_without_fraction_at_an_irrational_level(sidecheck) -> None:
    """Poisson of mean 8: P(V > 13) = 0.0342 and P(V > 12) = 0.0638 are within sqrt(2)/20 = 0.0707, P(V > 11) is not."""
    case = LOT.partition("[problem]")[0] + '[problem]\nnull = "lam <= 8"\nalpha = "sqrt(2)/20"\nn = 1\n'
    for c, verdict, status in (("13", "differs", 1), ("12", "agrees", 0)):
        done = sidecheck("review", "-", stdin=f'{case}\n[claim]\nc = "{c}"\n')
        assert (done.returncode, f"Verdict: {verdict}" in done.stdout) == (status, True)


def test_each_level_of_an_interval_null_is_kept_for_itself(sidecheck_here) -> None:
    case = LOT.partition("[problem]")[0] + '[problem]\nnull = "8 <= lam <= 12"\nalpha = ["0.02", "0.05"]\nn = 1\n'
    done = sidecheck_here("review", text=f'{case}\n[claim]\nc1 = "3"\nc2 = "18"\n')
    assert done.returncode == 0
    assert "the level is kept" in done.stdout
