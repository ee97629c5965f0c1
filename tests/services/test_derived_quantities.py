"""Quantities that nobody types: worked out from a check's readings, judged, kept, and vouched for."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Aperture, Condition, Reading, Verdict
from qa_tracker.services import checks, devices, library, rechecking
from qa_tracker.services.checks import Typed
from qa_tracker.services.entries import Entry
from tests import builders

CHANGE = "after-repair-or-change"
WARD = ((builders.MONTHLY, CHANGE),)
LIMIT = {
    "set": "local-change", "edition": "1", "title": "Local limits", "source": "The group's own", "note": "",
    "cautions": [],
    "criteria": [{
        "id": "CHANGE-PEN", "name": "Depth after a change", "shape": "E", "unit": "mm", "medium": "phantom",
        "methods": ["eye"], "source": "The group's own", "standing": {"remedial": "practice"},
        "own_words": {}, "not_for_array_kinds": [], "electrical": False, "note": "",
        "criterion": {"basis": "none", "direction": "below", "remedial": {"absolute": "-3"}},
        "measurands": ["penetration_difference"],
    }],
}  # fmt: skip


@pytest.fixture
def ward(shared_ward):
    row = library.publish_criteria(document=LIMIT, actor=shared_ward.physicist, at=now())
    library.adopt_criteria(criteria_set=row, site=None, remark="", actor=shared_ward.physicist, at=now())
    return shared_ward


def sheet_of(ward):
    check = checks.open_unplanned(device=ward.probe.uid, procedure=CHANGE, actor=ward.physicist, at=now())
    used = builders.phantom(ward.physicist, ward.site)
    return checks.sheet(check=check.uid, test_object=used.uid, actor=ward.physicist, at=now())


def judged(ward, laid=None, whole=False, **given):
    laid = laid or sheet_of(ward)
    entries = {item.key: Entry(*given[item.spec.code]) for item in laid.items if item.spec.code in given}
    typed = Typed(entries, test_object=laid.test_object.uid)
    seen = checks.preview(check=laid.check.uid, typed=typed, whole=whole, actor=ward.physicist, at=now())
    return {one.item.spec.code: one for one in seen.judged.items}


def test_difference_is_worked_out_and_judged_with_its_arithmetic(ward):
    found = judged(ward, penetration=("146",), penetration_before=("152",))["penetration_difference"]
    assert (found.entry.text, found.entry.origin) == ("-6", "derived")
    assert (found.judgement.verdict, found.judgement.parameters["arithmetic"]) == ("remedial", "146 - 152")


def test_nothing_is_worked_out_while_a_reading_is_missing(ward):
    assert "penetration_difference" not in judged(ward, penetration=("146",))


def test_quantity_is_not_asked_of_anybody(ward):
    laid = sheet_of(ward)
    assert "penetration_difference" not in {item.spec.code for item in laid.items}
    assert "penetration_difference" in {item.spec.code for item in laid.derived}


def test_quantity_made_of_a_bound_is_left_out(ward):
    found = judged(ward, penetration=("160", ">"), penetration_before=("152",))
    assert "penetration_difference" not in found


def test_difference_is_taken_within_each_condition(ward):
    for name in ("Abdomen", "Vascular"):
        devices.set_condition(
            device=ward.probe.uid, name=name, test_frequency_mhz="3.5", sound_speed_m_s="1540", settings={},
            actor=ward.physicist, at=now(),
        )  # fmt: skip
    laid = sheet_of(ward)
    first, second = Condition.objects.filter(device=ward.probe).order_by("id")
    part = Aperture.objects.get(device=ward.probe).id
    texts = {
        f"penetration.{part}.{first.id}.1": "146", f"penetration_before.{part}.{first.id}.1": "152",
        f"penetration.{part}.{second.id}.1": "100",
    }  # fmt: skip
    typed = Typed({key: Entry(text) for key, text in texts.items()}, test_object=laid.test_object.uid)
    seen = checks.preview(check=laid.check.uid, typed=typed, whole=False, actor=ward.physicist, at=now())
    made = [one for one in seen.judged.items if one.item.spec.kind == "derived"]
    assert [(one.item.condition.id, one.entry.text) for one in made] == [(first.id, "-6")]


def test_quantity_is_kept_like_a_reading_and_derived_again(ward):
    laid = sheet_of(ward)
    entries = {
        item.key: Entry(builders.good_answer(item), confirmed=True)
        for item in laid.items
        if item.spec.required
    }
    part = Aperture.objects.get(device=ward.probe).id
    entries |= {f"penetration.{part}.0.1": Entry("146"), f"penetration_before.{part}.0.1": Entry("152")}
    typed = Typed(entries, test_object=laid.test_object.uid, cleaned_before="Wipe", partial_reason="other")
    builders.submitted(laid.check, ward.physicist, typed)
    reading = Reading.objects.get(measurand__code="penetration_difference")
    assert (reading.entered, reading.scaled, reading.origin, reading.unit) == ("-6", -6, "derived", "mm")
    assert Verdict.objects.get(reading=reading).verdict == "remedial"
    assert rechecking.recheck_verdicts().problems == ()
