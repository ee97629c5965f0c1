"""Exactly x conforms where a limit reads "more than x" and fails where it reads "x or more", whatever its shape.

Each number is one that binary floats get wrong: 20.3 - 20.0, 40.6 - 40 and 0.2 - (-0.1) come out above the limit.
"""

from __future__ import annotations

from dataclasses import replace
from decimal import Decimal as D

import pytest

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import Band, Criterion, Limit

# Reference, absolute part, percent part, what they allow, one unit of resolution.
LITERAL = {
    "20.3 against 20.0 with 0.3": ("20.0", "0.3", "1.5", "0.3", "0.1"),
    "1.5 % of 40": ("40", "0.6", "1.5", "0.6", "0.1"),
    "0.1 + 0.2": ("-0.1", "0.3", "300", "0.3", "0.1"),
}
ALONE = {
    "absolute": lambda absolute, percent: Limit(absolute),
    "percent": lambda absolute, percent: Limit(None, percent),
    "larger absolute": lambda absolute, percent: Limit(absolute, percent / 2),
    "larger percent": lambda absolute, percent: Limit(absolute / 2, percent),
    "smaller absolute": lambda absolute, percent: Limit(absolute, percent * 2, "smaller"),
    "smaller percent": lambda absolute, percent: Limit(absolute * 2, percent, "smaller"),
    "either, absolute first": lambda absolute, percent: Limit(absolute, percent * 2, "either"),
    "either, percent first": lambda absolute, percent: Limit(absolute * 2, percent, "either"),
}
WAYS = [("either", 1), ("either", -1), ("above", 1), ("below", -1)]
READS = pytest.mark.parametrize(("strict", "at_limit"), [(True, "conforming"), (False, "remedial")])


def verdicts(criterion, strict, values, **given):
    """What each value, typed, is judged to be by a limit that is strict or not."""
    limit = replace(criterion, strict=strict)
    return [judge(limit, value=str(value), kind="number", **given).verdict for value in values]


@READS
@pytest.mark.parametrize("basis", ["nominal", "baseline"])
@pytest.mark.parametrize(("direction", "sign"), WAYS)
@pytest.mark.parametrize("shape", ALONE)
@pytest.mark.parametrize("name", LITERAL)
def test_a_change_of_exactly_the_limit(name, shape, direction, sign, basis, strict, at_limit):
    reference, absolute, percent, allowed, step = map(D, LITERAL[name])
    criterion = Criterion(basis, direction, True, ALONE[shape](absolute, percent))
    values = [reference + sign * (allowed + moved) for moved in (-step, 0, step)]
    found = verdicts(criterion, strict, values, **{basis: str(reference)})
    assert found == ["conforming", at_limit, "remedial"]


@READS
@pytest.mark.parametrize("limit", ["0.3", "0.6", "-0.1"])
@pytest.mark.parametrize(("direction", "sign"), WAYS)
def test_a_value_of_exactly_the_limit(direction, sign, limit, strict, at_limit):
    allowed = abs(D(limit)) if direction == "either" else D(limit)
    edge = sign * allowed if direction == "either" else allowed
    values = [edge + sign * moved for moved in (D("-0.1"), 0, D("0.1"))]
    found = verdicts(Criterion("none", direction, True, Limit(allowed)), strict, values)
    assert found == ["conforming", at_limit, "remedial"]


@READS
@pytest.mark.parametrize(("reference", "percent", "edge"), [("40", "1.5", "0.6"), ("0.1", "300", "0.3")])
@pytest.mark.parametrize(("direction", "sign"), [("above", 1), ("below", -1)])
def test_a_ratio_of_exactly_the_limit(direction, sign, reference, percent, edge, strict, at_limit):
    values = [D(edge) + sign * moved for moved in (D("-0.1"), 0, D("0.1"))]
    criterion = Criterion("ratio", direction, True, Limit(None, D(percent)))
    found = verdicts(criterion, strict, values, reference=reference)
    assert found == ["conforming", at_limit, "remedial"]


@READS
@pytest.mark.parametrize(("quantity", "edge"), [("2.9", D("0.6")), ("3", D("0.3"))])
def test_exactly_the_limit_of_its_band(quantity, edge, strict, at_limit):
    bands = (Band(None, D(3), Limit(D("0.6")), None), Band(D(3), None, Limit(D("0.3")), None))
    criterion = Criterion("none", "above", True, bands=bands, banded_by="test_frequency_mhz")
    values = [edge + moved for moved in (D("-0.1"), 0, D("0.1"))]
    found = verdicts(criterion, strict, values, quantity=quantity)
    assert found == ["conforming", at_limit, "remedial"]


@READS
def test_a_count_of_exactly_the_limit(strict, at_limit):
    criterion = Criterion("none", "above", strict, Limit(D(2)))
    found = [judge(criterion, value=str(count), kind="count").verdict for count in (1, 2, 3)]
    assert found == ["conforming", at_limit, "remedial"]


@READS
def test_exactly_the_suspension_level(strict, at_limit):
    criterion = Criterion("nominal", "either", True, Limit(D("0.1")), Limit(D("0.3")))
    found = verdicts(criterion, strict, ["20.2", "20.3", "20.4"], nominal="20.0")
    assert found == ["remedial", "remedial" if at_limit == "conforming" else "suspension", "suspension"]
