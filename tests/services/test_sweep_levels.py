"""The sweep and its ladder: steps after overdue, several people, holds, gaps, and checks that change their place."""

from __future__ import annotations

import datetime as dt
import zoneinfo

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django.utils.timezone import now

from qa_tracker.records.models import Check, CheckClock, CheckPlan, Heartbeat, Notice, NoticeHold, SweepGap
from qa_tracker.records.queries.ledger import every_leaf
from qa_tracker.services import checks, devices, holds, plans, sites, states, sweep
from qa_tracker.services.devices import Place
from tests import builders

LONDON = zoneinfo.ZoneInfo("Europe/London")


@pytest.fixture
def ward(shared_ward):
    """The ward with a lead sonographer, and its check on the calendar by quarters: steps come before the next."""
    CheckClock.objects.all().delete()
    builders.person(shared_ward.admin, "nakamura", "lead", shared_ward.site, "Priya Nakamura-Holt")
    return shared_ward


@pytest.fixture
def check(ward):
    probe = builders.probe(ward.physicist, Place(site=ward.site, location=ward.room), serial="C5-ladder")
    return builders.plan(
        probe, builders.MONTHLY, ward.technician, ward.physicist, rule="FREQ=MONTHLY;INTERVAL=3"
    )


def on_day(check, days, hour=9):
    return dt.datetime.combine(check.due_on + dt.timedelta(days=days), dt.time(hour), LONDON)


def swept(check, *days):
    for day in days:
        sweep.sweep(at=now(), as_if=on_day(check, day))


def told(channel="in_app"):
    found = Notice.objects.filter(channel=channel).order_by("id").select_related("person")
    return [(each.level, each.person.username, each.recipient) for each in found]


UNTIL_OVERDUE = [(level, "castellane", "responsible") for level in ("upcoming", "due", "late", "overdue")]
OVERDUE, T1, T2 = 8, 15, 22


def test_ladder_climbs_to_further_people_when_nothing_is_done(check):
    swept(check, *range(-8, 30))
    assert told() == [
        *UNTIL_OVERDUE,
        ("overdue", "nakamura", "lead"),
        ("t1", "oduya", "physicist"),
        ("t1", "nakamura", "lead"),
        ("t2", "oduya", "physicist"),
    ]


def test_each_is_told_at_their_highest_level_when_the_sweep_comes_late(check):
    swept(check, T2 + 1)
    assert told() == [
        ("t2", "oduya", "physicist"),
        ("overdue", "castellane", "responsible"),
        ("t1", "nakamura", "lead"),
    ]
    skipped = dict(Notice.objects.filter(channel="in_app").values_list("person__username", "skipped"))
    assert skipped == {"castellane": "upcoming,due,late", "oduya": "t1", "nakamura": "overdue"}


def test_leaf_lists_sorted_keys_and_says_as_if(check):
    moment = on_day(check, OVERDUE)
    sweep.sweep(at=now(), as_if=moment)
    said = list(every_leaf())[-1].said
    keys = said["new"]["notices"]
    assert keys == sorted(keys)
    assert len(keys) == 4
    assert dt.datetime.fromisoformat(said["as_if"]) == moment
    assert Notice.objects.first().at.date() == now().date()


def test_clock_goes_to_the_next_step_and_ends_with_the_next_occurrence(check):
    clocks = []
    for day in (OVERDUE, T1, T2):
        swept(check, day)
        clocks.append(CheckClock.objects.get(check_of=check))
    assert [clock.level for clock in clocks] == ["t1", "t2", "missed"]
    assert clocks[-1].at > on_day(check, 60)


def test_acknowledged_check_climbs_once_the_hold_ends(ward, check):
    hold(ward, check, "acknowledged", until=T1 + 1)
    swept(check, *range(-8, T1 + 1))
    assert told() == UNTIL_OVERDUE
    swept(check, T1 + 1, T1 + 2)
    assert told()[4:] == [("t1", "oduya", "physicist"), ("t1", "nakamura", "lead")]
    assert Notice.objects.filter(person__username="nakamura").first().skipped == "overdue"


def test_snoozing_person_is_told_once_of_the_highest_level_when_the_hold_ends(ward, check):
    hold(ward, check, "snoozed", until=10)
    swept(check, *range(-8, 10))
    assert told() == [("overdue", "nakamura", "lead")]
    swept(check, 10, 11)
    assert told()[1:] == [("overdue", "castellane", "responsible")]


def hold(ward, check, kind, until):
    """A hold as of long ago: the sweeps here are of other days than the real clock's."""
    holding = {"acknowledged": holds.acknowledge, "snoozed": holds.snooze}[kind]
    until_on = now().date() + dt.timedelta(days=until)
    assert check.due_on == now().date()
    holding(check=check.uid, reason="Probe is away", until_on=until_on, actor=ward.technician, at=now())
    assert NoticeHold.objects.count() == 1


