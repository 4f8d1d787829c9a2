"""The key of a result: the canonical problem, the digits, and the versions of what it depends on."""

from __future__ import annotations

import hashlib
import json
from typing import TYPE_CHECKING

from verify.memory.place import FORMAT
from verify.problem.numbers import exact_text
from verify.versions import versions

if TYPE_CHECKING:
    from verify.derivation.derive import Derivation
    from verify.problem.problem import Problem


def key_of(problem: Problem, digits: int, derivation: Derivation) -> str:
    """Return the key: equal for problems that ask the same, whether a number is written 0.05 or 1/20.

    Raises
    ------
    ValueError
        When the derivation found no law.
    """
    family, hypothesis = derivation.family, problem.hypothesis
    if family is None:
        raise ValueError("a key needs the law")
    density = problem.density
    parts = {
        "density": [exact_text(density.expr), density.variable, density.parameter, density.is_kernel],
        "support": density.parsed_support.text,
        "space": density.parsed_space.text,
        "weights": [str(weight) for weight in density.table or ()],
        "constants": {name: exact_text(value) for name, value in density.constant_values.items()},
        "law": [family.law.name, exact_text(family.scale), exact_text(family.shift), derivation.rising],
        "null": hypothesis.text(density.parameter),
        "levels": [exact_text(level) for level in problem.levels],
        "n": problem.n,
        "digits": digits,
        "format": FORMAT,
        "engines": versions(),
    }
    return hashlib.sha256(json.dumps(parts, sort_keys=True).encode()).hexdigest()
