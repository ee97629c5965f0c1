"""Which measurands a device is asked for, what a check still lacks, and which check satisfies another."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from qa_tracker.core.library import asked_of, covers, procedure, unread

FOLDER = Path(__file__).parents[2] / "fixtures" / "procedures"
PROCEDURES = {path.stem: procedure(json.loads(path.read_text())) for path in sorted(FOLDER.glob("*.json"))}
MONTHLY, QUARTERLY = PROCEDURES["monthly-in-air"], PROCEDURES["quarterly-mechanical-uniformity"]
CONDITION = {"case_grade", "lens_grade", "cable_grade", "connector_grade"}


def _asked(spec, **device):
    return {one.code for one in spec.measurands if asked_of(one, **device)}


def test_pencil_probe_without_image_is_asked_for_its_condition_only():
    assert _asked(MONTHLY, device_kind="probe", array_kind="cw_pencil") == CONDITION


@pytest.mark.parametrize(
    ("array", "asked"), [("linear", True), ("convex", True), ("phased", False), ("mechanical_3d", False)]
)
def test_dark_elements_are_asked_only_where_lines_show_elements(array, asked):
    assert ("dark_elements" in _asked(MONTHLY, device_kind="probe", array_kind=array)) is asked


def test_scanner_is_asked_for_wheels_and_no_lens():
    asked = _asked(QUARTERLY, device_kind="scanner", array_kind=None)
    assert asked == {"wheels_grade", "brakes_grade", "ports_grade", "filters_grade", "keyboard_grade"}


def test_yearly_items_are_asked_with_the_yearly_check_only():
    care = PROCEDURES["test-object-care"]
    device = {"device_kind": "test_object", "array_kind": None}
    more = _asked(care, **device, yearly=True) - _asked(care, **device)
    assert more == {"reference_probe_penetration", "reference_distance", "overlap_penetration"}


def test_unread_names_every_required_measurand_in_order_when_nothing_was_read():
    lacking = unread(MONTHLY, set(), device_kind="probe", array_kind="linear")
    assert lacking[:4] == ("case_grade", "lens_grade", "cable_grade", "connector_grade")
    assert "dark_elements" in lacking
    assert "dark_elements_place" not in lacking


def test_unread_is_empty_when_all_required_were_read():
    read = {one.code for one in MONTHLY.measurands if one.required}
    assert unread(MONTHLY, read, device_kind="probe", array_kind="linear") == ()


@pytest.mark.parametrize("answer", ["uniformity", "uniformity_grade"])
def test_one_answer_of_a_group_is_enough(answer):
    read = {one.code for one in QUARTERLY.measurands if one.required}
    device = {"device_kind": "probe", "array_kind": "linear"}
    assert unread(QUARTERLY, read, **device) == ("uniformity",)
    assert unread(QUARTERLY, read | {answer}, **device) == ()


@pytest.mark.parametrize(
    "code",
    ["equipment_leakage_class_i", "equipment_leakage_class_ii", "equipment_leakage_class_ii_alternative"],
)
def test_electrical_check_needs_the_one_leakage_of_its_class_and_method(code):
    spec = PROCEDURES["electrical-safety"]
    read = {one.code for one in spec.measurands if one.required}
    assert unread(spec, read, device_kind="scanner") == ("equipment_leakage",)
    assert unread(spec, read | {code}, device_kind="scanner") == ()


@pytest.mark.parametrize(
    ("one", "other", "kind", "expected"),
    [
        ("annual-survey", "monthly-in-air", "probe", True),
        ("annual-survey", "quarterly-mechanical-uniformity", "probe", True),
        ("annual-survey", "quarterly-mechanical-uniformity", "scanner", True),
        ("quarterly-mechanical-uniformity", "monthly-in-air", "probe", True),
        ("acceptance", "annual-survey", "probe", True),
        ("after-repair-or-change", "monthly-in-air", "probe", True),
        ("monthly-in-air", "monthly-in-air", "probe", True),
        ("monthly-in-air", "quarterly-mechanical-uniformity", "probe", False),
        ("monthly-in-air", "user-check", "probe", False),
        ("annual-survey", "electrical-safety", "scanner", False),
        ("annual-survey", "monthly-in-air", "scanner", False),
    ],
)
def test_procedure_covers_another_when_it_asks_all_the_other_requires(one, other, kind, expected):
    array = "linear" if kind == "probe" else None
    assert covers(PROCEDURES[one], PROCEDURES[other], device_kind=kind, array_kind=array) is expected
