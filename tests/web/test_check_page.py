"""A check that was done: what its page shows, and who may sign it a second time."""

from __future__ import annotations

import re

import pytest

import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def address(ward):
    return f"/checks/{ward.check.uid}"


@pytest.fixture
def done(ward):
    return builders.submitted(ward.check, ward.technician, lens_grade="amber", reverberation_depth="42,5")


def page(person, address: str, **form: str):
    client = builders.signed_in(person)
    return client.post(address, form) if form else client.get(address)


def test_the_page_shows_values_sentences_and_who_signed(ward, address, done):
    shown = page(ward.user, f"{address}/").content.decode()
    assert "42,5\N{NO-BREAK SPACE}mm" in shown
    assert "Ifeoma Castellane" in shown
    assert "What to do now" in shown
    assert "second signature" not in shown.lower()


def test_the_physicist_countersigns(ward, address, done):
    form = {"shown_sha256": done.shown_sha256, "password": builders.PASSWORD, "remark": ""}
    assert page(ward.physicist, f"{address}/countersign/", **form).status_code == 302
    ward.check.refresh_from_db()
    assert ward.check.state == "countersigned"


def test_nobody_countersigns_their_own_work(ward, address):
    submission = builders.submitted(ward.check, ward.physicist)
    shown = page(ward.physicist, f"{address}/").content.decode()
    assert "disabled>Countersign</button>" in shown
    form = {"shown_sha256": submission.shown_sha256, "password": builders.PASSWORD}
    assert page(ward.physicist, f"{address}/countersign/", **form).status_code == 422
    ward.check.refresh_from_db()
    assert ward.check.state == "submitted"


def test_sending_back_without_a_remark_is_refused_beside_the_field(ward, address, done):
    form = {"shown_sha256": done.shown_sha256, "password": builders.PASSWORD, "remark": " "}
    answer = page(ward.physicist, f"{address}/send-back/", **form)
    assert answer.status_code == 422
    assert 'id="refusal_remark"' in answer.content.decode()


def test_a_remark_is_kept_when_the_password_is_wrong(ward, address, done):
    form = {"shown_sha256": done.shown_sha256, "password": "wrong", "remark": "Zone 3 again, please"}
    answer = page(ward.physicist, f"{address}/send-back/", **form)
    assert "Zone 3 again, please" in answer.content.decode()


def test_what_is_sent_back_can_be_entered_again(ward, address, done):
    form = {"shown_sha256": done.shown_sha256, "password": builders.PASSWORD, "remark": "Zone 3 again"}
    page(ward.physicist, f"{address}/send-back/", **form)
    assert page(ward.technician, f"{address}/enter/").status_code == 200


def test_a_technician_may_not_countersign_by_address(ward, address, done):
    other = builders.person(ward.admin, "achterberg", "technician", ward.site)
    form = {"shown_sha256": done.shown_sha256, "password": builders.PASSWORD}
    assert page(other, f"{address}/countersign/", **form).status_code == 422
    ward.check.refresh_from_db()
    assert ward.check.state == "submitted"


def test_a_check_that_does_not_conform_waits_for_the_physicist(ward, address, done):
    shown = page(ward.physicist, "/checks/").content.decode()
    waiting, _, listed = shown.partition(">Done<")
    assert f"{address}/" in waiting
    assert f"{address}/" in listed


def test_the_list_is_narrowed_by_verdict(ward, address, done):
    assert f"{address}/" in page(ward.user, "/checks/?verdict=remedial").content.decode()
    none = page(ward.user, "/checks/?verdict=conforming").content.decode()
    assert f"{address}/" not in none
    assert "fits what you chose" in none


def test_an_attempt_is_recorded_and_the_check_stays_due(ward, address):
    answer = page(ward.technician, f"{address}/not-tested/", reason="in_use", remark="clinic")
    assert answer["Location"] == "/"
    shown = page(ward.technician, f"{address}/").content.decode()
    assert "clinic" in shown
    assert f"{address}/enter/" in shown


def test_an_unknown_reason_is_refused_and_the_remark_kept(ward, address):
    answer = page(ward.technician, f"{address}/not-tested/", reason="tired", remark="clinic")
    assert answer.status_code == 422
    assert 'value="clinic"' in answer.content.decode()


def test_excusing_needs_a_reason_and_the_role(ward, address):
    assert page(ward.physicist, f"{address}/excuse/", reason=" ").status_code == 422
    assert page(ward.technician, f"{address}/excuse/", reason="holiday").status_code == 422
    assert page(ward.physicist, f"{address}/excuse/", reason="Room closed").status_code == 302


def test_an_unplanned_check_leads_to_its_entry_page(ward):
    address = f"/devices/{ward.probe.uid}/check/{builders.MONTHLY}/"
    answer = page(ward.technician, address, go="1")
    assert answer["Location"].endswith("/enter/")
    assert page(ward.technician, answer["Location"]).status_code == 200


def test_the_list_is_paged_by_moment_and_key(ward, address, done, monkeypatch):
    other = builders.probe(ward.physicist, builders.Place(site=ward.site), serial="C5-3301")
    following = builders.plan(other, builders.MONTHLY, ward.technician, ward.physicist)
    builders.submitted(following, ward.technician)
    monkeypatch.setattr("qa_tracker.web.views.checks.PAGE", 1)
    first = page(ward.user, "/checks/").content.decode()
    assert f"/checks/{following.uid}/" in first
    assert f"{address}/" not in first
    later = re.search(r'href="(\?before=[^"]+)"', first)
    assert f"{address}/" in page(ward.user, f"/checks/{later[1]}").content.decode()


@pytest.mark.parametrize("before", ["x", "1-", "9" * 40 + "-1", "１-１"])
def test_a_page_key_that_is_none_begins_at_the_first_page(ward, address, done, before):
    assert f"{address}/" in page(ward.user, f"/checks/?before={before}").content.decode()
