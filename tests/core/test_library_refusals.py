"""A library document that is wrong is refused at the place that is wrong."""

from __future__ import annotations

import copy
import json
from pathlib import Path

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.library import cautions, check_references, criteria_set, procedure

FOLDER = Path(__file__).parents[2] / "fixtures"
DOCUMENTS = {
    name: json.loads((FOLDER / f"{name}.json").read_text())
    for name in (
        "criteria/tg1-1998",
        "criteria/cautions",
        "criteria/probe-grade-2016",
        "procedures/monthly-in-air",
    )
}
DELETED = object()


def _changed(name, path, value):
    """Copy a document with the value at a path replaced, or removed."""
    document = copy.deepcopy(DOCUMENTS[name])
    parent = document
    for key in path[:-1]:
        parent = parent[key]
    if value is DELETED:
        del parent[path[-1]]
    else:
        parent[path[-1]] = value
    return document


def _refusal(read, *arguments):
    with pytest.raises(Invalid) as caught:
        read(*arguments)
    return caught.value.code, caught.value.field


CRITERIA_CASES = [
    ("set missing", ("set",), DELETED, "library.missing", "set"),
    ("set not a text", ("set",), 1, "library.not_a_text", "set"),
    ("title blank", ("title",), " ", "library.empty", "title"),
    ("cautions not a list", ("cautions",), "alara", "library.not_a_list", "cautions"),
    ("criteria empty", ("criteria",), [], "library.empty", "criteria"),
    ("criterion not an object", ("criteria", 1), "TG1", "library.not_an_object", "criteria[1]"),
    ("unknown key", ("criteria", 0, "limit"), "2", "library.unknown_key", "criteria[0].limit"),
    ("id in small letters", ("criteria", 0, "id"), "tg1", "library.not_allowed", "criteria[0].id"),
    ("id twice", ("criteria", 1, "id"), "TG1-VERT", "library.repeated", "criteria[1].id"),
    ("shape unknown", ("criteria", 0, "shape"), "Z", "library.not_allowed", "criteria[0].shape"),
    ("unit unknown", ("criteria", 0, "unit"), "MM", "unit.unknown", "criteria[0].unit"),
    ("medium unknown", ("criteria", 0, "medium"), "oil", "library.not_allowed", "criteria[0].medium"),
    ("flag as text", ("criteria", 0, "electrical"), "no", "library.not_a_flag", "criteria[0].electrical"),
    ("source missing", ("criteria", 0, "source"), DELETED, "library.missing", "criteria[0].source"),
    (
        "standing missing for a level",
        ("criteria", 0, "standing", "remedial"),
        DELETED,
        "library.no_standing",
        "criteria[0].standing",
    ),
    (
        "standing unknown",
        ("criteria", 0, "standing", "remedial"),
        "sure",
        "library.not_allowed",
        "criteria[0].standing.remedial",
    ),
    (
        "standing without its level",
        ("criteria", 4, "standing", "suspension"),
        "memory",
        "library.no_such_level",
        "criteria[4].standing",
    ),
    (
        "own word without its level",
        ("criteria", 4, "own_words", "suspension"),
        "defect",
        "library.no_such_level",
        "criteria[4].standing",
    ),
    (
        "array kind unknown",
        ("criteria", 0, "not_for_array_kinds"),
        ["round"],
        "library.not_allowed",
        "criteria[0].not_for_array_kinds[0]",
    ),
    (
        "limit as float",
        ("criteria", 0, "criterion", "remedial", "absolute"),
        1.5,
        "criterion.not_decimal",
        "criteria[0].criterion.remedial.absolute",
    ),
]

