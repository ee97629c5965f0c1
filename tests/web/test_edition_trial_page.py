"""Trying an edition on sample values: asked as on the entry page, judged by the adopted limits, nothing kept."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.records import ledger
from qa_tracker.records.models import Baseline, Check, CriteriaSet, Device, Draft
from qa_tracker.services import library

JSON = {"HTTP_ACCEPT": "application/json"}
PENETRATION, BEFORE = "penetration.1.1.1", "penetration_before.1.1.1"


@pytest.fixture
def judged(editor):
    for each in CriteriaSet.objects.all():
        library.adopt_criteria(criteria_set=each, site=None, remark="", actor=editor.physicist, at=now())
    return editor


def tried(editor, **typed):
    return editor.client.post(editor.address("trial"), typed).content.decode()


def test_fields_are_asked_in_the_order_of_the_entry_page(editor):
    page = editor.page("trial")
    assert page.index("case_grade.0.0.1") < page.index("reverberation_depth.1.0.1") < page.index(PENETRATION)
    assert "Deepest depth where speckle still stands out" in page


def test_value_when_typed_is_judged_against_the_example_baseline(judged):
    page = tried(judged, **{PENETRATION: "145", "baseline.penetration": "152"})
    assert "145\N{NO-BREAK SPACE}mm is 7\N{NO-BREAK SPACE}mm less than the baseline" in page
    assert ">remedial</span>" in page


def test_value_when_typed_is_judged_against_the_example_nominal(judged):
    page = tried(judged, **{"vertical_distance.1.1.1": "102.5", "nominal.vertical_distance": "100"})
    assert "more than the nominal value of 100" in page


def test_value_without_an_example_baseline_is_not_assessable(judged):
    assert "not assessable" in tried(judged, **{PENETRATION: "145"})


def test_derived_quantity_is_worked_out(judged):
    assert "-7\N{NO-BREAK SPACE}mm" in tried(judged, **{PENETRATION: "145", BEFORE: "152"})


def test_value_when_too_fine_is_refused_beside_its_field(judged):
    assert "finer than this is read to" in tried(judged, **{PENETRATION: "145.5"})


def test_example_when_no_number_is_refused_beside_it(judged):
    page = tried(judged, **{"baseline.penetration": "deep"})
    assert "“deep” is not a number" in page


def test_array_without_lines_and_elements_is_not_asked_for_dark_elements(editor):
    assert "dark_elements.1.0.1" in tried(editor, array_kind="linear")
    assert "dark_elements.1.0.1" not in tried(editor, array_kind="phased")


def test_kind_that_the_procedure_is_not_meant_for_is_not_taken(editor):
    assert "case_grade.0.0.1" in tried(editor, device_kind="spaceship", array_kind="round")


def test_script_is_told_the_pieces_that_change(judged):
    typed = {PENETRATION: "145", "baseline.penetration": "152"}
    parts = judged.client.post(judged.address("trial"), typed, **JSON).json()["parts"]
    assert "remedial" in parts[f"out-{PENETRATION}"]
    assert "out-worked-out" in parts


def test_draft_when_wrong_can_not_be_tried(editor):
    editor.client.post(editor.address("head"), editor.inputs("head", title=""))
    page = editor.page("trial")
    assert "It can be tried once it can be read as a whole" in page
    assert "case_grade.0.0.1" not in page


def test_nothing_is_kept_of_a_trial(judged):
    before = [model.objects.count() for model in (Baseline, Check, Device, Draft)], ledger.state()
    revision = judged.draft().revision
    tried(judged, **{PENETRATION: "145", "baseline.penetration": "152"})
    assert ([model.objects.count() for model in (Baseline, Check, Device, Draft)], ledger.state()) == before
    assert judged.draft().revision == revision
