"""Formulas are the part of CEL that quantities need; what is outside is refused at its column."""

from __future__ import annotations

import cel
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_arithmetic import DOUBLES, Nearly, bounded, compute
from qa_tracker.core.formula_grammar import MOST_CHARACTERS, MOST_DEPTH, parse
from qa_tracker.core.formula_tree import excerpt, names_in, walk

# formula, code, column, what stands there
REFUSED = [
    ("", "formula.unfinished", 1, None),
    ("a +", "formula.unfinished", 4, None),
    ("mean(a", "formula.unfinished", 7, None),
    ("a % b", "formula.syntax", 3, "% b"),
    ("a ** 2.0", "formula.syntax", 4, "* 2.0"),
    ("a[0]", "formula.syntax", 2, "[0]"),
    ("{'a': 1.0}", "formula.syntax", 1, "{'a': 1.0}"),
    ("'text'", "formula.syntax", 1, "'text'"),
    ("a.b(c)", "formula.syntax", 4, "(c)"),
    ("now()", "formula.syntax", 5, ")"),
    ("1e3 * a", "formula.syntax", 2, "e3 * a"),
    ("100. * a", "formula.syntax", 4, ". * a"),
    ("a ? b ? c : d : e", "formula.syntax", 7, "? c : d : e"),
    ("a\n+ b", "formula.syntax", 2, "+ b"),
    ("a + b // more", "formula.syntax", 8, "/ more"),
    ("a = b", "formula.syntax", 3, "= b"),
    ("a in [b]", "formula.syntax", 3, "in [b]"),
    ("a + in", "formula.syntax", 5, "in"),
    ("true", "formula.syntax", 1, "true"),
    ("a - \N{MINUS SIGN}b", "formula.syntax", 5, "\N{MINUS SIGN}b"),
    ("100 * a", "formula.whole_number", 1, "100"),
    ("a * (b - 20)", "formula.whole_number", 10, "20"),
]


@pytest.mark.parametrize(("formula", "code", "column", "at"), REFUSED, ids=[row[0] for row in REFUSED])
def test_formula_is_refused_at_its_column(formula, code, column, at):
    with pytest.raises(Invalid) as refused:
        parse(formula, field="measurands[3].formula")
    assert (refused.value.code, refused.value.field) == (code, "measurands[3].formula")
    assert refused.value.parameters["column"] == column
    assert refused.value.parameters.get("at") == at


def test_whole_number_is_refused_with_the_number_to_write():
    with pytest.raises(Invalid) as refused:
        parse("100 * a")
    assert refused.value.parameters["instead"] == "100.0"


@pytest.mark.parametrize(
    ("formula", "code"),
    [
        ("a" * (MOST_CHARACTERS + 1), "formula.too_long"),
        ("(" * MOST_DEPTH + "a" + ")" * MOST_DEPTH, "formula.too_deep"),
        ("a" + " + a" * MOST_DEPTH, "formula.too_deep"),
        ("-" * MOST_DEPTH + "a", "formula.too_deep"),
    ],
)
def test_formula_beyond_reason_is_refused(formula, code):
    with pytest.raises(Invalid) as refused:
        parse(formula)
    assert refused.value.code == code


def test_parts_know_what_they_were_written_as():
    formula = "mean([a, b]) - (c.d * 2.0)"
    shown = [excerpt(formula, part) for part in walk(parse(formula))]
    assert shown == [formula, "mean([a, b])", "[a, b]", "a", "b", "(c.d * 2.0)", "c.d", "2.0"]


def test_names_come_in_the_order_written_and_as_often():
    assert [name.dotted for name in names_in(parse("b - x.y / (b + a)"))] == ["b", "x.y", "b", "a"]


def test_long_part_is_cut_where_it_is_shown():
    formula = " + ".join(["reverberation_depth"] * 4)
    assert excerpt(formula, parse(formula)) == "reverberation_depth + reverberation_dep…"


NUMBERS = st.sampled_from(
    ["a", "b", "x.y", "2.0", "0.5", "-a", "(a - b)", "mean([a, b])", "least(a, b, x.y)"]
)
SUMS = st.lists(st.tuples(st.sampled_from(["+", "-", "*", "/"]), NUMBERS), max_size=4)
VALUES = {"a": 3.25, "b": 7.1, "x.y": -0.3}


@st.composite
def _sums(draw):
    return draw(NUMBERS) + "".join(f" {sign} {number}" for sign, number in draw(SUMS))


@st.composite
def _choices(draw):
    condition = f"{draw(_sums())} {draw(st.sampled_from(['<', '<=', '==', '!=', '>', '>=']))} {draw(_sums())}"
    for _ in range(draw(st.integers(0, 2))):
        condition += f" {draw(st.sampled_from(['&&', '||']))} !({draw(_sums())} > {draw(_sums())})"
    return f"{condition} ? {draw(_sums())} : {draw(_sums())}"


@settings(max_examples=150)
@given((_sums() | _choices()).filter(lambda formula: len(formula) <= MOST_CHARACTERS))
def test_tree_gives_the_double_that_cel_gives(formula):
    context = {"a": VALUES["a"], "b": VALUES["b"], "x": {"y": VALUES["x.y"]}, **DOUBLES}
    arithmetic = Nearly()
    entered = {name: bounded(value) for name, value in VALUES.items()}
    found = compute(parse(formula), entered, arithmetic)
    assert arithmetic.doubtful or found.value == cel.evaluate(formula, context)
