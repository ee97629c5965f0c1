"""Derived measurands may use each other, as long as there is an order to work them out in."""

from __future__ import annotations

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_check import is_listed, order
from qa_tracker.core.library import procedure
from tests.core.formula_documents import document, read, worked_out


def _spec(*derived):
    return procedure(document(read("depth"), *(worked_out(code, formula) for code, formula in derived)))


def test_derived_measurand_comes_after_those_it_names():
    spec = _spec(("last", "middle + first"), ("middle", "first - depth"), ("first", "2.0 * depth"))
    assert [one.code for one in order(spec.measurands)] == ["first", "middle", "last"]


def test_nothing_derived_has_an_empty_order():
    assert order(procedure(document(read("depth"))).measurands) == ()


@pytest.mark.parametrize(
    ("derived", "names", "column"),
    [
        ([("a", "depth + a")], ("a", "a"), 9),
        ([("a", "depth - b"), ("b", "2.0 * a")], ("a", "b", "a"), 9),
        ([("z", "depth"), ("a", "z + c"), ("b", "a"), ("c", "(b)")], ("a", "c", "b", "a"), 5),
    ],
    ids=["itself", "two", "three"],
)
def test_cycle_is_refused_with_its_names_in_order(derived, names, column):
    with pytest.raises(Invalid) as refused:
        _spec(*derived)
    assert (refused.value.code, refused.value.parameters["names"]) == ("formula.cycle", names)
    assert refused.value.parameters["column"] == column
    place = 1 + [code for code, _ in derived].index(names[0])
    assert refused.value.field == f"measurands[{place}].formula"


@pytest.mark.parametrize(
    ("reading", "derived", "listed"),
    [
        ({}, {}, False),
        ({"repeats": 3}, {}, True),
        ({}, {"per": "device"}, True),
        ({}, {"by_condition": False}, True),
        ({"per": "device", "by_condition": False}, {}, False),
        ({"per": "device", "by_condition": False}, {"per": "device", "by_condition": False}, False),
    ],
)
def test_reading_is_a_list_where_there_are_several_to_one_value(reading, derived, listed):
    spec = procedure(
        document(read("depth", **reading), worked_out("change", "nominal", nominal="1", **derived))
    )
    assert is_listed(*spec.measurands) == listed
