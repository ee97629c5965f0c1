"""The work of the weeks ahead, by person, from plans; and which due days to move to even the weeks out.

Every check is taken to be done on its due day, in the minutes its procedure is expected to take on such a device;
several people on duty share them equally. A forecast, no promise: repairs and unplanned checks are not in it.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from datetime import date, timedelta
from typing import Final

from qa_tracker.core import schedule
from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule import SiteDays, Window
from qa_tracker.core.schedule_days import FARTHEST_ROLL

WEEK: Final = timedelta(days=7)
MOST_MOVES: Final = 200
Loads = dict[tuple[date, int], float]
"""Minutes by the Monday of a week and person."""


@dataclass(frozen=True)
class Course:
    """What the due days of a plan are counted from.

    Parameters
    ----------
    rule, basis, anchor_on, window
        The plan's own.
    due_on, after_on
        Due day of the awaited check, and the day the following are counted from: its slot.
    """

    rule: str
    basis: str
    anchor_on: date
    window: Window
    due_on: date
    after_on: date


def due_days(course: Course, site: SiteDays, until_on: date) -> tuple[date, ...]:
    """The due day of the awaited check and of those after it, up to a day.

    By the calendar they are slots after the awaited one's; counted from the last check, each is taken to be done on
    its day. A rule that runs out of days ends there.

    Examples
    --------
    >>> monthly = Course("FREQ=MONTHLY", "calendar", date(2027, 1, 31), Window(), date(2027, 1, 31), date(2027, 1, 31))
    >>> [day.isoformat() for day in due_days(monthly, SiteDays("UTC"), date(2027, 3, 31))]
    ['2027-01-31', '2027-02-28', '2027-03-31']
    """
    rule, found = schedule.parse_rule(course.rule), [course.due_on]
    if course.basis == "calendar":
        last = course.after_on
        for slot_on in schedule.occurrences(
            rule, course.anchor_on, from_on=last - timedelta(days=FARTHEST_ROLL), until_on=until_on
        ):
            day = schedule.roll(slot_on, course.window.roll, site)
            if day > last:
                found.append(day)
                last = day
        return tuple(day for day in found if day <= until_on)
    while found[-1] <= until_on:
        try:
            due = schedule.next_due(rule, "last_actual", found[-1], None, course.window, site)
        except Invalid:
            break
        found.append(due.due_on)
    return tuple(day for day in found if day <= until_on)


def monday_of(day: date, first_on: date) -> date:
    """The Monday of a day's week; what is due before the first week is work of the first."""
    return max(day - timedelta(days=day.weekday()), first_on)


def add_load(loads: Loads, week_on: date, who: Sequence[int], minutes: float) -> None:
    """Add a check's minutes to those who share it; negative takes them away."""
    for person in who:
        loads[week_on, person] = loads.get((week_on, person), 0.0) + minutes / len(who)


@dataclass(frozen=True)
class Movable:
    """An awaited check that may be moved.

    Parameters
    ----------
    key
        Its key; among equals the lowest is moved first.
    first_on, last_on
        The days it may be moved to, both included.
    """

    key: int
    due_on: date
    first_on: date
    last_on: date
    minutes: float
    who: tuple[int, ...]
    site: SiteDays


@dataclass(frozen=True)
class Move:
    """A due day proposed instead of another."""

    key: int
    from_on: date
    to_on: date


def spread(
    loads: Mapping[tuple[date, int], float], movables: Iterable[Movable], first_on: date
) -> tuple[Move, ...]:
    """Moves that lower the heaviest weeks, at most ``MOST_MOVES``; each check at most once.

    A simple rule, the same at every asking: take the heaviest week of anyone that has a check to move; of its checks
    the longest, then the one entered first; move it to the lightest week inside its window, if that week with it is
    lighter than this one was. A week that nothing improves is left.

    Examples
    --------
    >>> monday = date(2027, 3, 1)
    >>> two = [Movable(n, monday, monday, date(2027, 3, 12), 60, (7,), SiteDays("UTC")) for n in (1, 2)]
    >>> spread({(monday, 7): 120.0}, two, monday)
    (Move(key=1, from_on=datetime.date(2027, 3, 1), to_on=datetime.date(2027, 3, 8)),)
    """
    now: Loads = dict(loads)
    waiting: dict[tuple[date, int], list[Movable]] = defaultdict(list)
    for each in sorted(movables, key=lambda one: (one.minutes, -one.key)):
        for person in each.who:
            waiting[monday_of(each.due_on, first_on), person].append(each)
    moves: list[Move] = []
    moved: set[int] = set()
    while waiting and len(moves) < MOST_MOVES:
        heaviest = max(waiting, key=lambda place: (now.get(place, 0.0), -place[0].toordinal(), -place[1]))
        found = waiting[heaviest].pop()
        if not waiting[heaviest]:
            del waiting[heaviest]
        to_on = _lighter(now, found, first_on) if found.key not in moved else None
        if to_on is None:
            continue
        moved.add(found.key)
        moves.append(Move(found.key, found.due_on, to_on))
        add_load(now, monday_of(found.due_on, first_on), found.who, -found.minutes)
        add_load(now, monday_of(to_on, first_on), found.who, found.minutes)
    return tuple(moves)


def _lighter(loads: Loads, one: Movable, first_on: date) -> date | None:
    """The day nearest its own in the lightest week it may go to; None where that is no lighter."""
    home = monday_of(one.due_on, first_on)
    share = one.minutes / max(len(one.who), 1)
    best, best_load = None, max(loads.get((home, person), 0.0) for person in one.who)
    week_on = monday_of(one.first_on, first_on)
    while week_on <= one.last_on:
        load = max(loads.get((week_on, person), 0.0) for person in one.who) + share
        day = _working_day(one, week_on)
        if week_on != home and day is not None and load < best_load:
            best, best_load = day, load
        week_on += WEEK
    return best


def _working_day(one: Movable, week_on: date) -> date | None:
    """The day of a week that is nearest the same weekday, worked, and inside the window."""
    wanted = week_on + timedelta(days=one.due_on.weekday())
    days = [week_on + timedelta(days=n) for n in range(7)]
    fitting = [day for day in days if one.first_on <= day <= one.last_on and one.site.is_working(day)]
    return min(fitting, key=lambda day: (abs((day - wanted).days), day), default=None)
