"""Case files that cannot be used: one clear line that names the key, status 2."""

import pytest

GOOD = """
title = "Poisson"
[density]
formula = "exp(-lam) * lam**x / factorial(x)"
variable = "x"
support = "integers >= 0"
parameter = "lam"
space = "lam > 0"
[problem]
null = "lam <= 8 or lam >= 12"
alpha = "0.05"
n = 10
"""

CHANGES = {
    "not TOML": ("[density]", "[density", ""),
    "no density": ("[density]", "[densities]", "densit"),
    "no formula": ('formula = "exp(-lam) * lam**x / factorial(x)"', "", "formula"),
    "unknown key": ('variable = "x"', 'variable = "x"\nvarible = "y"', "varible"),
    "unknown section": ("[problem]", "[extra]\na = 1\n[problem]", "extra"),
    "unknown name": ("factorial(x)", "factorial(y)", "y"),
    "support": ("integers >= 0", "integers from nought", "support"),
    "empty support": ("integers >= 0", "integers 5..2", "support"),
    "space": ('"lam > 0"', '"positive"', "space"),
    "limits outside the space": ("lam <= 8", "lam <= -8", "null"),
    "limits in the wrong order": ("lam <= 8 or lam >= 12", "lam <= 12 or lam >= 8", "null"),
    "equal limits": ("lam <= 8 or lam >= 12", "lam <= 8 or lam >= 8", "null"),
    "null of another parameter": ("lam <= 8 or lam >= 12", "mu <= 8", "null"),
    "null is no condition": ("lam <= 8 or lam >= 12", "eight", "null"),
    "level too large": ('"0.05"', '"5"', "alpha"),
    "level zero": ('"0.05"', '"0"', "alpha"),
    "level no number": ('"0.05"', '"five percent"', "alpha"),
    "three levels": ('"0.05"', '["0.01", "0.02", "0.03"]', "alpha"),
    "constant named like a function": ('"lam > 0"', '"lam > 0"\nconstants = { exp = "2" }', "exp"),
    "n zero": ("n = 10", "n = 0", "n"),
    "n not whole": ("n = 10", 'n = "ten"', "n"),
    "n a truth value": ("n = 10", "n = true", "n"),
    "not the complement": ("n = 10", 'n = 10\nalternative = "8 < lam < 13"', "alternative"),
    "a key twice": ("n = 10", "n = 10\nn = 11", ""),
    "a list for a text": ('variable = "x"', 'variable = ["x"]', "variable"),
}


def test_the_good_case_is_good(sidecheck_here) -> None:
    done = sidecheck_here("derive", text=GOOD)
    assert (done.returncode, done.stderr) == (0, "")


@pytest.mark.parametrize("name", CHANGES)
def test_one_change_gives_one_line_and_status_2(sidecheck_here, name) -> None:
    old, new, key = CHANGES[name]
    assert old in GOOD
    done = sidecheck_here("solve", text=GOOD.replace(old, new))
    assert done.returncode == 2, done.stderr
    assert done.stdout == ""
    assert len(done.stderr.splitlines()) == 1
    assert key in done.stderr
    assert "here.case.toml: " in done.stderr


def test_no_problem_cannot_be_solved_but_can_be_derived(sidecheck_here) -> None:
    text = GOOD[: GOOD.index("[problem]")]
    assert sidecheck_here("derive", text=text).returncode == 0
    done = sidecheck_here("solve", text=text)
    assert done.returncode == 2
    assert "[problem]" in done.stderr


@pytest.mark.parametrize("data", ["", "\ufeff", "\x00", "[[[[" * 2000, "a = 1\n" * 3])
def test_what_is_no_case_file_at_all(sidecheck_here, data) -> None:
    done = sidecheck_here("derive", text=data)
    assert done.returncode == 2
    assert len(done.stderr.splitlines()) == 1
    assert len(done.stderr) < 500
