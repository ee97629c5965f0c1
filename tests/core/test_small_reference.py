"""A ratio to a reading of a few steps of its resolution is not assessable (common practice, no source)."""

from __future__ import annotations

from decimal import Decimal

import pytest

from qa_tracker.core.allowances import least_reference
from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json
from qa_tracker.core.judged_again import Kept, verdict_ranks, whole
from qa_tracker.core.judgement import VERDICT_OF_CODE

RATIO = from_json({"basis": "ratio", "direction": "above", "suspension": {"percent": "80"}})
RISE = from_json({"basis": "nominal", "direction": "above", "suspension": {"percent": "80"}})

CASES = {
    "nine steps": ("5", "9", "10", "not_assessable", "small_reference"),
    "nine steps, far beyond": ("900", "9", "10", "not_assessable", "small_reference"),
    "just below ten": ("5", "9.99", "10", "not_assessable", "small_reference"),
    "exactly ten": ("8", "10", "10", "conforming", "within"),
    "exactly ten, beyond": ("9", "10", "10", "suspension", "beyond"),
    "nothing at all": ("5", "0", "10", "not_assessable", "zero_reference"),
    "no least, as before": ("8", "9", None, "suspension", "beyond"),
}


@pytest.mark.parametrize("name", CASES)
def test_ratio_is_assessable_from_the_least_reference_on(name):
    value, reference, least, verdict, code = CASES[name]
    found = judge(RATIO, value=value, kind="number", reference=reference, least_reference=least, unit="uA")
    assert (found.verdict, found.code) == (verdict, code)
    assert found.parameters.get("least_reference") == least
    kept = Kept("number", value=whole(value), reference=whole(reference), least_reference=whole(least or ""))
    assert VERDICT_OF_CODE[verdict_ranks(RATIO, [kept])[0]][0] == verdict


def test_least_reference_is_ten_steps_of_the_resolution():
    assert [least_reference(each) for each in ("1", "0.5")] == [Decimal("10"), Decimal("5.0")]


def test_change_from_a_small_nominal_is_judged():
    found = judge(RISE, value="9", kind="number", nominal="5", least_reference="10")
    assert (found.verdict, found.parameters.get("least_reference")) == ("conforming", None)
