"""The allowance line: where the origin, the levels and the reading stand, and the share it prints."""

from __future__ import annotations

from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from qa_tracker.core.figures import Judged, allowance_line, allowance_shapes, share_text

POSITIONS = [
    # name, judged (origin, value, remedial, suspension, direction), origin, remedial, suspension, plumb
    ("either", ("100", "101", "2", "4", "either"), 0.5, (0.3, 0.7), (0.1, 0.9), 0.6),
    ("either, low", ("100", "98", "2", "4", "either"), 0.5, (0.3, 0.7), (0.1, 0.9), 0.3),
    ("loss", ("152", "147", "6", "10", "below"), 0.85, (0.442,), (0.17,), 0.51),
    ("absolute upper", ("0", "4", "4", "6", "above"), 0.15, (0.603333,), (0.83,), 0.603333),
    ("remedial only", ("0", "4", "5", None, "above"), 0.15, (0.83,), (), 0.694),
    ("suspension only", ("0", "250", None, "500", "above"), 0.15, (), (0.83,), 0.49),
    ("absolute lower", (None, "3", "2", "1", "below"), None, (0.5,), (0.25,), 0.75),
]


def judged(origin, value, remedial, suspension, direction, **more):
    numbers = [None if text is None else Decimal(text) for text in (origin, value, remedial, suspension)]
    return Judged(*numbers, direction=direction, **more)


@pytest.mark.parametrize(
    ("given_", "origin", "remedial", "suspension", "plumb"),
    [row[1:] for row in POSITIONS],
    ids=[row[0] for row in POSITIONS],
)
def test_positions_when_a_reading_is_judged(given_, origin, remedial, suspension, plumb):
    line = allowance_line(judged(*given_))
    assert line.origin == (None if origin is None else pytest.approx(origin))
    assert line.remedial == pytest.approx(remedial, abs=1e-6)
    assert line.suspension == pytest.approx(suspension, abs=1e-6)
    assert line.plumb == pytest.approx(plumb, abs=1e-6)
    assert not line.off_scale


SHARES = [
    # name, judged, strict, share, reached
    ("half", ("100", "101", "2", "4", "either"), True, 50, ""),
    ("exactly at a strict level", ("152", "146.0", "6", "10", "below"), True, 100, ""),
    ("exactly at a loose level", ("0", "4", "4", "6", "above"), False, 100, "remedial"),
    ("a hair beyond", ("152", "145.99", "6", "10", "below"), True, "100.2", "remedial"),
    ("a hair inside", ("152", "146.01", "6", "10", "below"), True, "99.8", ""),
    ("far less than a tenth beyond", ("0", "100.01", "100", None, "above"), True, "100.1", "remedial"),
    ("far less than a tenth inside", ("0", "99.99", "100", None, "above"), True, "99.9", ""),
    ("a third", ("152", "150", "6", "10", "below"), True, "33.3", ""),
    ("two thirds", ("152", "148", "6", "10", "below"), True, "66.7", ""),
    ("beyond the outer level", ("152", "141.8", "6", "10", "below"), True, 170, "suspension"),
    ("a gain where loss is judged", ("152", "159", "6", "10", "below"), True, 0, ""),
    ("decimal, not binary", ("20.0", "20.3", "0.3", None, "either"), True, 100, ""),
    ("absolute lower, inside", (None, "4", "2", None, "below"), True, 50, ""),
    ("absolute lower, at it", (None, "2", "2", None, "below"), True, 100, ""),
    ("absolute lower, under it", (None, "1", "2", "1.5", "below"), True, 200, "suspension"),
    ("a level of zero", ("0", "1", "0", None, "above"), True, None, "remedial"),
    ("a count", ("0", "3", "2", "4", "above"), False, 150, "remedial"),
]


@pytest.mark.parametrize(
    ("given_", "strict", "share", "reached"), [row[1:] for row in SHARES], ids=[row[0] for row in SHARES]
)
def test_share_when_a_reading_is_judged(given_, strict, share, reached):
    line = allowance_line(judged(*given_, strict=strict))
    assert (line.share_percent, line.reached) == (None if share is None else Decimal(share), reached)


BOUNDS = [
    ("more than, loss judged", ("162", "160", "6", None, "below"), ">", "≤ 33.3 %"),
    ("less than, loss judged", ("152", "148", "6", None, "below"), "<", "≥ 66.7 %"),
    ("more than, growth judged", ("0", "3", "4", None, "above"), ">", "≥ 75 %"),
    ("less than, growth judged", ("0", "1", "4", None, "above"), "<", "≤ 25 %"),
    ("more than, above a two-sided nominal", ("100", "101", "2", None, "either"), ">", "≥ 50 %"),
    ("more than, an absolute lower level", (None, "20", "2", None, "below"), ">", "≤ 10 %"),
    ("more than the baseline, loss judged", ("152", "160", "6", None, "below"), ">", "0 %"),
    ("not seen", ("100", "101", "2", None, "either"), "not_seen", ""),
]


@pytest.mark.parametrize(
    ("given_", "qualifier", "text"), [row[1:] for row in BOUNDS], ids=[row[0] for row in BOUNDS]
)
def test_share_text_when_the_reading_is_qualified(given_, qualifier, text):
    assert share_text(allowance_line(judged(*given_, qualifier=qualifier))) == text


def test_line_when_the_numbers_are_ranks_has_a_place_and_no_share():
    line = allowance_line(judged("0", "1", "1", "2", "above", strict=False, ranks=True))
    assert (line.reached, share_text(line)) == ("remedial", "")
    assert line.plumb == line.remedial[0]


def test_line_when_nothing_is_known_is_a_bare_scale():
    line = allowance_line(Judged(None, None))
    assert (line.origin, line.plumb, line.share_percent) == (None, None, None)
    assert [shape.role for shape in allowance_shapes(line, 90, 12)] == ["scale"]


def test_line_when_the_reading_is_missing_keeps_its_levels():
    line = allowance_line(judged("152", None, "6", "10", "below"))
    assert line.plumb is None
    assert line.remedial
    assert line.suspension


@pytest.mark.parametrize(("value", "plumb"), [("900", 1.0), ("-900", 0.0)])
def test_plumb_when_far_beyond_stands_at_the_end_and_says_so(value, plumb):
    line = allowance_line(judged("100", value, "2", "4", "either"))
    assert (line.plumb, line.off_scale) == (plumb, True)
    assert "off_scale" in [shape.role for shape in allowance_shapes(line, 90, 12)]


amounts = st.decimals("-1e6", "1e6", places=3)
allowances = st.one_of(st.none(), st.decimals("0", "1e4", places=3))


@given(
    origin=st.one_of(st.none(), amounts),
    value=st.one_of(st.none(), amounts),
    remedial=allowances,
    suspension=allowances,
    direction=st.sampled_from(["either", "above", "below"]),
    qualifier=st.sampled_from(["=", ">", "<", "not_seen"]),
)
def test_shapes_when_drawn_never_leave_their_box(origin, value, remedial, suspension, direction, qualifier):
    line = allowance_line(Judged(origin, value, remedial, suspension, direction, qualifier=qualifier))
    for shape in allowance_shapes(line, 90, 12):
        for _, numbers in shape.steps:
            assert all(-0.001 <= x <= 90.001 for x in numbers[::2])
            assert all(-0.001 <= y <= 12.001 for y in numbers[1::2])
