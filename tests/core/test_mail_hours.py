"""When mail may go: the digest hour, days off and quiet hours, which delay and never drop."""

from __future__ import annotations

import datetime as dt
import doctest
from zoneinfo import ZoneInfo

import pytest

from qa_tracker.core import mail_hours
from qa_tracker.core.errors import Invalid
from qa_tracker.core.mail_hours import MailHours
from qa_tracker.core.schedule_days import SiteDays

HOURS = range(24)
ZONES = ("Europe/London", "America/St_Johns", "Pacific/Auckland")
EVERY_DAY = frozenset()


def test_examples_give_what_they_say():
    assert doctest.testmod(mail_hours).failed == 0


@pytest.mark.parametrize("digest_hour", HOURS)
def test_every_digest_goes_within_a_day_whatever_hours_are_quiet(digest_hour):
    days = SiteDays("UTC", EVERY_DAY)
    for quiet_from in HOURS:
        for length in range(1, 24):
            hours = MailHours(days, digest_hour, quiet_from, (quiet_from + length) % 24)
            open_at = [
                hour for hour in HOURS if hours.digest_day(dt.datetime(2026, 6, 3, hour, tzinfo=dt.UTC))
            ]
            assert open_at, (digest_hour, quiet_from, length)
            assert not any(hours.is_quiet(hour) for hour in open_at)
            assert sum(hours.is_quiet(hour) for hour in HOURS) == length


@pytest.mark.parametrize("zone", ZONES)
@pytest.mark.parametrize("day", [dt.date(2026, 3, 29), dt.date(2026, 10, 25), dt.date(2026, 4, 5)])
def test_digest_goes_once_the_local_clock_shows_its_hour_on_days_with_a_clock_change(zone, day):
    hours = MailHours(SiteDays(zone, EVERY_DAY), 7, 22, 6)
    start = dt.datetime.combine(day, dt.time(), ZoneInfo(zone)).astimezone(dt.UTC)
    moments = [start + dt.timedelta(minutes=15 * step) for step in range(92)]
    went = next(each for each in moments if hours.digest_day(each) == day).astimezone(ZoneInfo(zone))
    assert (went.hour, went.minute) == (7, 0)


def test_mail_waits_on_days_off_and_weekends():
    hours = MailHours(SiteDays("UTC", holidays=frozenset({dt.date(2026, 6, 3)})), 7)
    went = [day for day in range(1, 8) if hours.digest_day(dt.datetime(2026, 6, day, 8, tzinfo=dt.UTC))]
    assert went == [1, 2, 4, 5]


def test_quiet_hours_begin_with_their_first_and_end_with_their_last_minute():
    hours = MailHours(SiteDays("UTC"), 7, 20, 6)
    open_at = {
        (hour, minute): hours.may_go(dt.datetime(2026, 6, 3, hour, minute, tzinfo=dt.UTC))
        for hour, minute in [(19, 59), (20, 0), (23, 59), (5, 59), (6, 0)]
    }
    assert open_at == {(19, 59): True, (20, 0): False, (23, 59): False, (5, 59): False, (6, 0): True}


@pytest.mark.parametrize(
    ("quiet", "code"),
    [
        ((20, None), "site.quiet_half"),
        ((None, 6), "site.quiet_half"),
        ((20, 24), "site.quiet_hour_wrong"),
        ((-1, 6), "site.quiet_hour_wrong"),
        ((6, 6), "site.quiet_all_day"),
    ],
)
def test_quiet_hours_that_are_none_are_refused(quiet, code):
    with pytest.raises(Invalid) as refused:
        MailHours(SiteDays("UTC"), 7, *quiet)
    assert refused.value.code == code
