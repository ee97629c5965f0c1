"""A person's calendar: its address, and what stands in it."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now
from icalendar import Calendar

from qa_tracker.core.errors import NotFound
from qa_tracker.records.models import FeedToken, RoleGrant
from qa_tracker.services import due_days, feed_content, feeds, people
from tests import builders

pytestmark = pytest.mark.django_db
BASE = "https://leadline.invalid"


@pytest.fixture
def ward():
    return builders.ward()


def events(person):
    return Calendar.from_ical(feed_content.as_file(person, BASE, now())).walk("VEVENT")


def test_address_belongs_to_its_person_when_issued(ward):
    token = feeds.issue(actor=ward.technician, at=now())
    assert len(token) == 32
    assert feeds.owner_of(token) == ward.technician
    assert not FeedToken.objects.filter(digest__contains=token).exists()


def test_old_address_ends_when_replaced(ward):
    old, new = (feeds.issue(actor=ward.technician, at=now()) for _ in range(2))
    assert (feeds.owner_of(old), feeds.owner_of(new)) == (None, ward.technician)


def test_address_ends_when_revoked(ward):
    token = feeds.issue(actor=ward.technician, at=now())
    feeds.revoke(actor=ward.technician, at=now())
    assert (feeds.owner_of(token), feeds.issued_at(ward.technician)) == (None, None)
    with pytest.raises(NotFound, match=r"feed\.none"):
        feeds.revoke(actor=ward.technician, at=now())


def test_feed_holds_the_awaited_check_and_a_year_when_monthly(ward):
    found = events(ward.technician)
    assert len(found) in {12, 13, 14}
    assert found[0].decoded("dtstart") == ward.check.due_on
    assert str(found[0]["url"]) == f"{BASE}/checks/{ward.check.uid}/"
    assert len({str(each["uid"]) for each in found}) == len(found)


def test_feed_is_empty_when_the_person_has_no_duty(ward):
    assert events(ward.physicist) == []


def test_feed_is_the_same_bytes_when_nothing_changed(ward):
    at = now()
    assert len({feed_content.as_file(ward.technician, BASE, at) for _ in range(2)}) == 1


def test_uid_stays_when_the_due_day_is_moved(ward):
    before = events(ward.technician)[0]
    to_on = ward.check.due_on + dt.timedelta(days=2)
    due_days.move(check=ward.check.uid, to_on=to_on, reason="List full", actor=ward.physicist, at=now())
    after = events(ward.technician)[0]
    assert (after["uid"], after.decoded("dtstart")) == (before["uid"], to_on)
    assert after["sequence"] > before["sequence"]


def test_done_check_is_left_out_when_signed(ward):
    builders.submitted(ward.check, ward.technician)
    assert str(ward.check.uid) not in str([each["url"] for each in events(ward.technician)])


def test_feed_names_nothing_of_a_site_out_of_sight(ward):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "stranger", "technician", other)
    assert events(stranger) == []


def test_feed_is_empty_when_the_site_went_out_of_sight(ward):
    grant = RoleGrant.objects.get(person=ward.technician)
    gone_on = now().date() - dt.timedelta(days=1)
    assert events(ward.technician)
    people.end_role(grant=grant.uid, until_on=gone_on, reason="Left", actor=ward.admin, at=now())
    assert ward.check.plan.responsible == ward.technician
    assert events(ward.technician) == []
