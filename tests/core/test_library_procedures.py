"""The ten procedures are complete: minutes, resolutions, criteria and one meaning for each code."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from qa_tracker.core.library import cautions, check_references, criteria_set, procedure

FOLDER = Path(__file__).parents[2] / "fixtures"
PROCEDURES = {
    path.stem: procedure(json.loads(path.read_text()))
    for path in sorted((FOLDER / "procedures").glob("*.json"))
}
MEASURANDS = {one.code: one for spec in PROCEDURES.values() for one in spec.measurands}

# procedure, who may do it, minutes, recurrence, days before and after
PLANNED = [
    ("user-check", "user", {"probe": 2}, ("FREQ=DAILY", 0, 0)),
    ("monthly-in-air", "technician", {"probe": 4}, ("FREQ=MONTHLY", 7, 7)),
    ("quarterly-mechanical-uniformity", "technician", {"probe": 6}, ("FREQ=MONTHLY;INTERVAL=3", 10, 10)),
    ("annual-survey", "physicist", {"scanner": 30, "probe": 25}, ("FREQ=YEARLY", 30, 30)),
    ("acceptance", "physicist", {"scanner": 60, "probe": 20}, None),
    ("electrical-safety", "engineer", {"scanner": 20, "probe": 5}, ("FREQ=YEARLY", 30, 30)),
    ("toe-leakage-log", "user", {"probe": 3}, None),
    ("after-repair-or-change", "technician", {"probe": 15}, None),
    ("test-object-care", "technician", {"test_object": 5}, ("FREQ=MONTHLY", 7, 7)),
    ("display-check", "technician", {"scanner": 3}, ("FREQ=MONTHLY", 7, 7)),
]

# code, unit, resolution, criteria in order of preference
RECORDED = [
    ("reverberation_depth", "mm", "0.5", ()),
    ("reverberation_bands", "1", "1", ()),
    ("dark_elements", "1", "1", ("DROP",)),
    ("uniformity", "dB", "0.1", ("TG1-UNIF",)),
    ("penetration", "mm", "1", ("TG1-PEN",)),
    ("vertical_distance", "mm", "0.1", ("TG1-VERT", "TG128-AX")),
    ("horizontal_distance", "mm", "0.1", ("TG1-HORZ", "TG128-LAT")),
    ("fwhm_axial", "mm", "0.1", ("TG128-RES",)),
    ("fwhm_lateral", "mm", "0.1", ("TG128-RES",)),
    ("ring_down", "mm", "0.5", ("TG1-RING",)),
    ("grey_visibility", "1", "1", ("TG128-GREY",)),
    ("area_error", "%", "0.1", ("TG128-AREA",)),
    ("volume_error", "%", "0.1", ("TG128-VOL",)),
    ("doppler_velocity", "cm/s", "1", ()),
    ("earth_resistance", "mOhm", "1", ("62353-PE-EQUIPMENT",)),
    ("insulation_resistance", "MOhm", "0.1", ()),
    ("equipment_leakage_class_i", "uA", "1", ("62353-EL-I-DIRECT", "62353-EL-I-DIFFERENTIAL")),
    ("equipment_leakage_class_ii", "uA", "1", ("62353-EL-II-DIRECT",)),
    ("applied_part_leakage_bf", "uA", "1", ("62353-AP-BF",)),
    ("applied_part_leakage_cf", "uA", "1", ("62353-AP-CF",)),
    ("toe_probe_leakage", "uA", "1", ("TOE-80",)),
    ("soak_minutes", "min", "1", ()),
    ("test_object_weight", "g", "1", ()),
    ("test_object_temperature", "degC", "0.1", ()),
    ("luminance_max", "cd/m2", "0.1", ()),
    ("illuminance", "lux", "1", ()),
]


@pytest.mark.parametrize(("slug", "role", "minutes", "recurrence"), PLANNED, ids=[row[0] for row in PLANNED])
def test_procedure_has_its_performer_minutes_and_recurrence(slug, role, minutes, recurrence):
    spec = PROCEDURES[slug]
    given = spec.recurrence
    assert spec.performed_by[0] == role
    assert {kind: count for kind, count in spec.minutes if count} == minutes
    assert (given and (given.rule, given.before_days, given.grace_days)) == recurrence


def test_there_are_ten_procedures_each_named_as_its_file():
    assert len(PROCEDURES) == 10
    assert set(PROCEDURES) == {row[0] for row in PLANNED} == {spec.procedure for spec in PROCEDURES.values()}


@pytest.mark.parametrize(
    ("slug", "kind", "minutes"), [("test-object-care", "test_object", 20), ("display-check", "scanner", 15)]
)
def test_yearly_part_is_the_physicists(slug, kind, minutes):
    yearly = PROCEDURES[slug].yearly
    assert (yearly.performed_by, yearly.minutes, yearly.recurrence.rule) == (
        ("physicist",),
        ((kind, minutes),),
        "FREQ=YEARLY",
    )


@pytest.mark.parametrize(
    ("code", "unit", "resolution", "criteria"), RECORDED, ids=[row[0] for row in RECORDED]
)
def test_measurand_has_its_unit_resolution_and_criteria(code, unit, resolution, criteria):
    one = MEASURANDS[code]
    assert (one.unit, one.resolution, one.criteria) == (unit, resolution, criteria)


def test_library_holds_together_when_read_whole():
    files = sorted((FOLDER / "criteria").glob("*.json"))
    sets = [criteria_set(json.loads(path.read_text())) for path in files if path.stem != "cautions"]
    known = cautions(json.loads((FOLDER / "criteria" / "cautions.json").read_text()))
    check_references(sets, list(PROCEDURES.values()), known)
    assert {one.set for one in sets} >= {"tg1", "tg128", "dropout", "probe-grade", "iec62353", "fda"}


def test_every_procedure_states_that_no_source_stands_behind_it():
    assert {spec.standing for spec in PROCEDURES.values()} == {"common practice, no source"}


@pytest.mark.parametrize("part", ["case", "lens", "cable", "connector"])
def test_red_condition_suggests_quarantine_in_every_procedure_that_grades_it(part):
    graded = [one for spec in PROCEDURES.values() for one in spec.measurands if one.code == f"{part}_grade"]
    assert len(graded) >= 5
    assert {(one.suggests_quarantine_on, one.criteria) for one in graded} == {(("red",), ("PROBE-GRADE",))}


@pytest.mark.parametrize("code", ["vertical_distance", "horizontal_distance"])
def test_distance_takes_its_nominal_from_the_test_object(code):
    assert (MEASURANDS[code].nominal, MEASURANDS[code].nominal_from) == (None, "test_object")


def test_sound_speed_is_corrected_along_the_beam_only():
    assert {code for code, one in MEASURANDS.items() if one.sound_speed_correction} <= {
        "vertical_distance",
        "vertical_distance_before",
    }


def test_number_without_published_limit_says_so_or_is_kept_for_its_own_baseline():
    silent = {
        code
        for code, one in MEASURANDS.items()
        if one.kind in ("number", "count", "derived")
        and not one.criteria
        and not one.own_baseline
        and "none until adopted" not in one.note
    }
    assert silent == {
        "soak_minutes",
        "penetration_before",
        "vertical_distance_before",
        "horizontal_distance_before",
    }


def test_monthly_check_stays_short_and_is_gated_and_sampled():
    monthly = PROCEDURES["monthly-in-air"]
    assert sum(one.required for one in monthly.measurands) <= 16
    assert monthly.signing == "sampled"
    assert monthly.decontamination_gate
