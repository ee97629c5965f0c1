"""Leave and its deputy: who may record it, which days, and who may stand in."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError, Forbidden, NotFound
from qa_tracker.records.models import Leave
from qa_tracker.services import away
from tests import builders


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def take(ward, first=1, last=8, **changed):
    today = now().date()
    given = {"person": ward.technician, "deputy": ward.physicist, "actor": ward.technician} | changed
    days = {"from_on": today + dt.timedelta(days=first), "until_on": today + dt.timedelta(days=last)}
    return away.take_leave(**days, **given, at=now())


def test_person_records_their_own_leave_and_who_plans_that_of_others(ward):
    assert take(ward).deputy == ward.physicist
    assert take(ward, 20, 21, actor=ward.physicist).person == ward.technician


def test_others_leave_is_refused_to_who_plans_nothing(ward):
    with pytest.raises(Forbidden):
        take(ward, person=ward.user, actor=ward.technician)


REFUSED = {
    "ends before it begins": ({"first": 3, "last": 2}, "leave.ends_before_start"),
    "over": ({"first": -9, "last": -2}, "leave.past"),
    "longer than a year": ({"first": 0, "last": 366}, "leave.too_long"),
}


@pytest.mark.parametrize(("days", "code"), REFUSED.values(), ids=REFUSED)
def test_days_that_make_no_leave_are_refused(ward, days, code):
    with pytest.raises(DomainError) as refused:
        take(ward, **days)
    assert refused.value.code == code


@pytest.mark.parametrize(("first", "last"), [(8, 9), (0, 1), (3, 4), (0, 20)])
def test_leave_that_overlaps_another_is_refused_with_its_days(ward, first, last):
    made = take(ward)
    with pytest.raises(DomainError) as refused:
        take(ward, first, last)
    assert (refused.value.code, refused.value.parameters["until_on"]) == ("leave.overlaps", made.until_on)


def test_leave_may_begin_the_day_after_another_and_in_place_of_a_cancelled_one(ward):
    take(ward, 9, 10)
    made = take(ward)
    away.cancel_leave(leave=made.uid, actor=ward.physicist, at=now())
    take(ward)
    assert Leave.objects.filter(cancelled_at=None).count() == 2


@pytest.mark.parametrize(
    ("who", "code"), [("technician", "leave.own_deputy"), ("admin", "leave.deputy_may_not_enter")]
)
def test_deputy_who_cannot_stand_in_is_refused(ward, who, code):
    with pytest.raises(DomainError) as refused:
        take(ward, deputy=getattr(ward, who))
    assert (refused.value.code, refused.value.field) == (code, "deputy")


def test_leave_is_cancelled_once_and_by_nobody_out_of_sight(ward):
    made = take(ward)
    far = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "far", "physicist", far, "Far Away")
    with pytest.raises(NotFound):
        away.cancel_leave(leave=made.uid, actor=stranger, at=now())
    away.cancel_leave(leave=made.uid, actor=ward.technician, at=now())
    with pytest.raises(DomainError) as refused:
        away.cancel_leave(leave=made.uid, actor=ward.technician, at=now())
    assert refused.value.code == "leave.over"
