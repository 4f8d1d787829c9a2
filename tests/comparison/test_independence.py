"""The routes share no code with the solution: what they import, read from their sources."""

import ast
from pathlib import Path

import pytest

import verify.comparison

FOLDER = Path(verify.comparison.__file__).parent
ROUTES = sorted(
    {path.stem for path in FOLDER.glob("*.py")} - {"compare", "condition", "digits", "flags", "opinion", "__init__"}
)


@pytest.mark.parametrize("name", ROUTES)
def test_a_route_imports_nothing_of_the_proof(name):
    tree = ast.parse((FOLDER / f"{name}.py").read_text(encoding="utf-8"))
    typing_only = {id(node) for block in tree.body if isinstance(block, ast.If) for node in ast.walk(block)}
    modules = {
        node.module
        for node in ast.walk(tree)
        if isinstance(node, ast.ImportFrom) and id(node) not in typing_only and (node.module or "").startswith("verify")
    }
    assert all(module == "verify.errors" or module.startswith("verify.comparison.") for module in modules)
    assert not modules & {f"verify.comparison.{name}" for name in ("compare", "condition", "flags", "opinion")}
