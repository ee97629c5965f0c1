"""The page of the year ahead: hours by week and person, and moving what was chosen."""

from __future__ import annotations

import datetime as dt

import pytest
from django.urls import reverse

from qa_tracker.records.models import Check
from qa_tracker.services.devices import Place
from tests import builders

pytestmark = pytest.mark.django_db
ADDRESS = "/year-ahead/"


@pytest.fixture
def ward():
    ward = builders.ward()
    due_on = dt.datetime.now(builders.LONDON).date() + dt.timedelta(days=9)
    for serial in ("Y1", "Y2"):
        device = builders.probe(ward.physicist, Place(site=ward.site), serial=serial)
        builders.plan(device, builders.MONTHLY, ward.technician, ward.physicist, due_on)
    return ward


def offered(ward):
    shown = builders.signed_in(ward.physicist).get(ADDRESS).content.decode()
    return [part.split('"')[0] for part in shown.split('name="move" value="')[1:]]


def test_page_shows_hours_of_each_person_and_is_linked_from_due(ward):
    browser = builders.signed_in(ward.technician)
    shown = browser.get(ADDRESS).content.decode()
    assert "<bdi>Ifeoma Castellane</bdi>" in shown
    assert 'name="move"' not in shown
    assert ADDRESS in browser.get(reverse("due")).content.decode()


def test_chosen_due_days_are_moved_together_with_one_reason(ward):
    values = offered(ward)
    assert values
    answer = builders.signed_in(ward.physicist).post(ADDRESS, {"move": values, "reason": "Evened out"})
    assert answer.status_code == 302
    assert Check.objects.filter(slot_on__isnull=False).count() == len(values)


@pytest.mark.parametrize("typed", [{"reason": "x"}, {"move": ["nonsense"], "reason": "x"}, {"move": "first"}])
def test_moving_nothing_or_without_a_reason_is_refused_on_the_page(ward, typed):
    if typed.get("move") == "first":
        typed = {"move": offered(ward)[:1]}
    answer = builders.signed_in(ward.physicist).post(ADDRESS, typed)
    assert answer.status_code == 422
    assert not Check.objects.filter(slot_on__isnull=False).exists()
