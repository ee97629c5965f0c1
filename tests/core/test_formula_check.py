"""An edition whose formula can't be worked out, or would give another quantity, is refused at the place."""

from __future__ import annotations

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.library import procedure
from tests.core.formula_documents import document, read, without, worked_out

READINGS = (
    read("depth", sound_speed_correction=True),
    read("width_cm", unit="cm"),
    read("three", repeats=3),
    read("warm", unit="degC", per="device", by_condition=False),
    read("loss", unit="dB", per="device", by_condition=False),
    read("dark", kind="count", unit="1", resolution="1", by_condition=False),
    read("look", kind="grade", unit="1", grades=[{"value": "good", "name": "good"}]),
    read("clean", kind="yes_no", unit="1"),
    read("remark", kind="text", unit="1"),
    read("nominal", unit="mm"),
    read("horizontal_depth"),
    read("penetration"),
    without(read("bare"), "nominal_from"),
)
OF_DEVICE = {"per": "device", "by_condition": False}


def _published(formula, **changes):
    return procedure(document(*READINGS, worked_out("change", formula, nominal="100", **changes)))


ACCEPTED = [
    ("depth - nominals.depth", {}),
    ("nominals.depth * 2.0 - depth", {}),
    ("percent * (depth - mean(three)) / mean(three)", {"unit": "%"}),
    ("depth / (width_cm * mm_per_cm)", {"unit": "1"}),
    ("width_cm * mm_per_cm - depth", {}),
    ("depth - 5.0 * unit.mm", {}),
    ("depth > 0.0 && dark < 3.0 ? depth : 0.0", {}),
    ("test_object.layout_compensated || probe.wireless ? depth : -depth", {}),
    ("sqrt(depth * depth + range(three) * range(three))", {}),
    ("least(depth, greatest(three), standard_deviation(three))", {}),
    ("abs(mean([depth, 2.0 * depth]))", {}),
    ("depth + loss / loss * depth", {}),
    ("aperture.elements * aperture.pitch_mm", {}),
    ("depth * condition.test_frequency_mhz / (unit.mm * unit.MHz)", {"unit": "1"}),
    ("warm - mean([warm, warm])", {"unit": "K"}),
    ("mean(depth)", OF_DEVICE),
    ("range(dark)", OF_DEVICE | {"unit": "1"}),
    ("depth * test_object.sound_speed_m_s / condition.sound_speed_m_s", {}),
]


@pytest.mark.parametrize(("formula", "changes"), ACCEPTED, ids=[row[0] for row in ACCEPTED])
def test_formula_is_published(formula, changes):
    assert _published(formula, **changes).measurands[-1].formula == formula


