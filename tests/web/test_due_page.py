"""What is due: where it stands, what to do about it, and what an empty page says."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

import builders
from qa_tracker.services import states

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


def due(person, query: str = "") -> str:
    return builders.signed_in(person).get(f"/{query}").content.decode()


def test_a_due_check_is_listed_with_room_scanner_and_a_way_to_enter_it(ward):
    page = due(ward.technician)
    assert "Ultrasound 2" in page
    assert "Ostrigard C5 C5-2207" in page
    assert "on OG-70 70-1188" in page
    assert "Due today" in page
    assert f"/checks/{ward.check.uid}/enter/" in page


def test_who_may_not_enter_sees_the_check_without_the_link(ward):
    page = due(ward.user)
    assert "Ostrigard C5 C5-2207" in page
    assert "/enter/" not in page


def test_a_quarantined_device_is_said_to_be_so(ward):
    states.quarantine(device=ward.probe.uid, seen="Cut cable", actor=ward.user, at=now())
    assert "the device is quarantined" in due(ward.technician)


def test_a_check_that_opens_next_month_is_not_listed(ward):
    later = builders.probe(ward.physicist, builders.Place(site=ward.site), serial="L9-3301", model="L9")
    builders.plan(
        later, builders.MONTHLY, ward.technician, ward.physicist, now().date() + dt.timedelta(days=40)
    )
    assert "L9-3301" not in due(ward.technician)


def test_mine_hides_what_others_answer_for_and_says_how_much(ward):
    page = due(ward.physicist, "?who=me")
    assert "C5-2207" not in page
    assert "1 more is hidden by what you chose" in page


def test_another_sites_checks_are_not_shown(ward):
    elsewhere = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "dragic", "technician", elsewhere)
    assert "C5-2207" not in due(stranger)


def test_an_empty_installation_says_what_to_do_first():
    admin = builders.first_administrator()
    physicist = builders.person(admin, "oduya", "physicist", None)
    assert "no procedure is adopted" in due(physicist)
    builders.publish()
    builders.adopt_everything(physicist)
    assert "Register the first scanner" in due(physicist)


def test_the_page_costs_the_same_with_more_checks(ward, django_assert_max_num_queries):
    client = builders.signed_in(ward.technician)
    with django_assert_max_num_queries(60) as few:
        client.get("/")
    for number in range(4):
        held = builders.probe(
            ward.physicist,
            builders.Place(site=ward.site, location=ward.room, scanner=ward.scanner),
            serial=f"C5-30{number}",
        )
        builders.plan(held, builders.MONTHLY, ward.technician, ward.physicist)
    with django_assert_max_num_queries(len(few)):
        client.get("/")
