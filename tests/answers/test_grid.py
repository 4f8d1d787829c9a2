"""Grids: which rows there are, in which order, and what is refused."""

import pytest

from verify.answers.grid import problem_of_design, read_grid
from verify.errors import InputError
from verify.problem.casefile import read_case_text

BASE = """
[density]
formula = "exp(-lam) * lam**x / factorial(x)"
variable = "x"
support = "integers >= 0"
parameter = "lam"
space = "lam > 0"
[problem]
null = "{null}"
alpha = "0.05"
n = 10
[grid]
{grid}
"""


def grid_of(grid: str, null: str = "lam <= 8 or lam >= 12"):
    return read_grid(read_case_text("beads.grid.toml", BASE.format(null=null, grid=grid)))


def test_the_order_is_limits_levels_sizes():
    grid = grid_of('lower = ["8", "17/2"]\nalpha = ["0.05", ["0.02", "1/3"]]\nn = [3, 1]')
    rows = [(d["limits"], d["levels"], d["n"]) for d in grid.designs()]
    assert len(grid) == len(rows) == 8
    assert rows[:4] == [
        (["8", "12"], ["0.05", "0.05"], 3),
        (["8", "12"], ["0.05", "0.05"], 1),
        (["8", "12"], ["0.02", "1/3"], 3),
        (["8", "12"], ["0.02", "1/3"], 1),
    ]
    assert rows[4][0] == ["8.5", "12"]


def test_pairs_that_do_not_rise_are_counted():
    grid = grid_of('lower = ["8", "10", "12"]\nupper = ["9", "12"]')
    assert [d["limits"] for d in grid.designs()] == [["8", "9"], ["8", "12"], ["10", "12"]]
    assert grid.left_out == 3


def test_what_has_no_list_is_as_in_the_problem():
    assert [*grid_of('n = "2..6 step 2"').designs()] == [
        {"limits": ["8", "12"], "levels": ["0.05", "0.05"], "n": n} for n in (2, 4, 6)
    ]


@pytest.mark.parametrize(
    ("null", "text"),
    [("lam <= 8", "lam <= 3"), ("lam >= 8", "lam >= 3"), ("lam = 8", "lam = 3")],
)
def test_one_limit_keeps_its_form(null, text):
    grid = grid_of('limit = ["3"]', null)
    (design,) = grid.designs()
    problem = problem_of_design(grid.problem, design)
    assert problem.hypothesis.text("lam") == text


@pytest.mark.parametrize(
    ("grid", "message"),
    [
        ('limit = ["3"]', r"grid\.limit: limit does not fit the null; the null has 2 limit\(s\): give lower and upper"),
        ('lower = ["12"]\nupper = ["8"]', r"grid\.lower: no pair of limits is ascending"),
        ('n = "5..3"', r"grid\.n: the range 5\.\.3 is empty"),
        ('n = "many"', r"grid\.n: 'many' is not a range"),
        ("n = [1.5]", r"grid\.n: n is a list; write a list of whole numbers"),
        ("n = [true]", r"grid\.n: n is a list"),
        ('alpha = "0.05"', r"grid\.alpha: alpha is a text that is not known here; write a list of levels"),
        ('size = ["3"]', r"grid\.size: unknown key in \[grid\]"),
        ('n = "1..99999999999"', r"grid: the grid has 99999999999 rows; at most 10000000"),
        ('lower = ["spam"]', r"grid\.lower: "),
    ],
)
def test_what_cannot_be_used_is_named(grid, message):
    with pytest.raises(InputError, match=rf"^beads\.grid\.toml: {message}"):
        grid_of(grid)


def test_two_levels_need_two_limits():
    with pytest.raises(InputError, match=r"grid\.alpha: two levels for a null with one limit"):
        grid_of('alpha = [["0.05", "0.01"]]', "lam = 8")
