"""Formulas in MathML, typst data and plain text."""

from __future__ import annotations

import json
from dataclasses import dataclass
from fractions import Fraction
from xml.etree import ElementTree

import pytest
from hypothesis import given, reject, settings
from hypothesis import strategies as st

from verify.errors import InputError, SidecheckError
from verify.report.formula_tree import (
    Apply,
    Negative,
    Node,
    Number,
    Power,
    Product,
    Quotient,
    Relation,
    Sum,
    Symbol,
    read_formula,
    read_relation,
)  # fmt: skip
from verify.report.math_boxes import Atom, Box, Row, boxes
from verify.report.math_text import plain
from verify.report.mathml import mathml
from verify.report.typst_math import typst_math

NAMES = st.sampled_from(["x", "lam", "mu_0", "p", "rate", "a1", "A<b>", "&"])
LEAVES = st.one_of(st.integers(0, 99).map(lambda n: Number(str(n))), NAMES.map(Symbol))


def grown(inner: st.SearchStrategy[Node]) -> st.SearchStrategy[Node]:
    pair = st.tuples(inner, inner)
    one = st.sampled_from(["exp", "log", "sqrt", "factorial", "gamma", "abs", "loggamma", "zeta", "erf", "Q"])
    return st.one_of(
        inner.map(Negative),
        st.lists(inner, min_size=2, max_size=4).map(lambda terms: Sum(tuple(terms))),
        st.lists(inner, min_size=2, max_size=4).map(lambda factors: Product(tuple(factors))),
        pair.map(lambda ab: Quotient(*ab)),
        pair.map(lambda ab: Power(*ab)),
        st.tuples(one, inner).map(lambda na: Apply(na[0], (na[1],))),
        st.tuples(st.sampled_from(["binomial", "besselk", "beta"]), pair).map(lambda na: Apply(*na)),
    )


TREES = st.recursive(LEAVES, grown, max_leaves=12)


@settings(max_examples=150, deadline=None)
@given(TREES, st.booleans())
def test_every_tree_prints_well_formed(tree: Node, stacked: bool) -> None:
    box = boxes(tree, stacked=stacked)
    root = ElementTree.fromstring(mathml(box, alt=plain(box)))
    assert root.tag == "math"
    for element in root.iter():
        wanted = {"mfrac": 2, "msup": 2, "msub": 2, "msubsup": 3}.get(element.tag)
        assert wanted is None or len(element) == wanted
    assert json.loads(json.dumps(typst_math(box))) == typst_math(box)


ARITHMETIC = st.recursive(
    st.integers(1, 9).map(lambda n: Number(str(n))),
    lambda inner: st.one_of(
        inner.map(Negative),
        st.lists(inner, min_size=2, max_size=3).map(lambda terms: Sum(tuple(terms))),
        st.lists(inner, min_size=2, max_size=3).map(lambda factors: Product(tuple(factors))),
        st.tuples(inner, inner).map(lambda ab: Quotient(*ab)),
    ),
    max_leaves=8,
)


def value(node: Node) -> Fraction:
    match node:
        case Number(text):
            return Fraction(text)
        case Negative(body):
            return -value(body)
        case Sum(terms):
            return sum(map(value, terms), Fraction(0))
        case Product(factors):
            total = Fraction(1)
            for factor in factors:
                total *= value(factor)
            return total
        case Quotient(top, bottom):
            return value(top) / value(bottom)
    raise AssertionError(node)


@settings(max_examples=200, deadline=None)
@given(ARITHMETIC)
def test_brackets_keep_the_value(tree: Node) -> None:
    """What is printed on one line, read again, has the value of the tree."""
    text = (
        plain(boxes(tree)).replace(" + ", "+").replace(" − ", "-").replace("−", "-").replace("·", "*").replace(" ", "*")
    )
    try:
        expected = value(tree)
    except ZeroDivisionError:
        reject()
    assert value(read_formula(text)) == expected


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("exp(-lam)*lam**x/factorial(x)", "exp(−λ) λ^x/x!"),
        ("-15/m**2", "−15/m^2"),
        ("(-x)**2", "(−x)^2"),
        ("-x**2", "−x^2"),
        ("log(x)**2", "log^2(x)"),
        ("a/b*c", "(a/b) c"),
        ("a/(b*c)", "a/(b c)"),
        ("a - (b - c)", "a − (b − c)"),
        ("2*3**x", "2·3^x"),
        ("1e-200*y", "10^(−200) y"),
        ("binomial(m, x)", "(m choose x)"),
        ("log(Sum(2**x*t, (x, 0, 60)))", "log(∑_(x = 0)^60 2^x t)"),
        ("2*Sum(x, (x, a, b))", "2 (∑_(x = a)^b x)"),
        ("8 < lam <= 12", "8 < λ ≤ 12"),
    ],
)
def test_notation(text: str, shown: str) -> None:
    assert plain(boxes(read_relation(text))) == shown


@pytest.mark.parametrize(
    "text",
    ["", "a b", "x if y else z", "__import__('os')", "x.y", "f(x)(y)", "[1]", "'a'", "True", "1 +", "x\n=", "(" * 500],
)
def test_what_is_not_a_formula_is_refused(text: str) -> None:
    with pytest.raises(InputError, match="is not a formula"):
        read_formula(text)


@dataclass(frozen=True)
class Strange:
    text: str = "?"


def test_unknown_nodes_raise() -> None:
    strange = Strange()
    with pytest.raises(SidecheckError, match="no notation for Strange"):
        boxes(strange)  # type: ignore[arg-type]
    with pytest.raises(SidecheckError, match="no notation for Strange"):
        boxes(Sum((Number("1"), strange)))  # type: ignore[arg-type]
    for printer in (mathml, typst_math, plain):
        with pytest.raises(SidecheckError, match="Strange"):
            printer(Row((strange,)))  # type: ignore[operator, arg-type]
    for known in (mathml, typst_math):
        with pytest.raises(SidecheckError, match="glyph"):
            known(Atom("glyph", "x"))  # type: ignore[operator]


def test_signs_are_escaped() -> None:
    hostile: Box = Atom("word", "</math><script>")
    assert "<script" not in mathml(hostile, alt='"><script>')
    relation = Relation((Symbol("x"), Symbol("y")), ("<",))
    assert "<mo>&lt;</mo>" in mathml(boxes(relation))
