"""A measurand judged by several limits: the worst decides, and what the others said is kept and shown."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import FurtherVerdict, Verdict
from qa_tracker.records.queries import submissions
from qa_tracker.services import checks, library, objects, rechecking
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.entries import Entry
from tests import builders

TOE = "toe-leakage-log"
WARD = ((builders.MONTHLY, TOE),)


def limit(name, criterion):
    return {
        "id": name, "name": name, "shape": "E", "unit": "uA", "medium": "electrical", "methods": ["soak"],
        "source": "The group's own", "standing": {"suspension": "practice"}, "own_words": {},
        "not_for_array_kinds": [], "electrical": True, "criterion": criterion, "note": "",
        "measurands": ["toe_probe_leakage"],
    }  # fmt: skip


LOCAL = {
    "set": "local-toe", "edition": "1", "title": "Local limits", "source": "The group's own", "note": "",
    "cautions": [],
    "criteria": [
        limit("TOE-LOCAL", {"basis": "none", "direction": "above", "suspension": {"absolute": "150"}}),
        limit("TOE-STEP", {"basis": "baseline", "direction": "above", "suspension": {"absolute": "60"}}),
    ],
}  # fmt: skip


@pytest.fixture
def ward(shared_ward):
    row = library.publish_criteria(document=LOCAL, actor=shared_ward.physicist, at=now())
    library.adopt_criteria(criteria_set=row, site=None, remark="", actor=shared_ward.physicist, at=now())
    return shared_ward


def leakage(ward, probe, chassis):
    """The judged probe leakage, the check and what was typed for it."""
    device = builders.probe(
        ward.physicist, Place(site=ward.site), serial="TOE", array_kind="matrix",
        contact_class="mucous_membrane", applied_part="CF",
    )  # fmt: skip
    check = checks.open_unplanned(device=device.uid, procedure=TOE, actor=ward.technician, at=now())
    given = {"toe_probe_leakage": probe, "toe_chassis_leakage": chassis}
    typed = Typed({f"{code}.0.0.1": Entry(text) for code, text in given.items()})
    seen = checks.preview(check=check.uid, typed=typed, whole=False, actor=ward.technician, at=now())
    return next(one for one in seen.judged.items if one.item.spec.code == "toe_probe_leakage"), check


TRIPS = {
    "the ratio": ("176", "210", "TOE-80", "suspension"),
    "the absolute value": ("160", "400", "TOE-LOCAL", "suspension"),
    "no baseline for the step": ("62", "210", "TOE-STEP", "not_assessable"),
}


@pytest.mark.parametrize("name", TRIPS)
def test_whichever_limit_trips_decides(ward, name):
    probe, chassis, criterion, verdict = TRIPS[name]
    found, _ = leakage(ward, probe, chassis)
    assert (found.criterion.code, found.judgement.verdict) == (criterion, verdict)
    assert len(found.further) == 2
    assert found.criterion.code not in {each.criterion.code for each in found.further}


def submitted(ward):
    _, check = leakage(ward, "176", "210")
    tester = objects.register_instrument(
        site=ward.site, kind="leakage_tester", maker="Quorrel", model="Safe 3", serial="7", calibration_due_on=None,
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    entries = builders.answers(check, ward.technician, toe_probe_leakage="176", toe_chassis_leakage="210")
    typed = Typed(entries, instrument=tester.uid, cleaned_before="Cycle 812, Ifeoma")
    builders.submitted(check, ward.technician, typed)
    return check


def test_further_verdicts_are_kept_with_all_they_were_judged_by(ward):
    check = submitted(ward)
    verdict = Verdict.objects.get(submission__check_of=check, measurand__code="toe_probe_leakage")
    kept = FurtherVerdict.objects.filter(verdict_of=verdict).order_by("position")
    assert [(each.criterion.code, each.verdict) for each in kept] == [
        ("TOE-LOCAL", "suspension"), ("TOE-STEP", "not_assessable"),
    ]  # fmt: skip
    (row,) = submissions.submissions_of([check.id])[check.id]
    read = next(each for each in row.readings if each.measurand == "toe_probe_leakage")
    assert [each.code for each in read.verdict.further] == ["beyond", "no_baseline"]
    assert rechecking.recheck_verdicts().problems == ()