# formula, changes of the measurand, code, column
REFUSED = [
    ("depth - deep", {}, "formula.unknown_name", 9),
    ("depth - aperture.width_mm", {}, "formula.unknown_name", 9),
    ("depth - probe.serial", {}, "formula.unknown_name", 9),
    ("depth - nominals.deep", {}, "formula.unknown_name", 9),
    ("depth - depth.nominal", {}, "formula.unknown_name", 9),
    ("depth - unit", {}, "formula.unknown_name", 9),
    ("depth - average(three)", {}, "formula.unknown_function", 9),
    ("depth - nominal", {}, "formula.name_taken", 9),
    ("depth * look", {}, "formula.reading_no_number", 9),
    ("clean ? depth : 0.0", {}, "formula.reading_no_number", 1),
    ("depth * remark", {}, "formula.reading_no_number", 9),
    ("depth - nominals.bare", {}, "formula.no_nominal", 9),
    ("aperture.pitch_mm", OF_DEVICE, "formula.no_aperture", 1),
    ("dark * condition.test_frequency_mhz", {"by_condition": False}, "formula.no_condition", 8),
    ("depth + width_cm", {}, "formula.unit_clash", 7),
    ("depth - 5.0", {}, "formula.unit_clash", 7),
    ("depth > width_cm ? depth : 0.0", {}, "formula.unit_clash", 7),
    ("depth > 0.0 ? depth : width_cm", {}, "formula.unit_clash", 23),
    ("least(depth, width_cm)", {}, "formula.unit_clash", 1),
    ("mean([depth, width_cm])", {}, "formula.unit_clash", 6),
    ("2.0 * (depth + loss)", {}, "formula.unit_clash", 14),
    ("depth / depth", {}, "formula.result_unit", 1),
    ("100.0 * depth / depth", {"unit": "%"}, "formula.result_unit", 1),
    ("sqrt(depth)", {}, "formula.root", 1),
    ("mean(depth)", {}, "formula.arguments", 1),
    ("mean(three, three)", {}, "formula.arguments", 1),
    ("depth + least(depth)", {}, "formula.arguments", 9),
    ("abs(depth, depth)", {}, "formula.arguments", 1),
    ("three - depth", {}, "formula.list_as_number", 1),
    ("three", {}, "formula.list_as_number", 1),
    ("depth - loss", OF_DEVICE, "formula.list_as_number", 1),
    ("dark > 0.0 ? depth : 0.0", {"by_condition": False}, "formula.list_as_number", 14),
    ("depth > 0.0", {}, "formula.yes_no_as_number", 1),
    ("depth + (depth > 0.0)", {}, "formula.yes_no_as_number", 9),
    ("depth * test_object.layout_compensated", {}, "formula.yes_no_as_number", 9),
    ("depth ? depth : 0.0", {}, "formula.not_yes_no", 1),
    ("depth > 0.0 && depth ? depth : 0.0", {}, "formula.not_yes_no", 16),
    ("!depth ? depth : 0.0", {}, "formula.not_yes_no", 2),
    ("100 * depth", {}, "formula.whole_number", 1),
    ("depth -", {}, "formula.unfinished", 8),
    (
        "horizontal_depth * test_object.sound_speed_m_s / condition.sound_speed_m_s",
        {},
        "formula.lateral_correction",
        1,
    ),
    (
        "penetration * test_object.sound_speed_m_s / condition.sound_speed_m_s",
        {},
        "formula.no_correction",
        1,
    ),
    ("bare * test_object.sound_speed_m_s / condition.sound_speed_m_s", {}, "formula.no_correction", 1),
    ("depth * test_object.sound_speed_m_s / (1540.0 * unit.m / unit.s)", {}, "formula.no_console_speed", 9),
]


@pytest.mark.parametrize(
    ("formula", "changes", "code", "column"), REFUSED, ids=[f"{row[0]} {row[1] or ''}" for row in REFUSED]
)
def test_formula_is_refused_at_its_place(formula, changes, code, column):
    with pytest.raises(Invalid) as refused:
        _published(formula, **changes)
    assert (refused.value.code, refused.value.parameters["column"]) == (code, column)
    assert refused.value.field == f"measurands[{len(READINGS)}].formula"


def test_clash_names_both_units():
    with pytest.raises(Invalid) as refused:
        _published("2.0 * (depth + width_cm)")
    given = {"column": 14, "at": "(depth + width_cm)", "left": "mm", "right": "cm"}
    assert refused.value.parameters == given


def test_result_is_refused_with_its_unit_and_the_one_wanted():
    with pytest.raises(Invalid) as refused:
        _published("depth * width_cm")
    assert refused.value.parameters["unit"] == "cm mm"
    assert refused.value.parameters["wanted"] == "mm"


def test_unknown_name_is_refused_with_the_nearest_ones():
    with pytest.raises(Invalid) as refused:
        _published("depht * 2.0")
    assert refused.value.parameters["nearest"].startswith("depth")


def test_test_object_is_named_only_where_the_procedure_asks_for_one():
    measurands = (*READINGS, worked_out("change", "depth - test_object.depth_mm"))
    assert procedure(document(*measurands))
    with pytest.raises(Invalid) as refused:
        procedure(document(*measurands, needs_test_object=False))
    assert refused.value.code == "formula.no_test_object"


def test_own_nominal_is_named_where_the_measurand_has_one():
    depth, named = read("depth"), "depth - nominal"
    assert procedure(document(depth, worked_out("change", named, nominal="100")))
    assert procedure(document(depth, worked_out("change", named, nominal_from="test_object")))
    with pytest.raises(Invalid) as refused:
        procedure(document(depth, worked_out("change", named)))
    assert refused.value.code == "formula.no_nominal"


@pytest.mark.parametrize(
    ("changes", "code", "field"),
    [
        ({"repeats": 2}, "formula.repeated", "measurands[1].repeats"),
        ({"resolution": "0"}, "number.step", "measurands[1].resolution"),
    ],
)
def test_derived_measurand_is_worked_out_once_and_to_a_step(changes, code, field):
    with pytest.raises(Invalid) as refused:
        procedure(document(read("depth"), worked_out("change", "depth", **changes)))
    assert (refused.value.code, refused.value.field) == (code, field)
