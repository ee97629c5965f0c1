"""Holds: who may acknowledge or snooze what, until when, and how a hold ends."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, Forbidden, Invalid
from qa_tracker.records.models import NoticeHold
from qa_tracker.services import checks, excuses, holds
from tests import builders

WARD = [builders.MONTHLY, "electrical-safety"], builders.MONTHLY
FRIDAY = {"reason": "Probe is at the maker's until Friday"}


def in_days(days: int) -> dt.date:
    return dt.datetime.now(builders.LONDON).date() + dt.timedelta(days=days)


def acknowledged(ward, actor, *, days=3, **given):
    told = {**FRIDAY, "check": ward.check.uid, "until_on": in_days(days)} | given
    return holds.acknowledge(**told, actor=actor, at=now())


def code_of(call, *args, **given) -> str:
    with pytest.raises((Invalid, Conflict, Forbidden)) as refused:
        call(*args, **given)
    return refused.value.code


def test_responsible_person_acknowledges_until_a_day_begins_at_the_site(shared_ward):
    hold = acknowledged(shared_ward, shared_ward.technician)
    assert hold.until_at.astimezone(builders.LONDON).time() == dt.time(0)
    (held,) = holds.holds_of([shared_ward.check.pk], now())[shared_ward.check.pk]
    assert (held.kind, held.person, held.reason) == ("acknowledged", "Ifeoma Castellane", FRIDAY["reason"])


def test_hold_holds_no_longer_at_its_end(shared_ward):
    hold = acknowledged(shared_ward, shared_ward.physicist)
    assert holds.holds_of([shared_ward.check.pk], hold.until_at) == {}
    assert holds.holds_of([shared_ward.check.pk], hold.until_at - dt.timedelta(seconds=1)) != {}


def test_hold_changes_nothing_about_the_check(shared_ward):
    before = (shared_ward.check.state, shared_ward.check.version, shared_ward.check.due_at)
    acknowledged(shared_ward, shared_ward.technician)
    shared_ward.check.refresh_from_db()
    assert (shared_ward.check.state, shared_ward.check.version, shared_ward.check.due_at) == before


@pytest.mark.parametrize("who", ["user", "admin"])
def test_who_is_neither_responsible_nor_lead_nor_physicist_may_not_acknowledge(shared_ward, who):
    assert code_of(acknowledged, shared_ward, getattr(shared_ward, who)) == "role.not_allowed"


def test_who_may_not_enter_the_check_may_not_snooze_it(shared_ward):
    given = {**FRIDAY, "check": shared_ward.check.uid, "until_on": in_days(2), "at": now()}
    assert holds.snooze(**given, actor=shared_ward.technician).kind == "snoozed"
    assert code_of(holds.snooze, **given, actor=shared_ward.user) == "role.not_allowed"


@pytest.mark.parametrize(
    ("days", "code"), [(0, "hold.end_past"), (-1, "hold.end_past"), (32, "hold.end_too_far")]
)
def test_end_lies_between_tomorrow_and_31_days_ahead(shared_ward, days, code):
    assert code_of(acknowledged, shared_ward, shared_ward.technician, days=days) == code
    assert acknowledged(shared_ward, shared_ward.technician, days=1)
    assert acknowledged(shared_ward, shared_ward.technician, days=31)


def test_reason_and_end_are_asked_for(shared_ward):
    assert code_of(acknowledged, shared_ward, shared_ward.technician, reason=" ") == "hold.reason_missing"
    assert code_of(acknowledged, shared_ward, shared_ward.technician, until_on=None) == "hold.end_missing"


def test_new_hold_takes_the_place_of_the_one_before(shared_ward):
    acknowledged(shared_ward, shared_ward.technician, days=3)
    acknowledged(shared_ward, shared_ward.technician, days=9)
    (held,) = holds.holds_of([shared_ward.check.pk], now())[shared_ward.check.pk]
    assert held.until_at.astimezone(builders.LONDON).date() == in_days(9)
    assert NoticeHold.objects.filter(ended_at=None).count() == 1


def test_check_no_longer_awaited_can_not_be_held(shared_ward):
    excuses.excuse(check=shared_ward.check.uid, reason="ward closed", actor=shared_ward.physicist, at=now())
    assert code_of(acknowledged, shared_ward, shared_ward.technician) == "hold.not_awaited"


def test_check_of_electrical_safety_can_not_be_held(shared_ward):
    check = builders.plan(
        shared_ward.scanner, "electrical-safety", shared_ward.physicist, shared_ward.physicist
    )
    given = {"check": check.uid, "actor": shared_ward.physicist}
    assert code_of(acknowledged, shared_ward, shared_ward.physicist, check=check.uid) == "hold.electrical"
    assert holds.may_snooze(**given, at=now()).code == "hold.electrical"


def test_suspension_that_was_sent_back_can_not_be_held(shared_ward):
    submission = builders.submitted(shared_ward.check, shared_ward.technician, lens_grade="red")
    signed = {"shown_sha256": submission.shown_sha256, "remark": "Which lens?", "password": builders.PASSWORD}
    checks.send_back(check=shared_ward.check.uid, **signed, actor=shared_ward.physicist, at=now())
    assert code_of(acknowledged, shared_ward, shared_ward.technician) == "hold.suspension"


def test_another_persons_hold_is_ended_by_a_physicist_and_by_nobody_less(shared_ward):
    hold = acknowledged(shared_ward, shared_ward.technician)
    given = {"hold": hold.uid, "reason": "Back already", "at": now()}
    assert code_of(holds.end_hold, **given, actor=shared_ward.user) == "role.not_allowed"
    holds.end_hold(**given, actor=shared_ward.physicist)
    assert holds.holds_of([shared_ward.check.pk], now()) == {}
    assert code_of(holds.end_hold, **given, actor=shared_ward.physicist) == "hold.ended_already"


def test_sweep_looks_at_a_check_again_when_a_hold_is_ended(shared_ward):
    hold, at = acknowledged(shared_ward, shared_ward.technician), now()
    holds.end_hold(hold=hold.uid, reason="Back already", actor=shared_ward.technician, at=at)
    assert shared_ward.check.clock.__class__.objects.get(check_of=shared_ward.check).at <= at
