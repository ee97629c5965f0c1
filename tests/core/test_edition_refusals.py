"""All that is wrong with a document at once, each at its place; nothing that a stand-in would make wrong."""

from __future__ import annotations

import copy
import json
from pathlib import Path

import pytest

from qa_tracker.core import library
from qa_tracker.core.edition_draft import begin
from qa_tracker.core.edition_places import Spot, spot_of
from qa_tracker.core.edition_refusals import Published, read_whole

FOLDER = Path(__file__).parents[2] / "fixtures"
REPAIR = json.loads((FOLDER / "procedures" / "after-repair-or-change.json").read_text("utf-8"))
TG1 = library.criteria_set(json.loads((FOLDER / "criteria" / "tg1-1998.json").read_text("utf-8"))).criteria
CODES = [each["code"] for each in REPAIR["measurands"]]
DERIVED = CODES.index("penetration_difference")
GRADE = next(number for number, each in enumerate(REPAIR["measurands"]) if each["kind"] == "grade")


@pytest.fixture
def document():
    return copy.deepcopy(REPAIR)


def told(document, published=None):
    return [(each.field, each.code) for each in read_whole(document, published).refusals]


def test_whole_document_is_refused_nothing(document):
    assert read_whole(document).refusals == ()
    assert read_whole(document).spec == library.procedure(document)


def test_several_refusals_are_found_at_once_in_the_documents_order(document):
    document["measurands"][DERIVED]["formula"] = "penetration - cabel"
    document["measurands"][GRADE]["name"] = ""
    document["measurands"][GRADE]["repeats"] = "two"
    document["steps"][1]["text"] = ""
    document["title"] = " "
    assert [field for field, _ in told(document)] == [
        "title",
        "steps[1].text",
        f"measurands[{GRADE}].name",
        f"measurands[{GRADE}].repeats",
        f"measurands[{DERIVED}].formula",
    ]


@pytest.mark.parametrize(
    ("key", "value", "code"),
    [
        pytest.param("kind", "guess", "library.not_allowed", id="kind"),
        pytest.param("grades", [], "library.kind_does_not_fit", id="no grades"),
        pytest.param("grades", [{"value": "A b", "name": ""}], "library.not_allowed", id="a wrong grade"),
        pytest.param("suggests_quarantine_on", ["pink"], "library.not_allowed", id="a grade there is not"),
        pytest.param("code", "Case", "library.not_allowed", id="code"),
        pytest.param("qualifiers", [], "library.empty", id="no qualifier"),
        pytest.param("extra", 1, "library.unknown_key", id="a key there is not"),
    ],
)
def test_wrong_part_of_a_measurand_is_refused_once_and_alone(document, key, value, code):
    document["measurands"][GRADE][key] = value
    assert [code for _, code in told(document)] == [code]


@pytest.mark.parametrize(
    ("change", "places"),
    [
        pytest.param({"applies_to": {"kinds": []}}, ["applies_to.kinds"], id="applies to nothing"),
        pytest.param({"measurands": []}, ["measurands"], id="no measurand"),
        pytest.param({"steps": []}, ["steps"], id="no step"),
        pytest.param({"minutes": {"probe": "x", "scanner": -1}}, ["minutes.probe"], id="minutes"),
        pytest.param({"measurands": ["text"]}, ["measurands[0]"], id="a measurand that is a text"),
        pytest.param({"surplus": 1}, ["surplus"], id="a key there is not"),
        pytest.param(
            {"recurrence": {"rule": "FREQ=HOURLY", "before_days": 1, "grace_days": 1}},
            ["recurrence.rule"],
            id="a rule nothing follows",
        ),
    ],
)
def test_wrong_part_of_the_head_is_refused_at_its_place(document, change, places):
    assert [field for field, _ in told(document | change)] == places


def test_document_that_is_no_object_is_refused_without_a_reading():
    found = read_whole(["a list"])
    assert found.spec is None
    assert [each.code for each in found.refusals] == ["library.not_an_object"]


def test_circle_of_formulas_is_refused_at_one_of_them(document):
    document["measurands"][DERIVED]["formula"] = "vertical_distance_difference * 1.0"
    other = CODES.index("vertical_distance_difference")
    document["measurands"][other]["formula"] = "penetration_difference * 1.0"
    assert [code for _, code in told(document)] == ["formula.cycle"]


def test_step_and_band_that_hold_nothing_are_refused(document):
    number = CODES.index("penetration")
    document["measurands"][number] |= {"resolution": "0", "plausible": {"low": "20", "high": "2"}}
    assert {code for _, code in told(document)} == {"number.step", "edition_draft.band_reversed"}


def test_more_than_can_be_kept_is_refused(document):
    document["measurands"][GRADE] |= {"code": "a" * 61, "repeats": 51}
    document |= {"title": "T" * 161, "edition": 10000}
    document["recurrence"] = {"rule": "FREQ=DAILY", "before_days": 1, "grace_days": 100000}
    assert [code for _, code in told(document)] == [
        "edition_draft.too_long",
        "edition_draft.too_many",
        "schedule.days_out_of_range",
        "edition_draft.too_long",
        "edition_draft.too_many",
    ]


def test_criterion_of_another_unit_is_refused(document):
    number = CODES.index("penetration")
    document["measurands"][number]["criteria"] = ["TG1-UNIF"]
    published = Published(criteria=[each for each in TG1 if each.id == "TG1-UNIF"])
    assert (f"measurands[{number}].criteria", "library.unit_differs") in told(document, published)


def test_code_that_stands_for_another_quantity_is_refused(document):
    number = CODES.index("penetration")
    published = Published(measurands={"penetration": ("number", "cm"), "case_grade": ("count", "1")})
    assert told(document, published) == [
        (f"measurands[{CODES.index('case_grade')}].kind", "edition_draft.measurand_known"),
        (f"measurands[{number}].unit", "edition_draft.measurand_known"),
    ]


def test_refused_formula_is_not_also_said_to_be_another_kind(document):
    document["measurands"][DERIVED]["formula"] = "penetration -"
    published = Published(measurands={"penetration_difference": ("derived", "mm")})
    assert [code for _, code in told(document, published)] == ["formula.unfinished"]


@pytest.mark.parametrize(
    ("place", "spot"),
    [
        ("title", Spot("head", "title")),
        ("minutes.probe", Spot("head", "minutes_probe")),
        ("applies_to.array_kinds[0]", Spot("head", "applies_arrays")),
        ("recurrence.grace_days", Spot("head", "grace_days")),
        ("recurrence.rule", Spot("head", "every")),
        ("cautions[2]", Spot("head", "cautions")),
        ("steps", Spot("steps", "step-1")),
        ("steps[2].text", Spot("steps", "step-3")),
        ("measurands", Spot("measurands")),
        ("measurands[1].grades[0].name", Spot("m2", "grades")),
        ("measurands[1].plausible", Spot("m2", "low")),
        ("measurands[1].plausible.high", Spot("m2", "high")),
    ],
)
def test_place_in_the_document_leads_to_its_input(place, spot):
    assert spot_of(place, begin(REPAIR, 2)) == spot
