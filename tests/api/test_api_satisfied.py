"""What the API says of a check that another one satisfied, and of one accepted outside its window."""

from __future__ import annotations

import datetime as dt
import uuid

import pytest
from django.utils.timezone import now

from qa_tracker.services import checks
from tests import builders
from tests.api.world import Api

MONTHLY = builders.MONTHLY


@pytest.fixture
def ward(db):
    return builders.ward()


def test_each_check_names_the_other_when_an_unplanned_one_satisfies_it(ward):
    done = checks.open_unplanned(device=ward.probe.uid, procedure=MONTHLY, actor=ward.technician, at=now())
    builders.submitted(done, ward.technician)
    api = Api(ward.technician)
    monthly, other = api.get(f"/checks/{ward.check.uid}"), api.get(f"/checks/{done.uid}")
    assert (monthly["state"], monthly["satisfied_by"], monthly["submissions"]) == (
        "submitted",
        str(done.uid),
        [],
    )
    assert (other["satisfied_by"], other["satisfies"]) == (None, [str(ward.check.uid)])


def test_check_is_accepted_outside_its_window_when_a_physicist_gives_the_reason(ward):
    probe = builders.probe(ward.physicist, builders.Place(site=ward.site), serial="C5-3301")
    due_on = now().date() + dt.timedelta(days=20)
    check = builders.plan(probe, MONTHLY, ward.technician, ward.physicist, due_on)
    answers = builders.answers(check, ward.physicist)
    units = {key: "mm" if key.startswith("reverberation_depth") else "1" for key in answers}
    entries = {key: {"text": each.text, "unit": units[key]} for key, each in answers.items()}
    typed, api, path = (
        {"entries": entries, "cleaned_before": "Wipe"},
        Api(ward.physicist),
        f"/checks/{check.uid}",
    )
    assert api.post(f"{path}/judge", typed, 422)["code"] == "check.outside_reason_missing"
    typed["outside_reason"] = "The room closes"
    shown = api.post(f"{path}/judge", typed, 200)["shown_sha256"]
    signed = {"form_uid": str(uuid.uuid4()), "shown_sha256": shown, "password": builders.PASSWORD}
    assert api.post(f"{path}/submissions", typed | signed)["reason"] == "The room closes"
