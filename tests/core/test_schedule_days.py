"""Working days, and where a local day begins and ends across clock changes."""

from __future__ import annotations

from datetime import UTC, date, datetime, timedelta

import pytest

from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule import SiteDays, local_day, local_day_bounds, roll, starts_at

EASTER = SiteDays("Europe/London", holidays=frozenset({date(2025, 4, 18), date(2025, 4, 21)}))


@pytest.mark.parametrize(
    ("day", "rule", "expected"),
    [
        pytest.param("2025-04-19", "none", "2025-04-19", id="left on a Saturday"),
        pytest.param("2025-04-17", "forward", "2025-04-17", id="a working day stays"),
        pytest.param("2025-04-18", "forward", "2025-04-22", id="over the whole of Easter"),
        pytest.param("2025-04-21", "backward", "2025-04-17", id="back before Easter"),
        pytest.param("2025-04-19", "nearest", "2025-04-17", id="nearer to Thursday"),
        pytest.param("2025-04-20", "nearest", "2025-04-22", id="nearer to Tuesday"),
        pytest.param("2025-05-31", "backward", "2025-05-30", id="month end back to Friday"),
        pytest.param("2025-05-31", "forward", "2025-06-02", id="month end into the next month"),
    ],
)
def test_day_is_moved_to_a_working_day_by_each_rule(day, rule, expected):
    assert roll(date.fromisoformat(day), rule, EASTER) == date.fromisoformat(expected)


def test_day_is_moved_to_the_earlier_when_two_are_as_near():
    site = SiteDays("UTC", holidays=frozenset({date(2025, 3, 5)}))
    assert roll(date(2025, 3, 5), "nearest", site) == date(2025, 3, 4)


def test_friday_and_saturday_are_no_working_days_when_the_site_says_so():
    site = SiteDays("Asia/Riyadh", weekend=frozenset({4, 5}))
    assert roll(date(2025, 3, 7), "forward", site) == date(2025, 3, 9)


@pytest.mark.parametrize(
    ("rule", "site", "code"),
    [
        pytest.param(
            "forward", SiteDays("UTC", frozenset(range(7))), "schedule.no_working_day", id="never works"
        ),
        pytest.param("sideways", SiteDays("UTC"), "schedule.unknown_roll", id="no such rule"),
    ],
)
def test_day_is_not_moved_when_there_is_nowhere_to_go(rule, site, code):
    with pytest.raises(Invalid) as refusal:
        roll(date(2025, 3, 1), rule, site)
    assert refusal.value.code == code


@pytest.mark.parametrize(
    ("zone", "day", "starts", "hours"),
    [
        pytest.param("Europe/London", "2025-03-29", "2025-03-29T00:00", 24, id="London, day before forward"),
        pytest.param("Europe/London", "2025-03-30", "2025-03-30T00:00", 23, id="London forward"),
        pytest.param("Europe/London", "2025-10-26", "2025-10-25T23:00", 25, id="London back"),
        pytest.param("America/New_York", "2025-03-09", "2025-03-09T05:00", 23, id="New York forward"),
        pytest.param("America/New_York", "2025-11-02", "2025-11-02T04:00", 25, id="New York back"),
        pytest.param(
            "Australia/Lord_Howe", "2025-10-05", "2025-10-04T13:30", 23.5, id="half an hour forward"
        ),
        pytest.param("Australia/Lord_Howe", "2025-04-06", "2025-04-05T13:00", 24.5, id="half an hour back"),
        pytest.param("Asia/Beirut", "2025-03-30", "2025-03-29T22:00", 23, id="Beirut, no midnight"),
        pytest.param(
            "Asia/Beirut", "2025-10-25", "2025-10-24T21:00", 25, id="Beirut, an hour before midnight twice"
        ),
        pytest.param("America/Havana", "2025-03-09", "2025-03-09T05:00", 23, id="Havana, no midnight"),
        pytest.param("America/Havana", "2025-11-02", "2025-11-02T04:00", 25, id="Havana, midnight twice"),
        pytest.param("Pacific/Apia", "2011-12-30", "2011-12-30T10:00", 0, id="Apia, a day skipped"),
        pytest.param("Asia/Kathmandu", "2025-06-01", "2025-05-31T18:15", 24, id="a quarter hour off"),
    ],
)
def test_local_day_begins_and_lasts_as_the_clocks_say(zone, day, starts, hours):
    start_at, end_at = local_day_bounds(date.fromisoformat(day), zone)
    assert start_at == datetime.fromisoformat(starts).replace(tzinfo=UTC)
    assert end_at - start_at == timedelta(hours=hours)


@pytest.mark.parametrize(
    "zone",
    [
        *("UTC", "Europe/London", "America/New_York", "America/Sao_Paulo", "Asia/Beirut", "Africa/Cairo"),
        *("America/Havana", "Australia/Lord_Howe", "America/Nuuk", "Pacific/Chatham", "Asia/Tehran"),
    ],
)
def test_every_day_of_twenty_years_begins_at_its_first_instant_in_each_zone(zone):
    for number in range(20 * 365):
        day = date(2010, 1, 1) + timedelta(days=number)
        start_at = starts_at(day, zone)
        assert local_day(start_at, zone) == day
        assert local_day(start_at - timedelta(microseconds=1), zone) == day - timedelta(days=1)


@pytest.mark.parametrize("zone", ["Europe/Atlantis", "", "../etc/passwd", "Europe", "/UTC"])
def test_zone_is_refused_when_there_is_none_of_that_name(zone):
    with pytest.raises(Invalid) as refusal:
        starts_at(date(2025, 1, 1), zone)
    assert refusal.value.code == "schedule.unknown_zone"


def test_local_day_is_a_mistake_when_the_instant_has_no_zone():
    with pytest.raises(ValueError):
        local_day(datetime(2025, 1, 1), "UTC")  # noqa: DTZ001
