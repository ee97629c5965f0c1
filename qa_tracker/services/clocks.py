"""The clocks of awaited checks: the stored moments by which the sweep finds what has come.

A clock is no record: it is worked out from the check, and can be made anew from it at any time. Its level is the
first that was not dealt with yet; its moment is when to look again, which a hold may put later than the level's.
"""

from __future__ import annotations

import datetime as dt
from collections.abc import Collection

from django.db.models import Q

from qa_tracker.core import ladder, schedule
from qa_tracker.core.ladder import Instants, Ladder
from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records.models import Check, CheckClock, LadderRung, Site
from qa_tracker.records.writers import insert_rows, put_rows

MOST_KEYS = 2000
"""Keys named in one statement."""


def start(check: Check) -> None:
    """Set the clock of a check to its first notice level; one without a window has none."""
    clock = _first(check)
    if clock is not None:
        clock.save(force_insert=True)


def start_again(check: Check, at: dt.datetime) -> None:
    """Let a check that is awaited again be looked at now: of what it reached meanwhile the highest level is owed."""
    if check.opens_at is not None:
        put_rows(CheckClock, [CheckClock(check_of=check, at=at, level=schedule.LEVELS[0])])


def stop(check: Check) -> None:
    """Take away the clock of a check that is awaited no longer."""
    CheckClock.objects.filter(check_of=check).delete()


def look_at(check: Check, at: dt.datetime) -> None:
    """Let the sweep look at a check now and set its clock anew; nothing is owed twice by it."""
    CheckClock.objects.filter(check_of=check, at__gt=at).update(at=at)


def turn_all(clocks: Collection[CheckClock], stopped: Collection[int]) -> None:
    """Set many clocks, and take away those of the checks named by key."""
    put_rows(CheckClock, list(clocks))
    keys = list(stopped)
    for first in range(0, len(keys), MOST_KEYS):
        CheckClock.objects.filter(check_of_id__in=keys[first : first + MOST_KEYS]).delete()


def start_missing() -> int:
    """Set the clocks of all awaited checks that have none, after a history was written; return how many."""
    awaited = Check.objects.filter(state__in=CHECK_AWAITED, clock=None, opens_at__isnull=False).order_by("id")
    clocks = [clock for clock in map(_first, awaited) if clock is not None]
    insert_rows(CheckClock, clocks)
    return len(clocks)


def climb_anew(site: Site | None, climbs: Ladder, at: dt.datetime) -> None:
    """Set the clocks of overdue checks by a ladder that was changed: its next step, or a look where none is left.

    Steps that lie behind are not owed. ``site`` None: the group's ladder, for sites without one of their own.
    """
    own = LadderRung.objects.filter(ended_at=None, site__isnull=False).values("site_id")
    place = Q(site=site) if site else ~Q(site_id__in=own)
    overdue = Check.objects.filter(place, state__in=CHECK_AWAITED, overdue_at__lte=at)
    found = overdue.exclude(clock__level__in=schedule.LEVELS).select_related("site").order_by("id")
    put_rows(CheckClock, [_next_step(check, climbs, at) for check in found])


def _next_step(check: Check, climbs: Ladder, at: dt.datetime) -> CheckClock:
    zone = check.site.time_zone if check.site else "UTC"
    following = ladder.following(climbs, ladder.moments(climbs, instants_of(check), zone), at)
    level, moment = following or (ladder.MISSED, at)
    return CheckClock(check_of=check, at=moment, level=level)


def instants_of(check: Check) -> Instants:
    """The stored instants of a check that has a window."""
    found = (check.opens_at, check.due_at, check.late_at, check.overdue_at)
    known = [instant for instant in found if instant is not None]
    if len(known) < len(found):
        raise ValueError(f"check {check.uid} has no window")
    return Instants(*known)


def same_days_at(check: Check, site: Site | None) -> dict[str, dt.datetime]:
    """The instants of a check moved to another site: the same days by that site's clocks."""
    before = check.site.time_zone if check.site else "UTC"
    after = site.time_zone if site else "UTC"
    if before == after or check.opens_at is None:
        return {}
    return {
        name: schedule.starts_at(schedule.local_day(instant, before), after)
        for name, instant in instants_of(check)._asdict().items()
    }


def _first(check: Check) -> CheckClock | None:
    if check.opens_at is None:
        return None
    return CheckClock(check_of=check, at=check.opens_at, level=schedule.LEVELS[0])
