"""Working days, and the instants at which a local day begins and ends."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, date, datetime, timedelta
from functools import lru_cache
from typing import Final
from zoneinfo import ZoneInfo

from qa_tracker.core.errors import Invalid

ROLLS: Final = ("none", "forward", "backward", "nearest")
FARTHEST_ROLL: Final = 31
_ONE_DAY: Final = timedelta(days=1)


@dataclass(frozen=True)
class SiteDays:
    """Where and when a site works.

    Parameters
    ----------
    zone
        IANA time zone, e.g. ``"Europe/London"``.
    weekend
        Weekdays nobody works, Monday 0 to Sunday 6.
    holidays
        Other days nobody works.
    """

    zone: str
    weekend: frozenset[int] = frozenset({5, 6})
    holidays: frozenset[date] = frozenset()

    def is_working(self, day: date) -> bool:
        """Tell whether the site works on a day."""
        return day.weekday() not in self.weekend and day not in self.holidays


def roll(day: date, rule: str, site: SiteDays) -> date:
    """Move a day that isn't worked to one that is.

    Parameters
    ----------
    day
        A working day stays where it is under every rule.
    rule
        ``"none"`` leaves any day; ``"forward"`` and ``"backward"`` take the next and the previous working day;
        ``"nearest"`` the closer one, the earlier where both are as close (common practice, no source).
    site
        Refused where it works on none of the 31 days that way.

    Examples
    --------
    >>> roll(date(2025, 3, 1), "nearest", SiteDays("UTC")), roll(date(2025, 3, 2), "nearest", SiteDays("UTC"))
    (datetime.date(2025, 2, 28), datetime.date(2025, 3, 3))
    """
    if rule not in ROLLS:
        raise Invalid("schedule.unknown_roll", field="roll", roll=rule)
    if rule == "none" or site.is_working(day):
        return day
    steps = {"forward": (1,), "backward": (-1,), "nearest": (-1, 1)}[rule]
    for distance in range(1, FARTHEST_ROLL + 1):
        for step in steps:
            moved = day + distance * step * _ONE_DAY
            if site.is_working(moved):
                return moved
    raise Invalid("schedule.no_working_day", field="roll", on=day, days=FARTHEST_ROLL)


@lru_cache(maxsize=64)
def zone_of(name: str) -> ZoneInfo:
    """Time zone by its IANA name; refused where there is none of that name."""
    try:
        return ZoneInfo(name)
    except (KeyError, ValueError, OSError) as error:
        raise Invalid("schedule.unknown_zone", field="zone", zone=name) from error


def starts_at(day: date, zone: str) -> datetime:
    """Instant, in UTC, at which a local day begins.

    Where clocks go forward at midnight the day begins at the change; where 00:00 comes twice on a day, at the
    first. A day the zone skipped altogether begins where the next one does.

    Examples
    --------
    >>> starts_at(date(2025, 3, 31), "Europe/London").isoformat()
    '2025-03-30T23:00:00+00:00'
    """
    return datetime(day.year, day.month, day.day, tzinfo=zone_of(zone)).astimezone(UTC)


def local_day_bounds(day: date, zone: str) -> tuple[datetime, datetime]:
    """Instants at which a local day begins and ends; the end is the beginning of the next."""
    return starts_at(day, zone), starts_at(day + _ONE_DAY, zone)


def local_day(at: datetime, zone: str) -> date:
    """Local day an instant falls on; an instant without a zone is a mistake in the program."""
    if at.tzinfo is None:
        raise ValueError("an instant carries its zone")
    return at.astimezone(zone_of(zone)).date()
