"""Baselines: epochs of one series, signed with a reason, and never a cover for a fault."""

from __future__ import annotations

import uuid

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, DomainError, Forbidden
from qa_tracker.records.models import Aperture, Baseline, Signature
from qa_tracker.records.queries import baselines as rows
from qa_tracker.services import baselines, checks, devices
from qa_tracker.services.baselines import Value
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.entries import Entry
from tests import builders

ANNUAL = "annual-survey"
WARD = ((builders.MONTHLY, ANNUAL),)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def aperture(device):
    return Aperture.objects.get(device=device).uid


def put(ward, *values, **changed):
    given = {"reason": "acceptance", "password": builders.PASSWORD, "actor": ward.physicist}
    return baselines.set_values(
        device=ward.probe.uid, values=list(values), **{"test_object": None} | given | changed, at=now()
    )


def penetration(ward, text, **more):
    return Value("penetration", text, aperture(ward.probe), **more)


def test_each_setting_begins_an_epoch_and_ends_the_one_before(ward):
    for text in ("150", "148", "151"):
        put(ward, penetration(ward, text), reason=f"after {text}")
    kept = Baseline.objects.order_by("epoch")
    assert [(row.epoch, row.entered, row.ended_at is None) for row in kept] == [
        (1, "150", False), (2, "148", False), (3, "151", True),
    ]  # fmt: skip
    assert [row.ended_at for row in kept][:2] == [row.valid_from for row in kept][1:]
    (in_force,) = rows.in_force(ward.probe.id).values()
    assert (in_force.entered, in_force.reason) == ("151", "after 151")


def test_baseline_keeps_what_it_was_measured_with_and_who_signed(ward):
    (row,) = put(ward, penetration(ward, "150,0"))
    assert (row.entered, row.scaled, row.places, row.unit) == ("150,0", 1500, 1, "mm")
    assert (row.console_model, row.console_software, row.set_by) == ("OG-70", "4.2", ward.physicist)
    signed = Signature.objects.get(meaning="baseline set")
    assert (signed.person_id, signed.role, signed.remark) == (ward.physicist.pk, "physicist", "acceptance")


REFUSED = {
    "no value": (lambda w: [], {}, "baseline.values_missing"),
    "no reason": (lambda w: [penetration(w, "150")], {"reason": " "}, "baseline.reason_missing"),
    "wrong password": (lambda w: [penetration(w, "150")], {"password": "x"}, "signature.password_wrong"),
    "unknown measurand": (lambda w: [Value("charm", "1")], {}, "baseline.measurand_unknown"),
    "grade": (lambda w: [Value("lens_grade", "green")], {}, "baseline.measurand_unknown"),
    "number that is none": (lambda w: [penetration(w, "1e3")], {}, "number.exponent"),
    "off the resolution": (lambda w: [penetration(w, "150.5")], {}, "number.resolution"),
    "aperture of another device": (
        lambda w: [Value("penetration", "150", aperture(other_probe(w)))], {}, "baseline.part_unknown",
    ),
    "no aperture where each is asked": (
        lambda w: [Value("penetration", "150")], {}, "baseline.part_wrong",
    ),
    "no condition where each is asked": (
        lambda w: without_its_condition(w), {}, "baseline.part_wrong",
    ),
    "condition there is none of": (
        lambda w: [penetration(w, "150", condition=uuid.uuid4())], {}, "baseline.part_unknown",
    ),
    "beyond a limit on the value itself": (
        lambda w: [Value("dark_elements", "2", aperture(w.probe))], {}, "baseline.beyond_limit",
    ),
    "second value that is refused": (
        lambda w: [penetration(w, "150"), Value("uniformity", "6.0", aperture(w.probe))], {},
        "baseline.beyond_limit",
    ),
}  # fmt: skip


def without_its_condition(ward):
    devices.set_condition(
        device=ward.probe.uid, name="abdomen", test_frequency_mhz="3.5", sound_speed_m_s="", settings={},
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    return [penetration(ward, "150")]


def other_probe(ward):
    return builders.probe(ward.physicist, Place(site=ward.site), serial="other")


@pytest.mark.parametrize("name", REFUSED)
def test_baseline_is_refused_and_none_is_set(ward, name):
    values, changed, code = REFUSED[name]
    with pytest.raises(DomainError) as refused:
        put(ward, *values(ward), **changed)
    assert refused.value.code == code
    assert not Baseline.objects.exists()


@pytest.mark.parametrize("who", ["admin", "technician", "user"])
def test_only_a_physicist_sets_a_baseline(ward, who):
    with pytest.raises(Forbidden):
        put(ward, penetration(ward, "150"), actor=getattr(ward, who))


def surveyed(ward, on=None, **given):
    """An annual survey of which only some numbers were read."""
    check = checks.open_unplanned(device=ward.probe.uid, procedure=ANNUAL, actor=ward.physicist, at=now())
    phantom = on or builders.phantom(ward.physicist, ward.site)
    laid = checks.sheet(check=check.uid, test_object=phantom.uid, actor=ward.physicist, at=now())
    entries = {item.key: Entry(given[item.spec.code]) for item in laid.items if item.spec.code in given}
    typed = Typed(entries, test_object=phantom.uid, cleaned_before="Wipe", partial_reason="in_use")
    return builders.submitted(check, ward.physicist, typed)


def adopt(ward, submission, **changed):
    given = {"reason": "first survey", "password": builders.PASSWORD, "actor": ward.physicist} | changed
    return baselines.adopt_submission(submission=submission.uid, **given, at=now())


def test_numbers_of_a_submission_become_baselines_where_they_are_compared(ward):
    done = surveyed(ward, penetration="150", grey_visibility="7", ring_down="2.0", lens_grade="green")
    made = adopt(ward, done)
    assert {(row.measurand.code, row.entered) for row in made} == {
        ("penetration", "150"),
        ("grey_visibility", "7"),
    }
    assert {row.from_readings for row in made} == {str(done.uid)}
    assert {str(row.test_object) for row in made} == {str(done.test_object)}


def test_submission_without_such_numbers_gives_no_baseline(ward):
    with pytest.raises(DomainError) as refused:
        adopt(ward, surveyed(ward, lens_grade="green"))
    assert refused.value.code == "baseline.values_missing"


def test_later_check_is_judged_by_the_epoch_in_force_and_the_earlier_verdict_stays(ward):
    on = builders.phantom(ward.physicist, ward.site)
    put(ward, penetration(ward, "150"), test_object=on.uid)
    earlier = surveyed(ward, on, penetration="143").verdicts.get(measurand__code="penetration")
    (second,) = put(ward, penetration(ward, "145"), test_object=on.uid, reason="new lens")
    item = sheet_item(ward)
    assert (item.baseline.id, item.baseline.epoch) == (second.pk, 2)
    earlier.refresh_from_db()
    assert (earlier.verdict, earlier.baseline.epoch) == ("remedial", 1)


def sheet_item(ward):
    check = checks.open_unplanned(device=ward.probe.uid, procedure=ANNUAL, actor=ward.physicist, at=now())
    laid = checks.sheet(check=check.uid, actor=ward.physicist, at=now())
    return next(item for item in laid.items if item.spec.code == "penetration")


def test_baseline_beyond_a_limit_is_named_with_its_criterion(ward):
    with pytest.raises(Conflict) as refused:
        put(ward, Value("dark_elements", "4", aperture(ward.probe)))
    assert refused.value.parameters["criterion"] == "DROP"
    assert refused.value.parameters["level"] == "suspension"
