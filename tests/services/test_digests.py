"""Which mails are made of the notices owed, and when: one digest a day, at once what must not wait."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now
from notice_ground import WEDNESDAY, make, moment, owe, quiet, round_the_clock

from qa_tracker.records.models import Digest, NoticeMail
from qa_tracker.records.queries.mail import pending_mail
from qa_tracker.services import digests, holds, plans
from qa_tracker.services.plans import Recurrence
from tests import builders

WARD = [builders.MONTHLY, "electrical-safety"], builders.MONTHLY
SUNDAY, MONDAY = WEDNESDAY + dt.timedelta(days=4), WEDNESDAY + dt.timedelta(days=5)
TOMORROW = WEDNESDAY + dt.timedelta(days=1)


def keys() -> list[str]:
    return [key.partition("/")[0] for key in Digest.objects.order_by("id").values_list("key", flat=True)]


def electrical(ward):
    recurrence = Recurrence("FREQ=YEARLY", "calendar", now().date(), before_days=7, grace_days=7)
    given = {"device": ward.scanner.uid, "procedure": "electrical-safety", "recurrence": recurrence}
    made = plans.make(**given, responsible=ward.technician, actor=ward.physicist, at=now())
    return made.checks.get()


def test_digest_carries_all_that_is_owed_and_comes_once_a_day(shared_ward):
    other = builders.plan(
        shared_ward.scanner, builders.MONTHLY, shared_ward.technician, shared_ward.physicist
    )
    for check in (shared_ward.check, other):
        owe(check, shared_ward.technician, "due")
    assert [make(moment(hour)) for hour in (6, 7, 8)] == [0, 1, 0]
    assert Digest.objects.get().notices.count() == 2


def test_what_is_owed_after_the_digest_waits_for_the_next(shared_ward):
    owe(shared_ward.check, shared_ward.technician, "due")
    make(moment(7))
    owe(shared_ward.check, shared_ward.technician, "late")
    assert [make(moment(23)), make(moment(6, TOMORROW)), make(moment(7, TOMORROW))] == [0, 0, 1]
    assert len(set(Digest.objects.values_list("message_id", flat=True))) == 2


def test_quiet_hours_delay_the_digest_and_drop_nothing(shared_ward):
    quiet(shared_ward, 22, 9)
    owe(shared_ward.check, shared_ward.technician, "due")
    assert [make(moment(7)), make(moment(8)), make(moment(9))] == [0, 0, 1]


def test_suspension_is_mailed_at_once(shared_ward):
    owe(shared_ward.check, shared_ward.technician, "due")
    owe(shared_ward.check, shared_ward.physicist, "suspension", "physicist")
    make(moment(7))
    owe(shared_ward.check, shared_ward.technician, "suspension", "physicist")
    assert make(moment(15)) == 1
    assert sorted(keys()) == ["digest", "suspension", "suspension"]


@pytest.mark.parametrize(("day", "hour"), [(WEDNESDAY, 3), (SUNDAY, 12)])
def test_suspension_in_a_room_that_works_round_the_clock_waits_for_nothing(shared_ward, day, hour):
    quiet(shared_ward)
    round_the_clock(shared_ward)
    owe(shared_ward.check, shared_ward.technician, "suspension", "physicist")
    assert make(moment(hour, day)) == 1


def test_suspension_elsewhere_waits_for_the_first_hour_that_is_worked(shared_ward):
    quiet(shared_ward)
    owe(shared_ward.check, shared_ward.technician, "suspension", "physicist")
    assert [make(moment(12, SUNDAY)), make(moment(3, MONDAY)), make(moment(7, MONDAY))] == [0, 0, 1]


def test_electrical_check_is_mailed_at_once_when_overdue_and_not_before(shared_ward):
    check = electrical(shared_ward)
    make(moment(7))
    owe(check, shared_ward.technician, "late")
    assert make(moment(5)) == 0
    owe(check, shared_ward.technician, "overdue")
    assert make(moment(5)) == 1
    assert keys() == ["electrical"]
    assert NoticeMail.objects.filter(digest=None).count() == 1


def test_electrical_check_of_a_room_round_the_clock_is_mailed_in_the_quiet_hours(shared_ward):
    quiet(shared_ward)
    check = electrical(shared_ward)
    owe(check, shared_ward.technician, "overdue")
    assert make(moment(3)) == 0
    round_the_clock(shared_ward)
    assert make(moment(3)) == 1


def test_highest_level_of_the_ladder_is_mailed_at_once_but_not_in_the_quiet_hours(shared_ward):
    quiet(shared_ward)
    round_the_clock(shared_ward)
    owe(shared_ward.check, shared_ward.technician, "t1", "lead")
    owe(shared_ward.check, shared_ward.technician, "t2", "physicist")
    assert [make(moment(3)), make(moment(7))] == [0, 1]
    assert keys() == ["digest"]
    owe(electrical(shared_ward), shared_ward.physicist, "due")
    owe(builders.plan(shared_ward.scanner, builders.MONTHLY, shared_ward.technician, shared_ward.physicist),
        shared_ward.technician, "t2", "physicist")  # fmt: skip
    make(moment(15))
    assert "ladder" in keys()


def test_many_at_once_are_one_mail(shared_ward):
    checks = [
        builders.plan(shared_ward.scanner, builders.MONTHLY, shared_ward.technician, shared_ward.physicist)
    ]
    for check in (shared_ward.check, *checks):
        owe(check, shared_ward.technician, "suspension", "physicist")
    assert make(moment(3)) == 1
    assert Digest.objects.get().notices.count() == 2


def test_mail_that_waits_when_its_notices_are_snoozed_goes_on_waiting(shared_ward):
    until_on = dt.datetime.now(builders.LONDON).date() + dt.timedelta(days=3)
    after = moment(9, until_on)
    while after.weekday() > 4:
        after += dt.timedelta(days=1)
    owe(shared_ward.check, shared_ward.technician, "due")
    told = {"check": shared_ward.check.uid, "reason": "Away", "until_on": until_on}
    hold = holds.snooze(**told, actor=shared_ward.technician, at=now())
    assert [make(hold.until_at - dt.timedelta(days=1, hours=-9)), make(after)] == [0, 1]


def test_person_without_a_site_gets_the_digest_by_utc(shared_ward):
    owe(shared_ward.check, shared_ward.physicist, "due")
    assert [make(moment(7)), make(moment(8))] == [0, 1]


def test_notices_another_sweep_has_taken_meanwhile_make_no_empty_mail(shared_ward, monkeypatch):
    owe(shared_ward.check, shared_ward.technician, "due")
    stale = pending_mail()
    make(moment(7))
    monkeypatch.setattr(digests, "pending_mail", lambda: stale)
    assert make(moment(7, TOMORROW)) == 0
    assert Digest.objects.count() == 1
