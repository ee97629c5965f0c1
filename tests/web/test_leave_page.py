"""The page of leave: recorded by oneself or by who plans, shown with the deputy, cancelled again."""

from __future__ import annotations

import datetime as dt

import pytest
from django.urls import reverse
from django.utils.timezone import now

from qa_tracker.records.models import Leave
from tests import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def ward():
    return builders.ward()


def typed(ward, **given):
    days = {"from_on": now().date(), "until_on": now().date() + dt.timedelta(days=5)}
    return days | {"deputy": ward.physicist.uid, "note": "Summer"} | given


def test_technician_records_their_own_leave_and_cancels_it(ward):
    mine = builders.signed_in(ward.technician)
    page = mine.post(reverse("leave"), typed(ward), follow=True).content.decode()
    assert "<bdi>Maren Oduya</bdi> stands in" in page
    made = Leave.objects.get(person=ward.technician)
    page = mine.post(reverse("leave-cancel", args=[made.uid]), follow=True).content.decode()
    assert "Nobody here is to be away." in page


def test_technician_is_not_asked_whose_leave_it_is_and_records_nobody_elses(ward):
    mine = builders.signed_in(ward.technician)
    assert 'name="person"' not in mine.get(reverse("leave")).content.decode()
    mine.post(reverse("leave"), typed(ward, person=ward.user.uid))
    assert Leave.objects.get().person == ward.technician


def test_physicist_records_the_leave_of_others(ward):
    mine = builders.signed_in(ward.physicist)
    given = typed(ward, person=ward.technician.uid, deputy=ward.physicist.uid)
    page = mine.post(reverse("leave"), given, follow=True).content.decode()
    assert "Ifeoma Castellane" in page
    assert Leave.objects.get().person == ward.technician


def test_refusals_stand_beside_their_fields_with_what_was_typed(ward):
    given = typed(ward, deputy=ward.technician.uid)
    answer = builders.signed_in(ward.technician).post(reverse("leave"), given)
    assert answer.status_code == 422
    assert "Nobody stands in for themself." in answer.content.decode()
    assert "Summer" in answer.content.decode()


def test_physicist_of_the_whole_group_is_offered_deputies_of_each_site(ward):
    page = builders.signed_in(ward.physicist).get(reverse("leave")).content.decode()
    chosen = page[page.index('name="deputy"') :]
    assert str(ward.technician.uid) in chosen
    assert str(ward.admin.uid) not in chosen
