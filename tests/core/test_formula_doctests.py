"""The worked examples in the docstrings of the formula modules."""

from __future__ import annotations

import doctest

import pytest

from qa_tracker.core import (
    formula_arithmetic,
    formula_check,
    formula_grammar,
    formula_inputs,
    formula_kinds,
    formula_tree,
    formula_units,
    formulas,
    ready_formulas,
)

MODULES = [
    formula_arithmetic,
    formula_check,
    formula_grammar,
    formula_inputs,
    formula_kinds,
    formula_tree,
    formula_units,
    formulas,
    ready_formulas,
]


@pytest.mark.parametrize("module", MODULES)
def test_examples_give_what_they_say(module):
    found = doctest.testmod(module)
    assert found.attempted > 0
    assert found.failed == 0
