"""Limits of the device's own spread (shape J): built from set-ups, exact, and never from too few."""

from __future__ import annotations

from decimal import Decimal

import pytest

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json, to_json
from qa_tracker.core.errors import Invalid
from qa_tracker.core.judged_line import judged_line
from qa_tracker.core.own_spread import OwnSpread

GIVEN = {
    "basis": "baseline", "direction": "either", "strict": True,
    "remedial": {"coverage": "95", "confidence": "95"},
}  # fmt: skip
OWN = from_json(GIVEN)
# k(12) = 3.174664 by quadrature (3.175 in Odeh and Owen's table), s = 0.4: allowance 1.270
SETUPS = OwnSpread(12, Decimal("0.4"), Decimal("0.5"))


def verdict(value, spread=SETUPS, criterion=OWN, **more):
    return judge(criterion, value=value, kind="number", baseline="8.5", spread=spread, unit="mm", **more)


@pytest.mark.parametrize(
    ("value", "expected"),
    [("8.5", "conforming"), ("9.77", "conforming"), ("7.23", "conforming"), ("9.771", "remedial")],
)
def test_reading_is_judged_by_the_interval_of_its_own_set_ups(value, expected):
    found = verdict(value)
    assert (found.verdict, found.allowance) == (expected, Decimal("1.270"))


def test_arithmetic_is_among_the_parameters():
    told = verdict("9.5").parameters
    shown = {name: told[name] for name in ("setups", "factor", "spread", "coverage", "allowance", "used")}
    assert shown == {
        "setups": "12", "factor": "3.1747", "spread": "0.4000", "coverage": "95", "allowance": "1.270",
        "used": "78.7",
    }  # fmt: skip


@pytest.mark.parametrize(
    "spread", [None, OwnSpread(9, Decimal("0.4"), Decimal("0.5")), OwnSpread(1, None, Decimal(1))]
)
def test_reading_is_not_assessable_when_set_ups_are_too_few(spread):
    found = verdict("8.5", spread)
    assert (found.verdict, found.code) == ("not_assessable", "too_few_setups")
    assert judged_line(OWN, found.parameters) is None


def test_spread_is_floored_by_the_resolution():
    found = verdict("8.5", OwnSpread(12, Decimal("0.01"), Decimal("0.5")))
    assert (found.parameters["spread_floored"], found.allowance) == ("yes", Decimal("0.458"))


def test_no_baseline_comes_before_too_few_set_ups():
    assert judge(OWN, value="8.5", kind="number").code == "no_baseline"


def test_line_shows_the_allowance_that_was_worked_out():
    line = judged_line(OWN, verdict("9.5").parameters)
    assert (line.origin, line.value, line.remedial) == (Decimal("8.5"), Decimal("9.5"), Decimal("1.270"))


def test_criterion_comes_back_from_its_json():
    assert from_json(to_json(OWN)) == OWN


def test_limit_may_stand_in_a_band():
    band = {"from": "3", "below": "7", "remedial": GIVEN["remedial"]}
    banded = from_json(
        {"basis": "baseline", "direction": "either", "bands": [band], "banded_by": "test_frequency_mhz"}
    )
    assert verdict("9.9", criterion=banded, quantity="5").verdict == "remedial"


REFUSED = {
    "for suspension": ({"suspension": GIVEN["remedial"]}, "criterion.own_spread_place"),
    "on the value itself": ({"basis": "none", "remedial": GIVEN["remedial"]}, "criterion.own_spread_place"),
    "beside an absolute": (
        {"remedial": {"coverage": "95", "confidence": "95", "absolute": "1"}}, "criterion.own_spread_beside",
    ),
    "without confidence": ({"remedial": {"coverage": "95"}}, "criterion.own_spread_share"),
    "of everything": (
        {"remedial": {"coverage": "100", "confidence": "95"}}, "criterion.own_spread_share",
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", REFUSED)
def test_criterion_is_refused(name):
    given, code = REFUSED[name]
    whole = {"basis": "baseline", "direction": "either"} | given
    with pytest.raises(Invalid) as refused:
        from_json(whole)
    assert refused.value.code == code
