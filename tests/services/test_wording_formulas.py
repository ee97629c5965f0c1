"""A refused formula is told with its place, and a quantity that has no value with the reason."""

from __future__ import annotations

from decimal import Decimal

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_grammar import parse
from qa_tracker.core.formula_names import FUNCTIONS
from qa_tracker.core.formulas import Derived
from qa_tracker.core.ready_formulas import READY_FORMULAS
from qa_tracker.services.wording_formulas import FUNCTION_WORDS, READY_TITLES
from qa_tracker.services.wording_refusals import refusal
from qa_tracker.services.wording_refused_formulas import UNDERIVED, underived

PLACE = "measurands[3].formula"


def test_place_is_shown_by_column_and_characters():
    with pytest.raises(Invalid) as refused:
        parse("depth % 2.0", field=PLACE)
    assert refusal(refused.value).startswith("measurands[3].formula, column 7: “% 2.0” can't stand there.")


def test_clash_is_told_with_both_units():
    clash = Invalid("formula.unit_clash", field=PLACE, column=7, at="depth + 5.0", left="mm", right="1")
    assert "“depth + 5.0” joins mm and a plain number." in refusal(clash)


def test_unit_without_a_symbol_is_told_by_its_parts():
    wrong = Invalid("formula.result_unit", field=PLACE, column=1, at="a * b", unit="cm mm", wanted="cm2")
    assert "“a * b” gives cm mm, but the measurand is in cm²." in refusal(wrong)


def test_cycle_is_told_with_its_names_in_order():
    cycle = Invalid("formula.cycle", field=PLACE, column=9, names=("a", "b", "a"))
    assert "could never be worked out: a, b, a." in refusal(cycle)


@pytest.mark.parametrize("problem", UNDERIVED)
def test_quantity_without_a_value_says_why(problem):
    said = underived(Derived(None, problem, ("depth", "width"), "depth / 0"))
    assert said.endswith(".")
    assert "%" not in said


def test_missing_value_is_named():
    said = underived(Derived(None, "missing", ("depth", "width"), "depth / width"))
    assert said == "It can't be worked out, because there is no value for depth, width."


def test_quantity_with_a_value_needs_no_words():
    assert underived(Derived(Decimal("1.0"), "", (), "2.0 - 1.0")) == ""


def test_every_function_and_ready_formula_has_words():
    assert set(FUNCTION_WORDS) == set(FUNCTIONS)
    assert set(READY_TITLES) == {ready.code for ready in READY_FORMULAS}
