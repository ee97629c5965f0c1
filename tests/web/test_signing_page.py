"""Signing: exactly what is shown is recorded, once, by the person who knows the password."""

from __future__ import annotations

import re

import pytest

import builders
from qa_tracker.records.models import Draft, Fault, Submission

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def client(ward):
    return builders.signed_in(ward.technician)


def typed(ward, client, **given: str) -> None:
    """Type a check in order, save for what is given, up to the signing page."""
    entries = builders.answers(ward.check, ward.technician, **given)
    inputs = {key: entry.text for key, entry in entries.items()}
    inputs |= {"cleaned_how": "wipe", "cleaned_by": "Ifeoma", "revision": "0", "then": "sign"}
    inputs |= {name: value for name, value in given.items() if name in ("partial_reason", "remark")}
    answer = client.post(f"/checks/{ward.check.uid}/draft/", inputs)
    assert answer.status_code == 302, answer.content.decode()


def signing_form(ward, client) -> dict[str, str]:
    page = client.get(f"/checks/{ward.check.uid}/sign/").content.decode()
    inputs = dict(re.findall(r'name="(form_uid|shown_sha256)" value="([^"]+)"', page))
    return inputs | {"password": builders.PASSWORD}


def sign(ward, client, **more: str):
    return client.post(f"/checks/{ward.check.uid}/sign/", signing_form(ward, client) | more)


def test_the_page_shows_every_value_with_its_verdict(ward, client):
    typed(ward, client, case_grade="amber", reverberation_depth="42,5")
    page = client.get(f"/checks/{ward.check.uid}/sign/").content.decode()
    assert "42,5\N{NO-BREAK SPACE}mm" in page
    assert "because of Case" in page
    assert "tell the lead sonographer today" in page


def test_signing_records_what_was_typed_and_ends_the_draft(ward, client):
    typed(ward, client, reverberation_depth="42,5")
    assert sign(ward, client).status_code == 302
    submission = Submission.objects.get()
    assert submission.readings.get(measurand__code="reverberation_depth").entered == "42,5"
    assert submission.performed_by == ward.technician
    assert not Draft.objects.exists()


def test_the_same_form_twice_is_one_submission(ward, client):
    typed(ward, client)
    form = signing_form(ward, client)
    answers = [client.post(f"/checks/{ward.check.uid}/sign/", form) for _ in range(2)]
    assert [answer.status_code for answer in answers] == [302, 302]
    assert answers[0]["Location"] == answers[1]["Location"]
    assert Submission.objects.count() == 1


def test_a_wrong_password_records_nothing_and_keeps_the_page(ward, client):
    typed(ward, client)
    answer = sign(ward, client, password="not mine at all")
    assert answer.status_code == 422
    assert 'id="refusal_password"' in answer.content.decode()
    assert Draft.objects.exists()
    assert not Submission.objects.exists()


def test_something_else_than_what_was_shown_is_not_signed(ward, client):
    typed(ward, client)
    form = signing_form(ward, client)
    draft = Draft.objects.get()
    changed = client.post(
        f"/checks/{ward.check.uid}/draft/",
        builders.json.loads(draft.content) | {"remark": "typed in another window", "revision": "1"},
    )
    assert changed.status_code == 302
    answer = client.post(f"/checks/{ward.check.uid}/sign/", form)
    assert answer.status_code == 422
    assert not Submission.objects.exists()


def test_quarantine_is_offered_ticked_when_the_verdict_is_suspension(ward, client):
    typed(ward, client, lens_grade="red")
    page = client.get(f"/checks/{ward.check.uid}/sign/").content.decode()
    assert re.search(r'name="quarantine"[^>]* checked', page)


def test_signing_with_quarantine_takes_the_device_out_of_use(ward, client):
    typed(ward, client, lens_grade="red")
    sign(ward, client, quarantine="yes")
    ward.probe.refresh_from_db()
    assert ward.probe.state == "quarantined"
    assert Fault.objects.get().grade == "suspension"


def test_a_check_may_be_signed_in_part_with_a_reason(ward, client):
    typed(ward, client, lens_grade="red", reverberation_depth="", partial_reason="in_theatre")
    page = client.get(f"/checks/{ward.check.uid}/sign/").content.decode()
    assert "could not be tested: in theatre" in page
    sign(ward, client)
    assert Submission.objects.get().not_tested.count() == 1


def test_the_signing_page_leads_back_to_entering_when_nothing_is_typed(ward, client):
    answer = client.get(f"/checks/{ward.check.uid}/sign/")
    assert answer["Location"] == f"/checks/{ward.check.uid}/enter/"


def test_after_signing_the_next_check_on_the_scanner_is_offered(ward, client):
    other = builders.probe(
        ward.physicist,
        builders.Place(site=ward.site, location=ward.room, scanner=ward.scanner),
        serial="L9-3301",
        model="L9",
        array_kind="linear",
    )
    following = builders.plan(other, builders.MONTHLY, ward.technician, ward.physicist)
    typed(ward, client)
    page = client.get(sign(ward, client)["Location"]).content.decode()
    assert f"/checks/{following.uid}/enter/" in page
    assert "Next on this scanner" in page


def test_a_check_signed_meanwhile_by_another_form_is_refused_in_words(ward, client):
    typed(ward, client)
    form = signing_form(ward, client)
    builders.submitted(ward.check, ward.physicist)
    answer = client.post(f"/checks/{ward.check.uid}/sign/", form)
    assert answer.status_code == 409
    assert Submission.objects.count() == 1
