"""From a judged reading to its allowance line, for every shape of criterion."""

from __future__ import annotations

import doctest
from decimal import Decimal

import pytest

from qa_tracker.core import conformity, figures, judged_line
from qa_tracker.core.criteria import from_json
from qa_tracker.core.judged_line import judged_line as line_of

LOSS = {
    "basis": "baseline",
    "direction": "below",
    "remedial": {"absolute": "6"},
    "suspension": {"absolute": "10"},
}
EITHER = {
    "basis": "nominal",
    "direction": "either",
    "remedial": {"absolute": "1.5", "percent": "1.5", "governs": "larger"},
}
UPPER = {"basis": "none", "direction": "above", "strict": False, "remedial": {"absolute": "4"}}
LOWER = {"basis": "none", "direction": "below", "remedial": {"absolute": "2"}}
RATIO = {"basis": "ratio", "direction": "above", "remedial": {"percent": "80"}}
BANDS = {
    "basis": "none",
    "direction": "above",
    "banded_by": "test_frequency_mhz",
    "bands": [{"from": "0", "below": "3", "remedial": {"absolute": "7"}}],
}
GRADES = {"grades": {"green": "conforming", "amber": "remedial", "red": "suspension"}}


def drawn(criterion: dict[str, object], **given: str) -> figures.AllowanceLine | None:
    """The line of a reading that was judged by the kernel."""
    read = from_json(criterion)
    kind = "grade" if "grades" in criterion else "number"
    judged = line_of(read, conformity.judge(read, kind=kind, **given).parameters)
    return None if judged is None else figures.allowance_line(judged)


@pytest.mark.parametrize(
    ("criterion", "given", "share"),
    [
        pytest.param(LOSS, {"value": "145.4", "baseline": "152.0"}, "110.0", id="loss against a baseline"),
        pytest.param(EITHER, {"value": "101.7", "nominal": "200"}, None, id="larger of two parts"),
        pytest.param(UPPER, {"value": "1.6"}, "40.0", id="upper limit on the value"),
        pytest.param(LOWER, {"value": "4"}, "50.0", id="lower limit on the value"),
        pytest.param(RATIO, {"value": "176", "reference": "210"}, "104.8", id="ratio in percent"),
        pytest.param(RATIO, {"value": "5", "reference": "3"}, "208.3", id="ratio that rounding would move"),
        pytest.param(BANDS, {"value": "3.5", "quantity": "2.5"}, "50.0", id="band of the test frequency"),
    ],
)
def test_the_share_is_that_of_the_verdict(criterion, given, share):
    line = drawn(criterion, **given)
    used = conformity.judge(from_json(criterion), kind="number", **given).used
    assert line.share_percent == (Decimal(share) if share else used)
    assert line.share_percent == used


def test_a_ratio_a_hair_above_its_level_reaches_it():
    assert drawn(RATIO, value="168.05", reference="210").reached == "remedial"


@pytest.mark.parametrize(("grade", "reached"), [("green", ""), ("amber", "remedial"), ("red", "suspension")])
def test_a_grade_stands_on_its_rank_without_a_share(grade, reached):
    line = drawn(GRADES, value=grade)
    assert (line.reached, line.share_percent) == (reached, None)


@pytest.mark.parametrize(
    ("criterion", "given"),
    [
        pytest.param(LOSS, {"value": "145.4"}, id="no baseline"),
        pytest.param(LOSS, {"value": None, "baseline": "152"}, id="no reading"),
        pytest.param(LOSS, {"value": None, "baseline": "152", "qualifier": "not_seen"}, id="not seen"),
        pytest.param(BANDS, {"value": "3.5"}, id="no test frequency"),
        pytest.param(BANDS, {"value": "3.5", "quantity": "9"}, id="outside every band"),
        pytest.param(RATIO, {"value": "176", "reference": "0"}, id="ratio to nothing"),
        pytest.param(GRADES, {"value": "blue"}, id="unknown grade"),
    ],
)
def test_nothing_is_drawn_where_nothing_was_compared(criterion, given):
    assert drawn(criterion, **given) is None


def test_an_open_reading_keeps_its_qualifier():
    assert drawn(LOSS, value="160", baseline="152", qualifier=">").open_towards == 1


def test_the_example_holds():
    assert doctest.testmod(judged_line).failed == 0