def test_check_sent_back_is_watched_again(ward, check):
    submission = builders.submitted(check, ward.technician)
    assert not CheckClock.objects.filter(check_of=check).exists()
    shown = {"shown_sha256": submission.shown_sha256, "password": builders.PASSWORD}
    checks.send_back(check=check.uid, **shown, remark="Zone 4 again", actor=ward.physicist, at=now())
    swept(check, OVERDUE)
    assert told() == [("overdue", "castellane", "responsible"), ("overdue", "nakamura", "lead")]
    assert Check.objects.get(pk=check.pk).state == "sent_back"


def test_plans_of_a_disposed_device_end_and_open_nothing(ward, check):
    states.move_on(device=check.device.uid, verb="dispose", note="Scrapped", actor=ward.physicist, at=now())
    swept(check, 400)
    found = Check.objects.get(plan=check.plan)
    assert (found.state, found.excuse) == ("excused", "Scrapped")
    assert CheckPlan.objects.get(pk=check.plan_id).ended_at is not None
    assert told() == []


def test_sweep_ends_the_plan_when_its_device_was_disposed_of_before(ward, check, monkeypatch):
    monkeypatch.setattr(plans, "end_with_device", lambda *_: None)
    states.move_on(device=check.device.uid, verb="dispose", note="Scrapped", actor=ward.physicist, at=now())
    swept(check, 1, 400)
    found = Check.objects.get(plan=check.plan)
    assert (found.state, found.excuse) == ("excused", "disposed")
    assert CheckPlan.objects.get(pk=check.plan_id).ended_at is not None


def test_moved_check_keeps_its_days_by_the_clocks_of_the_new_site(ward, check):
    given = {"code": "KB", "name": "Kestrel Bay", "time_zone": "Pacific/Auckland"}
    kestrel = sites.create(**given, actor=ward.admin, at=now())
    devices.move(
        device=check.device.uid, place=Place(site=kestrel), reason="Lent", actor=ward.physicist, at=now()
    )
    moved = Check.objects.get(pk=check.pk)
    there = zoneinfo.ZoneInfo("Pacific/Auckland")
    assert (moved.due_on, moved.due_at.astimezone(there).date()) == (check.due_on, check.due_on)
    assert moved.due_at.astimezone(there).time() == dt.time()
    sweep.sweep(at=now(), as_if=moved.due_at)
    assert CheckClock.objects.get(check_of=moved).at == moved.late_at


def test_occurrence_is_missed_when_the_next_opens_though_a_step_would_come_later(ward):
    probe = builders.probe(ward.physicist, Place(site=ward.site), serial="C5-weekly")
    weekly = builders.plan(probe, builders.MONTHLY, ward.technician, ward.physicist, rule="FREQ=WEEKLY")
    swept(weekly, *range(-8, 1))
    assert Check.objects.get(pk=weekly.pk).state == "missed"
    assert Check.objects.filter(plan=weekly.plan, state="scheduled").count() == 1


def test_pause_of_the_heart_is_recorded_with_what_was_passed(check):
    at = now()
    Heartbeat.objects.create(name="sweep", beat_at=at - dt.timedelta(days=3))
    sweep.sweep(at=at, as_if=on_day(check, T2))
    sweep.sweep(at=at + dt.timedelta(minutes=1))
    gap = SweepGap.objects.get()
    assert (gap.began_at, gap.ended_at) == (at - dt.timedelta(days=3), at)
    assert (gap.notices, gap.skipped) == (6, 5)


@pytest.mark.parametrize("minutes", [0, 1, 3])
def test_beat_in_time_leaves_no_gap(ward, minutes):
    at = now()
    Heartbeat.objects.create(name="sweep", beat_at=at - dt.timedelta(minutes=minutes))
    sweep.sweep(at=at)
    assert not SweepGap.objects.exists()


def test_queries_do_not_grow_with_the_checks_of_a_sweep(ward):
    _, few, many = [queries_of_a_sweep(ward, number) for number in (1, 2, 12)]
    assert few == many < 40


def queries_of_a_sweep(ward, number):
    """Queries of a sweep in which so many checks at one site become due, and as many are missed."""
    for rule in ("FREQ=MONTHLY;INTERVAL=3", "FREQ=WEEKLY"):
        for each in range(number):
            probe = builders.probe(ward.physicist, Place(site=ward.site), serial=f"Q-{rule}-{number}-{each}")
            planned = builders.plan(probe, builders.MONTHLY, ward.technician, ward.physicist, rule=rule)
    with CaptureQueriesContext(connection) as made:
        result = sweep.sweep(at=now(), as_if=on_day(planned, 0))
    assert result.checks == 2 * number
    return len([each for each in made.captured_queries if "nextval" not in each["sql"]])
