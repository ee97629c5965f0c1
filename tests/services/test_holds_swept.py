"""What a hold keeps back, and what is told when it ends: the highest level, once, with what was passed."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Notice
from qa_tracker.services import holds, sweep
from tests import builders

HOUR = dt.timedelta(hours=1)


@pytest.fixture
def ward(shared_ward):
    builders.person(shared_ward.admin, "holt", "lead", shared_ward.site)
    return shared_ward


def in_days(days):
    return dt.datetime.now(builders.LONDON).date() + dt.timedelta(days=days)


def hold(command, ward, actor, days):
    told = {"check": ward.check.uid, "reason": "At the maker's", "until_on": in_days(days)}
    return command(**told, actor=actor, at=now())


def told_at(*moments):
    """Who is told of which level at each of these moments, and what passed before it untold."""
    found, before = [], set()
    for moment in moments:
        sweep.sweep(at=now(), as_if=moment)
        told = Notice.objects.filter(channel="in_app").values_list("person__username", "level", "skipped")
        found.append(set(told) - before)
        before |= set(told)
    return found


def test_acknowledged_check_is_told_to_nobody_further_until_the_hold_ends(ward):
    made = hold(holds.acknowledge, ward, ward.technician, 20)
    overdue, after = ward.check.overdue_at + HOUR, made.until_at + HOUR
    held, ended, later = told_at(overdue, after, after + HOUR)
    assert {username for username, _, _ in held} == {"castellane"}
    assert ended == {("holt", "t1", "overdue"), ("oduya", "t1", "")}
    assert later == set()


def test_snoozed_notices_wait_and_those_of_others_do_not(ward):
    made = hold(holds.snooze, ward, ward.technician, 12)
    held, ended = told_at(ward.check.overdue_at + HOUR, made.until_at + HOUR)
    assert held == {("holt", "overdue", "")}
    assert ended == {("castellane", "overdue", "upcoming,due,late")}


def test_what_was_held_is_told_when_the_hold_is_ended_by_hand(ward):
    made, overdue = hold(holds.acknowledge, ward, ward.technician, 20), ward.check.overdue_at + HOUR
    told_at(overdue)
    holds.end_hold(hold=made.uid, reason="Back already", actor=ward.physicist, at=now())
    assert ("holt", "overdue", "") in told_at(overdue + HOUR)[0]


def test_check_done_while_it_was_held_is_told_to_nobody(ward):
    made = hold(holds.acknowledge, ward, ward.technician, 20)
    told_at(ward.check.overdue_at + HOUR)
    builders.submitted(ward.check, ward.technician)
    sweep.sweep(at=now(), as_if=made.until_at + HOUR)
    assert not Notice.objects.filter(person__username="holt", check_of=ward.check).exists()


def test_two_holds_end_one_after_the_other(ward):
    first = hold(holds.acknowledge, ward, ward.technician, 10)
    second = hold(holds.snooze, ward, ward.technician, 12)
    overdue, between, after = told_at(
        ward.check.overdue_at + HOUR, first.until_at + HOUR, second.until_at + HOUR
    )
    assert overdue == set()
    assert between == {("holt", "overdue", "")}
    assert {row[0] for row in after} == {"castellane"}
