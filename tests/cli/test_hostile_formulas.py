"""Formulas written to run something, or never to end: one line, status 2, bounded, nothing run."""

import json
import resource
import subprocess
import sys
from pathlib import Path

import pytest

CASE = """
[density]
formula = {formula}
variable = "x"
support = "integers >= 0"
parameter = "lam"
space = "lam > 0"
[problem]
null = "lam <= 8"
alpha = "0.05"
n = 10
"""

DANGEROUS = {
    "import": "__import__('os').system('touch HARMED')",
    "open": "open('HARMED', 'w')",
    "tower of powers": "9**9**9**9",
    "tower of powers with a variable": "x**9**9**9",
    "large factorial": "factorial(10**12)",
    "nested factorial": "factorial(factorial(factorial(20)))",
    "large binomial": "binomial(10**9, 5*10**8)",
    "large gamma": "gamma(10**10)",
    "left shift": "2 << 10**10",
    "long integer": "1" + "0" * 5000,
    "large exponent": "1e999999999",
    "5 000 brackets": "(" * 5000 + "x" + ")" * 5000,
    "5 000 minus signs": "-" * 5000 + "x",
    "20 000 terms": "+".join(["x"] * 20_000),
}
"""Each in a process of its own, with little memory."""

REFUSED = {
    "attribute": "x.__class__.__mro__[1].__subclasses__()",
    "attribute of a number": "(1).__class__",
    "lambda": "(lambda: 1)()",
    "comprehension": "[x for x in (1,)]",
    "walrus": "(y := 1)",
    "string": "'x' * 10",
    "formatted string": "f'{x}'",
    "subscript": "x[0]",
    "comparison": "x < 1",
    "conditional": "1 if x else 2",
    "keyword argument": "exp(x, evaluate=False)",
    "star argument": "exp(*x)",
    "look-alike letter": "exp(-lаm)",  # the second letter of lam is Cyrillic
    "look-alike digit": "exp(-lam)*x**٣",
    "full-width letters": "ｅｘｐ(-lam)",
    "null byte": "exp(-lam)\x00*x",
    "empty": "",
    "blank": "   ",
    "statement": "import os",
    "several": "x; x",
    "assignment": "x = 1",
    "unbalanced": "exp(-lam",
    "unknown function": "eval(x)",
    "function without a call": "exp",
    "call of a number": "2(x)",
    "complex literal": "2j",
    "truth value": "True",
    "ellipsis": "...",
    "division by zero": "x/0",
}


def limited() -> None:
    """Bound the memory of a child process."""
    resource.setrlimit(resource.RLIMIT_AS, (2 * 1024**3, 2 * 1024**3))


def refused(done) -> None:
    assert done.returncode == 2, done.stderr
    assert done.stdout == ""
    assert len(done.stderr.splitlines()) == 1
    assert len(done.stderr) < 600
    assert "density.formula" in done.stderr


@pytest.mark.parametrize("name", DANGEROUS)
def test_dangerous_formula(name, tmp_path) -> None:
    text = CASE.format(formula=json.dumps(DANGEROUS[name]))
    command = [sys.executable, "-m", "verify", "solve", "-"]
    root = Path(__file__).parents[2]
    done = subprocess.run(
        command, input=text, capture_output=True, text=True, timeout=60, preexec_fn=limited, cwd=tmp_path,
        env={"PYTHONPATH": str(root), "PATH": ""},
    )  # fmt: skip
    refused(done)
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize("name", REFUSED)
def test_refused_formula(name, sidecheck_here) -> None:
    refused(sidecheck_here("solve", text=CASE.format(formula=json.dumps(REFUSED[name]))))
