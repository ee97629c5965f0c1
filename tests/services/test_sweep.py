"""The sweep: what moves at which moment, what is owed once, and what an outage leaves behind."""

from __future__ import annotations

import datetime as dt
import zoneinfo

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Check, Digest, Heartbeat, Notice, NoticeMail
from qa_tracker.services import mail, states, sweep
from tests import builders

pytestmark = pytest.mark.django_db
LONDON = zoneinfo.ZoneInfo("Europe/London")


@pytest.fixture
def ward(db):
    return builders.ward()


def on_day(ward, days, hour=9):
    """A moment so many days after the due day, at the site's local hour."""
    day = ward.check.due_on + dt.timedelta(days=days)
    return dt.datetime.combine(day, dt.time(hour), LONDON)


def levels(channel="in_app"):
    return [notice.level for notice in Notice.objects.filter(channel=channel).order_by("id")]


@pytest.mark.parametrize(
    ("days", "level"),
    [(-8, None), (-7, "upcoming"), (-1, "upcoming"), (0, "due"), (1, "late"), (7, "late"), (8, "overdue")],
)
def test_highest_level_is_owed_when_the_sweep_comes_late(ward, days, level):
    sweep.sweep(at=now(), as_if=on_day(ward, days))
    assert levels() == ([level] if level else [])


def test_each_level_is_owed_once_when_the_sweep_runs_daily_and_repeatedly(ward):
    for days in range(-8, 12):
        for _again in range(2):
            sweep.sweep(at=now(), as_if=on_day(ward, days))
    assert levels() == ["upcoming", "due", "late", "overdue"]
    assert levels("mail") == ["due", "late", "overdue"]


def test_levels_passed_in_an_outage_are_recorded_and_not_sent(ward):
    sweep.sweep(at=now(), as_if=on_day(ward, 9))
    assert {notice.skipped for notice in Notice.objects.all()} == {"upcoming,due,late"}


def test_unfulfilled_occurrence_is_missed_when_the_next_opens(ward):
    sweep.sweep(at=now(), as_if=on_day(ward, 26))
    ward.check.refresh_from_db()
    following = Check.objects.get(plan=ward.check.plan, state="scheduled")
    assert (ward.check.state, hasattr(ward.check, "clock")) == ("missed", False)
    assert following.due_on > ward.check.due_on


def test_year_without_a_sweep_leaves_each_month_missed_and_one_notice(ward):
    sweep.sweep(at=now(), as_if=on_day(ward, 370))
    states_found = list(Check.objects.filter(plan=ward.check.plan).values_list("state", flat=True))
    assert states_found.count("missed") >= 11
    assert states_found.count("scheduled") == 1
    assert Notice.objects.filter(channel="mail").count() <= 1


def test_device_out_of_use_is_excused_and_nobody_is_told(ward):
    states.quarantine(device=ward.probe.uid, seen="Lens cracked", actor=ward.user, at=now())
    sweep.sweep(at=now(), as_if=on_day(ward, 26))
    ward.check.refresh_from_db()
    assert (ward.check.state, ward.check.excuse) == ("excused", "quarantined")
    assert levels() == []


def test_heart_beats_when_nothing_is_due(ward):
    at = now()
    sweep.sweep(at=at, as_if=on_day(ward, -20))
    assert Heartbeat.objects.get(name="sweep").beat_at == at


def working_morning(ward, days):
    moment = on_day(ward, days)
    while moment.weekday() > 4:
        moment += dt.timedelta(days=1)
    return moment


def test_one_digest_a_day_carries_what_is_owed(ward):
    builders.plan(ward.scanner, "monthly-in-air", ward.technician, ward.physicist)
    moment = working_morning(ward, 8)
    sweep.sweep(at=now(), as_if=moment)
    assert mail.make_digests(at=now(), as_if=moment) == 1
    assert mail.make_digests(at=now(), as_if=moment) == 0
    digest = Digest.objects.get()
    assert digest.notices.count() == 2
    assert NoticeMail.objects.filter(digest=None).count() == 0


@pytest.mark.parametrize("hour", [0, 3, 6])
def test_digest_waits_in_the_quiet_hours(ward, hour):
    moment = working_morning(ward, 8).replace(hour=hour)
    sweep.sweep(at=now(), as_if=moment)
    assert mail.make_digests(at=now(), as_if=moment) == 0


def test_digest_waits_when_the_site_does_not_work(ward):
    saturday = working_morning(ward, 8)
    while saturday.weekday() != 5:
        saturday += dt.timedelta(days=1)
    sweep.sweep(at=now(), as_if=saturday)
    assert mail.make_digests(at=now(), as_if=saturday) == 0