PROCEDURE_CASES = [
    ("edition zero", ("edition",), 0, "library.not_whole", "edition"),
    ("edition true", ("edition",), True, "library.not_whole", "edition"),
    ("nobody performs", ("performed_by",), [], "library.empty", "performed_by"),
    ("role unknown", ("performed_by", 0), "nurse", "library.not_allowed", "performed_by[0]"),
    ("signing unknown", ("signing",), "double", "library.not_allowed", "signing"),
    ("minutes negative", ("minutes", "probe"), -1, "library.not_whole", "minutes.probe"),
    ("minutes of a stranger", ("minutes", "printer"), 3, "library.not_allowed", "minutes"),
    ("rule without frequency", ("recurrence", "rule"), "monthly", "library.not_allowed", "recurrence.rule"),
    ("step without text", ("steps", 0), {}, "library.missing", "steps[0].text"),
    ("kind unknown", ("measurands", 0, "kind"), "colour", "library.not_allowed", "measurands[0].kind"),
    ("code twice", ("measurands", 1, "code"), "case_grade", "library.repeated", "measurands[1].code"),
    (
        "grade without grades",
        ("measurands", 0, "grades"),
        [],
        "library.kind_does_not_fit",
        "measurands[0].grades",
    ),
    (
        "number with grades",
        ("measurands", 0, "kind"),
        "number",
        "library.kind_does_not_fit",
        "measurands[0].grades",
    ),
    (
        "formula on a reading",
        ("measurands", 0, "formula"),
        "1 + 1",
        "library.kind_does_not_fit",
        "measurands[0].formula",
    ),
    (
        "quarantine on no grade",
        ("measurands", 0, "suggests_quarantine_on"),
        ["black"],
        "library.not_allowed",
        "measurands[0].suggests_quarantine_on",
    ),
    (
        "resolution a word",
        ("measurands", 0, "resolution"),
        "fine",
        "number.not_a_number",
        "measurands[0].resolution",
    ),
    (
        "qualifier unknown",
        ("measurands", 0, "qualifiers"),
        ["~"],
        "library.not_allowed",
        "measurands[0].qualifiers[0]",
    ),
    (
        "reference to nothing",
        ("measurands", 0, "reference_from"),
        "chassis",
        "library.unknown_measurand",
        "measurands[0].reference_from",
    ),
]


@pytest.mark.parametrize(
    ("path", "value", "code", "field"),
    [row[1:] for row in CRITERIA_CASES],
    ids=[row[0] for row in CRITERIA_CASES],
)
def test_criteria_set_is_refused_at_the_place(path, value, code, field):
    assert _refusal(criteria_set, _changed("criteria/tg1-1998", path, value)) == (code, field)


@pytest.mark.parametrize(
    ("path", "value", "code", "field"),
    [row[1:] for row in PROCEDURE_CASES],
    ids=[row[0] for row in PROCEDURE_CASES],
)
def test_procedure_is_refused_at_the_place(path, value, code, field):
    assert _refusal(procedure, _changed("procedures/monthly-in-air", path, value)) == (code, field)


def test_cautions_are_refused_when_a_code_comes_twice():
    document = [*DOCUMENTS["criteria/cautions"], DOCUMENTS["criteria/cautions"][0]]
    assert _refusal(cautions, document) == ("library.repeated", f"cautions[{len(document) - 1}].code")


def test_documents_that_are_no_objects_are_refused():
    assert _refusal(criteria_set, []) == ("library.not_an_object", "")
    assert _refusal(procedure, None) == ("library.not_an_object", "")
    assert _refusal(cautions, {}) == ("library.not_a_list", "cautions")


REFERENCE_CASES = [
    (
        "criterion unknown",
        ("measurands", 0, "criteria"),
        ["NONE-1"],
        "library.unknown_criterion",
        "monthly-in-air.case_grade",
    ),
    ("unit differs", ("measurands", 0, "unit"), "mm", "library.unit_differs", "monthly-in-air.case_grade"),
    (
        "medium differs",
        ("measurands", 10, "criteria"),
        ["TG1-VERT"],
        "library.medium_differs",
        "monthly-in-air.reverberation_depth",
    ),
    ("caution unknown", ("cautions", 0), "beware", "library.unknown_caution", "cautions[0]"),
]


@pytest.mark.parametrize(
    ("path", "value", "code", "field"),
    [row[1:] for row in REFERENCE_CASES],
    ids=[row[0] for row in REFERENCE_CASES],
)
def test_library_is_refused_when_a_part_does_not_fit_the_others(path, value, code, field):
    sets = [
        criteria_set(DOCUMENTS["criteria/tg1-1998"]),
        criteria_set(DOCUMENTS["criteria/probe-grade-2016"]),
    ]
    spec = procedure(_changed("procedures/monthly-in-air", path, value))
    assert _refusal(check_references, sets, [spec], cautions(DOCUMENTS["criteria/cautions"])) == (code, field)


def test_library_is_refused_when_one_code_means_two_quantities():
    document = _changed("procedures/monthly-in-air", ("cautions",), [])
    document["measurands"] = [one for one in document["measurands"] if one["code"] == "reverberation_depth"]
    other = copy.deepcopy(document)
    other["measurands"][0]["resolution"] = "1"
    code, field = _refusal(check_references, [], [procedure(document), procedure(other)], [])
    assert (code, field) == ("library.measurand_differs", "monthly-in-air.reverberation_depth.resolution")
