"""What has no law here is refused or left undecided from the command line, with what would help."""

from pathlib import Path

import pytest

REFUSALS = Path(__file__).parents[2] / "casebook" / "refusals"

CASE = """title = "refused"
[density]
{density}
variable = "x"
support = "{support}"
parameter = "t"
space = "t > 0"
[problem]
null = "t <= 1 or t >= 2"
alpha = "0.05"
n = {n}
"""

SQUARES = 'formula = "2*sqrt(t/pi)*exp(-t*x**2)/erf(sqrt(t))"'
"""Squares of a truncated normal variable: their density is singular at 0, their transform of no kind known here."""

INVALID, REFUTED, UNDECIDED = 2, 1, 3


@pytest.mark.parametrize("support", ["integers >= 0", "integers", "reals > 0", "reals in (0, 1)"])
def test_a_kernel_off_a_finite_lattice_is_refused_with_two_ways_out(sidecheck_here, support) -> None:  # type: ignore[no-untyped-def]
    text = CASE.format(density='kernel = "t**x*exp(-x**2)"', support=support, n=1)
    done = sidecheck_here("solve", text=text)
    assert done.returncode == INVALID
    for word in ("density.kernel", "finite support", "give the whole density as formula"):
        assert word in done.stderr
    assert "Traceback" not in done.stderr


@pytest.mark.parametrize(
    ("name", "words"),
    [("diverging-sum", ("diverges", "t = 2")), ("harmonic-sum", ("diverges for every t",))],
)
def test_a_sum_that_diverges_is_refuted_with_a_witness(sidecheck_here, name, words) -> None:  # type: ignore[no-untyped-def]
    done = sidecheck_here("solve", str(REFUSALS / f"{name}.case.toml"))
    said = " ".join(done.stdout.split())
    assert done.returncode == REFUTED
    for word in (*words, "witness"):
        assert word in said


@pytest.mark.parametrize(
    ("density", "support", "n", "words"),
    [
        ('kernel = "exp(-t*sqrt(x))"', "integers 0..5", 2, ("sqrt(x)", "would help")),
    ],
    ids=["values on no lattice"],
)
def test_a_law_that_is_not_known_is_undecided_with_what_would_help(sidecheck_here, density, support, n, words) -> None:  # type: ignore[no-untyped-def]
    done = sidecheck_here("solve", text=CASE.format(density=density, support=support, n=n))
    said = " ".join((done.stdout + done.stderr).split())
    assert done.returncode == UNDECIDED
    for word in words:
        assert word in said
    assert "Traceback" not in said


def test_one_observation_of_the_singular_density_is_solved(sidecheck_here) -> None:  # type: ignore[no-untyped-def]
    text = CASE.format(density=SQUARES, support="reals in (0, 1)", n=1)
    done = sidecheck_here("solve", "--digits", "20", text=text)
    assert done.returncode == 0
    assert "proved" in done.stdout
