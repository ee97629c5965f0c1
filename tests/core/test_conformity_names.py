"""A reading that can't be judged names which of its numbers is at fault."""

from __future__ import annotations

import pytest

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json

LOSS = from_json({"basis": "baseline", "direction": "below", "remedial": {"absolute": "6"}})
RATIO = from_json({"basis": "ratio", "direction": "above", "suspension": {"percent": "80"}})
AMOUNT = from_json({"basis": "none", "direction": "above", "suspension": {"absolute": "500"}})

FAULTS = {
    "value without end": (LOSS, {"value": "inf", "baseline": "152"}, "not_finite", "value"),
    "baseline without end": (LOSS, {"value": "150", "baseline": "inf"}, "not_finite", "reference"),
    "uncertainty without end": (
        AMOUNT, {"value": "1", "uncertainty": "inf"}, "not_finite", "uncertainty",
    ),
    "value below zero": (AMOUNT, {"value": "-3", "never_below_zero": True}, "below_zero", "value"),
    "less than zero": (
        AMOUNT, {"value": "0", "qualifier": "<", "never_below_zero": True}, "below_zero", "value",
    ),
    "baseline below zero": (
        LOSS, {"value": "3", "baseline": "-3", "never_below_zero": True}, "below_zero", "baseline",
    ),
    "other reading below zero": (
        RATIO, {"value": "3", "reference": "-3", "never_below_zero": True}, "below_zero", "reference",
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", FAULTS)
def test_number_at_fault_is_named(name):
    criterion, given, code, what = FAULTS[name]
    found = judge(criterion, kind="derived", **given)
    assert (found.verdict, found.code, found.parameters["what"]) == ("not_assessable", code, what)


def test_zero_itself_is_not_below_zero():
    found = judge(AMOUNT, value="0", kind="number", never_below_zero=True)
    assert found.verdict == "conforming"
