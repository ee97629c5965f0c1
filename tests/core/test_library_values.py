"""Every published number is in the library, at its level, with its standing and its source."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from qa_tracker.core.criteria import to_json
from qa_tracker.core.library import criteria_set

FOLDER = Path(__file__).parents[2] / "fixtures" / "criteria"
SETS = [
    criteria_set(json.loads(path.read_text()))
    for path in sorted(FOLDER.glob("*.json"))
    if path.stem != "cautions"
]
LIBRARY = {criterion.id: criterion for one in SETS for criterion in one.criteria}

TG1, TG128 = "Med Phys 25(8):1385-1406", "Med Phys 35(12):5471-5489"
IEC, FDA = "IEC 62353:2014", "FDA CDRH guidance, 27 June 2019"

# id, shape, unit, basis, direction, "more than" (True) or "at least" (False), source
LIMITS = [
    ("TG1-VERT", "A", "mm", "nominal", "either", True, TG1),
    ("TG1-HORZ", "A", "mm", "nominal", "either", True, TG1),
    ("TG1-PEN", "D", "mm", "baseline", "below", True, TG1),
    ("TG1-UNIF", "E", "dB", "none", "above", False, TG1),
    ("TG1-RING", "F", "mm", "none", "above", True, TG1),
    ("TG128-AX", "A", "mm", "nominal", "either", True, TG128),
    ("TG128-LAT", "A", "mm", "nominal", "either", True, TG128),
    ("TG128-PEN", "B", "mm", "baseline", "below", True, TG128),
    ("TG128-RES", "B", "mm", "baseline", "either", True, TG128),
    ("TG128-GREY", "C", "1", "baseline", "either", True, TG128),
    ("TG128-AREA", "A", "%", "nominal", "either", True, TG128),
    ("TG128-VOL", "A", "%", "nominal", "either", True, TG128),
    ("TG128-GRID", "E", "mm", "none", "above", True, TG128),
    ("DROP", "I", "1", "none", "above", False, "Ultrason Imaging 36(1):18-34"),
    ("62353-PE-EQUIPMENT", "E", "mOhm", "none", "above", True, IEC),
    ("62353-PE-CORD", "E", "mOhm", "none", "above", True, IEC),
    ("62353-PE-TOGETHER", "E", "mOhm", "none", "above", True, IEC),
    ("62353-PE-MULTISOCKET", "E", "mOhm", "none", "above", True, IEC),
    ("62353-EL-I-DIRECT", "E", "uA", "none", "above", True, IEC),
    ("62353-EL-I-DIFFERENTIAL", "E", "uA", "none", "above", True, IEC),
    ("62353-EL-I-ALTERNATIVE", "E", "uA", "none", "above", True, IEC),
    ("62353-EL-II-DIRECT", "E", "uA", "none", "above", True, IEC),
    ("62353-EL-II-ALTERNATIVE", "E", "uA", "none", "above", True, IEC),
    ("62353-AP-BF", "E", "uA", "none", "above", True, IEC),
    ("62353-AP-CF", "E", "uA", "none", "above", True, IEC),
    ("TOE-80", "G", "uA", "ratio", "above", True, "Makers' common rule"),
    ("TEMP-CONTACT", "E", "degC", "none", "above", True, "IEC 60601-2-37"),
    ("TEMP-AIR", "E", "K", "none", "above", True, "IEC 60601-2-37"),
    ("OUT-MI", "E", "1", "none", "above", True, FDA),
    ("OUT-ISPTA", "E", "mW/cm2", "none", "above", True, FDA),
    ("OUT-EYE-MI", "E", "1", "none", "above", True, FDA),
    ("OUT-EYE-ISPTA", "E", "mW/cm2", "none", "above", True, FDA),
    ("OUT-EYE-TI", "E", "1", "none", "above", True, FDA),
]

# id, level, absolute, percent, which of the two governs, standing
VALUES = [
    ("TG1-VERT", "remedial", "1.5", "1.5", "larger", "memory"),
    ("TG1-VERT", "suspension", "2", "2", "larger", "memory"),
    ("TG1-HORZ", "remedial", "2", "2", "larger", "memory"),
    ("TG1-HORZ", "suspension", "3", "3", "larger", "memory"),
    ("TG1-PEN", "remedial", "6", None, None, "memory"),
    ("TG1-PEN", "suspension", "10", None, None, "confirmed"),
    ("TG1-UNIF", "remedial", "4", None, None, "memory"),
    ("TG1-UNIF", "suspension", "6", None, None, "memory"),
    ("TG128-AX", "remedial", "2", "2", "larger", "confirmed"),
    ("TG128-LAT", "remedial", "3", "3", "larger", "confirmed"),
    ("TG128-PEN", "remedial", "10", None, None, "confirmed"),
    ("TG128-RES", "remedial", "1", None, None, "confirmed"),
    ("TG128-GREY", "remedial", "2", "10", "either", "confirmed"),
    ("TG128-AREA", "remedial", "5", None, None, "confirmed"),
    ("TG128-VOL", "remedial", "5", None, None, "confirmed"),
    ("TG128-GRID", "remedial", "3", None, None, "confirmed"),
    ("DROP", "remedial", "2", None, None, "confirmed"),
    ("DROP", "suspension", "4", None, None, "confirmed"),
    ("62353-PE-EQUIPMENT", "suspension", "200", None, None, "confirmed"),
    ("62353-PE-CORD", "suspension", "100", None, None, "confirmed"),
    ("62353-PE-TOGETHER", "suspension", "300", None, None, "confirmed"),
    ("62353-PE-MULTISOCKET", "suspension", "500", None, None, "memory"),
    ("62353-EL-I-DIRECT", "suspension", "500", None, None, "confirmed"),
    ("62353-EL-I-DIFFERENTIAL", "suspension", "500", None, None, "memory"),
    ("62353-EL-I-ALTERNATIVE", "suspension", "1000", None, None, "memory"),
    ("62353-EL-II-DIRECT", "suspension", "100", None, None, "memory"),
    ("62353-EL-II-ALTERNATIVE", "suspension", "500", None, None, "memory"),
    ("62353-AP-BF", "suspension", "5000", None, None, "memory"),
    ("62353-AP-CF", "suspension", "50", None, None, "memory"),
    ("TOE-80", "suspension", None, "80", None, "practice"),
    ("TEMP-CONTACT", "suspension", "43", None, None, "confirmed"),
    ("TEMP-AIR", "suspension", "27", None, None, "confirmed"),
    ("OUT-MI", "suspension", "1.9", None, None, "confirmed"),
    ("OUT-ISPTA", "suspension", "720", None, None, "confirmed"),
    ("OUT-EYE-MI", "suspension", "0.23", None, None, "confirmed"),
    ("OUT-EYE-ISPTA", "suspension", "50", None, None, "confirmed"),
    ("OUT-EYE-TI", "suspension", "1.0", None, None, "confirmed"),
]


@pytest.mark.parametrize(
    ("name", "shape", "unit", "basis", "direction", "strict", "source"), LIMITS, ids=lambda v: v
)
def test_criterion_has_the_published_shape_and_source(name, shape, unit, basis, direction, strict, source):
    spec = LIBRARY[name]
    assert (spec.shape, spec.unit) == (shape, unit)
    assert (spec.criterion.basis, spec.criterion.direction, spec.criterion.strict) == (
        basis,
        direction,
        strict,
    )
    assert source in spec.source


@pytest.mark.parametrize(
    ("name", "level", "absolute", "percent", "governs", "standing"),
    VALUES,
    ids=[f"{v[0]}-{v[1]}" for v in VALUES],
)
def test_published_number_is_in_the_library_with_its_standing(
    name, level, absolute, percent, governs, standing
):
    limit = to_json(LIBRARY[name].criterion)[level]
    assert (limit.get("absolute"), limit.get("percent")) == (absolute, percent)
    assert governs is None or limit["governs"] == governs
    assert getattr(LIBRARY[name].standing, level) == standing


def test_no_level_is_in_the_library_beyond_the_published_ones():
    published = {(row[0], row[1]) for row in VALUES}
    limits = [
        (name, level, limit) for name, spec in LIBRARY.items() for level, limit in spec.criterion.levels()
    ]
    assert {(name, level) for name, level, limit in limits if not limit.of_own_spread} == published


def test_limits_of_own_spread_hold_no_number_of_a_device():
    own = [spec for spec in LIBRARY.values() if spec.criterion.of_own_spread]
    assert {spec.id for spec in own} == {name for name in LIBRARY if name.startswith("OWN-")}
    for spec in own:
        assert to_json(spec.criterion)["remedial"] == {"coverage": "95", "confidence": "95"}
        assert (spec.shape, spec.standing.remedial, bool(spec.measurands)) == ("J", "practice", True)


def test_ring_down_is_banded_by_frequency_with_its_uncertain_edges_noted():
    spec = LIBRARY["TG1-RING"]
    bands = to_json(spec.criterion)["bands"]
    assert [(band["from"], band["below"], band["remedial"]["absolute"]) for band in bands] == [
        (None, "3", "7"),
        ("3", "7", "5"),
        ("7", None, "3"),
    ]
    assert spec.criterion.banded_by == "test_frequency_mhz"
    assert (spec.standing.remedial, spec.standing.suspension) == ("memory", None)
    assert "uncertain" in spec.note


def test_probe_grade_gives_remedial_for_amber_and_suspension_for_red():
    spec = LIBRARY["PROBE-GRADE"]
    assert dict(spec.criterion.grades) == {"green": "conforming", "amber": "remedial", "red": "suspension"}
    assert (spec.standing.remedial, spec.standing.suspension) == ("confirmed", "confirmed")
    assert "Dudley & Woolley 2016" in spec.source


def test_every_criterion_of_the_library_is_in_a_table_here():
    published = {name for name in LIBRARY if not name.startswith("OWN-")}
    assert published == {row[0] for row in LIMITS} | {"PROBE-GRADE"}


def test_drop_out_is_refused_for_arrays_without_line_to_element_correspondence():
    assert set(LIBRARY["DROP"].not_for_array_kinds) == {"phased", "matrix", "cw_pencil", "mechanical_3d"}


def test_uniformity_limits_are_for_a_phantom_image_only():
    assert LIBRARY["TG1-UNIF"].medium == "phantom"


def test_electrical_criteria_are_marked_and_no_other():
    marked = {name for name, spec in LIBRARY.items() if spec.electrical}
    assert marked == {name for name in LIBRARY if name.startswith(("62353", "TOE"))}


def test_the_sources_own_words_stand_beside_ours():
    tg1, grade = LIBRARY["TG1-VERT"].own_words, LIBRARY["PROBE-GRADE"].own_words
    assert (tg1.remedial, tg1.suspension) == ("action", "defect")
    assert (grade.remedial, grade.suspension) == ("amber", "red")


def test_a_set_with_a_number_from_memory_says_so_among_its_cautions():
    from_memory = {
        one.set
        for one in SETS
        for row in one.criteria
        if "memory" in (row.standing.remedial, row.standing.suspension)
    }
    assert from_memory == {one.set for one in SETS if "memory-limits" in one.cautions}
