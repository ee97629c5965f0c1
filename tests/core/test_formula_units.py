"""Units in formulas are multiplied, divided and compared, never converted."""

from __future__ import annotations

import pytest

from qa_tracker.core.formula_units import (
    PLAIN,
    UnitClash,
    added,
    code_of,
    over,
    powers_of,
    root,
    same,
    subtracted,
    times,
)
from qa_tracker.core.units import UNITS


@pytest.mark.parametrize("code", UNITS)
def test_every_unit_comes_apart_and_together_again(code):
    assert code_of(powers_of(code)) == code


def test_units_are_told_apart():
    assert len({powers_of(code) for code in UNITS}) == len(UNITS)


@pytest.mark.parametrize(
    ("rule", "left", "right", "result"),
    [
        (times, "mm", "mm", "mm2"),
        (times, "cm2", "cm", "cm3"),
        (over, "mm", "mm", "1"),
        (over, "mm", "cm", "mm/cm"),
        (over, "cm", "s", "cm/s"),
        (times, "cm/s", "s", "cm"),
        (over, "1", "s", "1/s"),
        (times, "dB/cm/MHz", "MHz", "dB/cm"),
        (added, "mm", "mm", "mm"),
        (subtracted, "degC", "degC", "K"),
        (subtracted, "degC", "K", "degC"),
        (added, "K", "degC", "degC"),
        (subtracted, "K", "K", "K"),
    ],
)
def test_two_units_give_a_third(rule, left, right, result):
    assert code_of(rule(powers_of(left), powers_of(right))) == result


@pytest.mark.parametrize("rule", [added, subtracted, same])
@pytest.mark.parametrize(
    ("left", "right"), [("mm", "cm"), ("mm", "1"), ("%", "1"), ("MHz", "kHz"), ("uA", "mA")]
)
def test_two_units_that_differ_clash(rule, left, right):
    with pytest.raises(UnitClash):
        rule(powers_of(left), powers_of(right))


def test_difference_takes_no_temperature_from_a_difference():
    with pytest.raises(UnitClash):
        subtracted(powers_of("K"), powers_of("degC"))


@pytest.mark.parametrize("rule", [added, subtracted, same])
def test_zero_is_zero_of_any_unit(rule):
    assert rule(powers_of("mm"), None) == rule(None, powers_of("mm")) == powers_of("mm")
    assert times(powers_of("mm"), None) is over(None, powers_of("mm")) is root(None) is None


def test_root_halves_a_unit_or_clashes():
    assert root(powers_of("cm2")) == powers_of("cm")
    assert root(PLAIN) == PLAIN
    with pytest.raises(UnitClash):
        root(powers_of("cm3"))
