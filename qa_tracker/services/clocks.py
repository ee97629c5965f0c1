"""The clocks of awaited checks: the stored moments by which the sweep finds what has come.

A clock is no record: it is worked out from the check, and can be made anew from it at any time.
"""

from __future__ import annotations

import datetime as dt

from qa_tracker.core import schedule
from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records.models import Check, CheckClock
from qa_tracker.records.writers import insert_rows


def start(check: Check) -> None:
    """Set the clock of a check to its first notice level; one without a window has none."""
    clock = _first(check)
    if clock is not None:
        clock.save(force_insert=True)


def turn(check: Check, level: str, at: dt.datetime) -> None:
    """Set the clock of an awaited check to another level."""
    CheckClock.objects.update_or_create(check_of=check, defaults={"level": level, "at": at})


def stop(check: Check) -> None:
    """Take away the clock of a check that is awaited no longer."""
    CheckClock.objects.filter(check_of=check).delete()


def start_missing() -> int:
    """Set the clocks of all awaited checks that have none, after a history was written; return how many."""
    awaited = Check.objects.filter(state__in=CHECK_AWAITED, clock=None, opens_at__isnull=False).order_by("id")
    clocks = [clock for clock in map(_first, awaited) if clock is not None]
    insert_rows(CheckClock, clocks)
    return len(clocks)


def _first(check: Check) -> CheckClock | None:
    if check.opens_at is None:
        return None
    return CheckClock(check_of=check, at=check.opens_at, level=schedule.LEVELS[0])
