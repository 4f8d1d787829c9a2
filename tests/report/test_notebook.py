"""What an object shows of itself in a terminal and in a notebook."""

import verify


def test_derivation_and_solution_show_themselves() -> None:
    density = verify.Density("exp(-lam)*lam**x/factorial(x)", "x", "integers >= 0", "lam", "lam > 0")
    problem = verify.Problem(density, null="lam <= 8 or lam >= 12", alpha="0.05", n=10)
    solution = verify.solve(problem, digits=20)
    lines = str(solution).splitlines()
    assert lines[0] == "null: lam <= 8 or lam >= 12; n = 10; rejects inside; proved"
    assert lines[1] == "c1     = 94"
    assert [line.split(" ")[0] for line in lines[1:]] == ["c1", "c2", "gamma1", "gamma2"]
    for shown in (solution, solution.derivation):
        html = shown._repr_html_()
        assert html.startswith("<pre>")
        assert "<=" not in html
