"""Judging without writing, signing once, and what is refused: units, other contents, other forms."""

from __future__ import annotations

import datetime as dt
import uuid

import pytest
from django.db import transaction
from django.utils.timezone import now

from qa_tracker.records.models import Submission
from tests import builders
from tests.api import operations
from tests.api.world import Api

PASSWORD = builders.PASSWORD


@pytest.fixture
def technician(world):
    return world.near["technician"]


@pytest.fixture
def monthly(world, technician):
    """A monthly check of the spare probe: its address and everything given for it."""
    check = technician.post(f"/devices/{world.spare.uid}/checks", {"procedure": "monthly-in-air"})["uid"]
    items = technician.get(f"/checks/{check}/items")["items"]
    good = {"grade": "green", "yes_no": "yes", "number": "12.5", "count": "0", "text": ""}
    graded = {item["key"]: item["grades"][0]["value"] for item in items if item["kind"] == "grade"}
    entries = {
        item["key"]: {"text": graded.get(item["key"], good[item["kind"]]), "unit": item["unit"]}
        for item in items
        if item["required"]
    }
    return f"/checks/{check}", {"entries": entries, "cleaned_before": "Wipe, Ifeoma, 12:10"}


def key_of(typed, code):
    return next(key for key in typed["entries"] if key.startswith(f"{code}."))


def signed(technician, path, typed, **more):
    shown = technician.post(f"{path}/judge", typed, 200)["shown_sha256"]
    return typed | {"shown_sha256": shown, "password": PASSWORD, "form_uid": str(uuid.uuid4())} | more


def test_judging_writes_nothing_and_says_each_verdict_in_words(technician, monthly):
    path, typed = monthly
    typed["entries"][key_of(typed, "lens_grade")]["text"] = "red"
    before = Submission.objects.count()
    judged = technician.post(f"{path}/judge", typed, 200)
    lens = next(item for item in judged["items"] if item["measurand"] == "lens_grade")
    assert (judged["verdict"], judged["suggests_quarantine"]) == ("suspension", True)
    assert lens["verdict"]["criterion"]["code"] == "PROBE-GRADE"
    assert "suspension" in lens["verdict"]["sentence"]
    assert lens["verdict"]["instruction"].startswith("Take it out of the room")
    assert Submission.objects.count() == before


def test_reading_comes_back_exactly_as_entered(technician, monthly):
    path, typed = monthly
    typed["entries"][key_of(typed, "reverberation_depth")]["text"] = "12,50"
    made = technician.post(f"{path}/submissions", signed(technician, path, typed))
    depth = next(each for each in made["readings"] if each["measurand"] == "reverberation_depth")
    assert (depth["entered"], depth["unit"], depth["origin"]) == ("12,50", "mm", "api")


def test_same_form_twice_is_one_submission_with_the_same_answer(technician, monthly):
    path, typed = monthly
    body = signed(technician, path, typed)
    first, second = (technician.raw("post", f"{path}/submissions", body) for _ in range(2))
    assert (first.status_code, first.content) == (second.status_code, second.content)
    assert len(technician.get(path)["submissions"]) == 1


@pytest.mark.parametrize("role", ["technician", "lead"])
def test_form_of_another_check_or_person_is_refused(world, technician, monthly, role):
    path, typed = monthly
    used = signed(technician, path, typed)
    technician.post(f"{path}/submissions", used)
    other = operations.signed(world) | {"form_uid": used["form_uid"]}
    refused = world.near[role].post(f"/checks/{world.waiting.uid}/submissions", other, 409)
    assert (refused["code"], refused["field"]) == ("check.form_used", "form_uid")
    assert technician.get(f"/checks/{world.waiting.uid}")["submissions"] == []


@pytest.mark.parametrize(
    ("given", "code"),
    [
        pytest.param({"text": "1.25", "unit": "cm"}, "reading.unit_wrong", id="another unit"),
        pytest.param({"text": "12.5 mm", "unit": "mm"}, "number.unit", id="unit inside the text"),
        pytest.param({"text": "1e999", "unit": "mm"}, "number.exponent", id="exponent"),
        pytest.param({"text": "12.53", "unit": "mm"}, "number.resolution", id="finer than the steps"),
        pytest.param(
            {"text": "12.5", "unit": "mm", "qualifier": ">"}, "reading.qualifier_not_allowed", id=">"
        ),
        pytest.param({}, "reading.missing", id="nothing"),
        pytest.param({"not_tested": "raining"}, "reading.reason_unknown", id="no such reason"),
    ],
)
def test_reading_is_refused_beside_its_item_when_it_can_not_be_used(technician, monthly, given, code):
    path, typed = monthly
    key = key_of(typed, "reverberation_depth")
    typed["entries"][key] = given
    refused = technician.post(f"{path}/judge", typed, 422)
    assert [(each["code"], each["field"]) for each in refused["errors"]] == [(code, key)]


def test_number_without_its_unit_is_refused(technician, monthly):
    path, typed = monthly
    typed["entries"][key_of(typed, "reverberation_depth")] = {"text": "12.5"}
    assert technician.post(f"{path}/judge", typed, 422)["errors"][0]["code"] == "request.malformed"


@pytest.mark.parametrize(
    ("change", "status", "code"),
    [
        pytest.param({"password": "wrong"}, 422, "signature.password_wrong", id="password"),
        pytest.param({"remark": "changed since"}, 422, "signature.shown_differs", id="something else"),
        pytest.param({"measured_at": "2099-01-01T00:00:00Z"}, 422, "check.measured_in_future", id="future"),
        pytest.param({"shown_sha256": "x"}, 422, "several", id="no hash"),
    ],
)
def test_signature_is_refused_when_it_is_not_on_what_was_shown(technician, monthly, change, status, code):
    path, typed = monthly
    refused = technician.post(f"{path}/submissions", signed(technician, path, typed, **change), status)
    assert code in {refused["code"], refused["errors"][0]["code"]}
    assert technician.get(path)["submissions"] == []


def test_moment_is_written_in_utc_to_the_microsecond_when_given_with_an_offset(technician, monthly):
    path, typed = monthly
    measured_at = (now() - dt.timedelta(hours=1)).replace(microsecond=123456)
    typed["measured_at"] = measured_at.astimezone(dt.timezone(dt.timedelta(hours=2))).isoformat()
    made = technician.post(f"{path}/submissions", signed(technician, path, typed))
    assert made["measured_at"] == f"{measured_at:%Y-%m-%dT%H:%M:%S}.123456Z"


def test_nobody_countersigns_their_own_work(world):
    builders.give_role(world.ward.admin, world.ward.technician, "physicist", world.ward.site)
    own = Api(world.ward.technician)
    with transaction.atomic():
        refused = own.post(f"/checks/{world.ward.check.uid}/countersignatures", operations.second(world), 403)
    assert refused["code"] == "check.own_work"
