"""A year ahead: who has how much to do in which week, and due days that could be moved to even it out."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Sequence
from dataclasses import dataclass

from django.db import transaction

from qa_tracker.core import forecast, schedule
from qa_tracker.core.errors import Invalid
from qa_tracker.core.forecast import WEEK, Course, Loads, Movable
from qa_tracker.core.schedule import SiteDays, Window
from qa_tracker.records.models import Person, Site
from qa_tracker.records.queries.forecast import PlannedRow, planned
from qa_tracker.records.queries.library import adopted_edition
from qa_tracker.records.queries.scope import Scope
from qa_tracker.services import due_days, on_duty, plans
from qa_tracker.services.on_duty import Duties

WEEKS = 53
MIDWEEK = dt.timedelta(days=2)
MOMENT = dt.timedelta(microseconds=1)
Who = tuple[int | None, int | None]


@dataclass(frozen=True)
class Proposed:
    """A due day that could be moved."""

    row: PlannedRow
    to_on: dt.date
    minutes: int
    who: tuple[int, ...]


@dataclass(frozen=True)
class Year:
    """The weeks by their Mondays, the minutes by week and person, and what could be moved.

    ``unknown`` counts checks of which no minutes are known, ``nobodys`` those for which nobody is on duty.
    """

    weeks: tuple[dt.date, ...]
    loads: Loads
    checks: int
    unknown: int
    nobodys: int
    proposed: tuple[Proposed, ...]


class _Ground:
    """What is read once for all plans: the days of sites, the minutes of procedures, who is on duty in each week."""

    def __init__(self, first_on: dt.date) -> None:
        self.first_on = first_on
        self.weeks = tuple(first_on + n * WEEK for n in range(WEEKS))
        self.until_on = self.weeks[-1] + WEEK - dt.timedelta(days=1)
        self.duties: dict[dt.date, Duties] = {}
        self.sites: dict[int | None, SiteDays] = {}
        self.known_minutes: dict[tuple[int, int | None, str], int] = {}
        self.courses: dict[tuple[Course, int | None], tuple[dt.date, ...]] = {}
        self.on_duty: dict[tuple[dt.date, Who], tuple[int, ...]] = {}

    def who(self, week_on: dt.date, row: PlannedRow) -> tuple[int, ...]:
        """Who has the duty in the middle of a week."""
        key = (week_on, (row.responsible_id, row.team_id))
        if key not in self.on_duty:
            if week_on not in self.duties:
                self.duties[week_on] = on_duty.load(week_on + MIDWEEK)
            self.on_duty[key] = tuple(self.duties[week_on].of(row.responsible_id, row.team_id))
        return self.on_duty[key]

    def days(self, site_id: int | None) -> SiteDays:
        """When a site works."""
        if site_id not in self.sites:
            self.sites[site_id] = plans.site_days(
                Site.objects.filter(id=site_id).first() if site_id else None
            )
        return self.sites[site_id]

    def minutes(self, row: PlannedRow) -> int:
        """Expected minutes of the procedure on such a device; 0 where the edition says none."""
        key = (row.procedure_id, row.site_id, row.device_kind)
        if key not in self.known_minutes:
            edition = adopted_edition(row.procedure_id, row.site_id)
            told = dict(edition.spec.minutes) if edition else {}
            self.known_minutes[key] = told.get(row.device_kind, 0)
        return self.known_minutes[key]

    def due(self, row: PlannedRow) -> tuple[dt.date, ...]:
        """The due days of a plan in the year, counted once for all plans that go alike."""
        window = Window(row.before_days, row.grace_days, row.roll)
        after_on = row.slot_on or row.due_on
        course = Course(row.rule, row.basis, row.anchor_on, window, row.due_on, after_on)
        key = (course, row.site_id)
        if key not in self.courses:
            self.courses[key] = forecast.due_days(course, self.days(row.site_id), self.until_on)
        return self.courses[key]


def look(scope: Scope, today: dt.date, site_id: int | None = None) -> Year:
    """The forecast of 53 weeks from this one, of the plans in sight. Reads only."""
    ground = _Ground(today - dt.timedelta(days=today.weekday()))
    loads: Loads = {}
    checks = unknown = nobodys = 0
    movables: dict[int, tuple[PlannedRow, Movable]] = {}
    for row in planned(scope, ground.until_on, site_id):
        minutes, days = ground.minutes(row), ground.due(row)
        checks += len(days)
        unknown += 0 if minutes else len(days)
        for day in days:
            week_on = forecast.monday_of(day, ground.first_on)
            who = ground.who(week_on, row)
            nobodys += 0 if who else 1
            forecast.add_load(loads, week_on, who, minutes)
        movable = _movable(ground, row, minutes, days, today)
        if movable is not None:
            movables[row.check_id] = (row, movable)
    moves = forecast.spread(loads, (each for _row, each in movables.values()), ground.first_on)
    proposed = tuple(
        Proposed(
            movables[move.key][0], move.to_on, int(movables[move.key][1].minutes), movables[move.key][1].who
        )
        for move in moves
    )
    return Year(ground.weeks, loads, checks, unknown, nobodys, proposed)


def _movable(
    ground: _Ground, row: PlannedRow, minutes: int, days: Sequence[dt.date], today: dt.date
) -> Movable | None:
    """The check with the days it may be moved to; None where there is no room or nothing to win."""
    who = ground.who(forecast.monday_of(row.due_on, ground.first_on), row)
    # One that was moved already stays: a person decided it.
    if not minutes or not who or row.slot_on is not None or row.due_on < today:
        return None
    site = ground.days(row.site_id)
    first_on = max(schedule.local_day(row.opens_at, site.zone), today)
    last_on = schedule.local_day(row.overdue_at - MOMENT, site.zone)
    if row.basis == "calendar" and len(days) > 1:
        last_on = min(last_on, days[1] - dt.timedelta(days=1))
    if last_on - first_on < dt.timedelta(days=1):
        return None
    return Movable(row.check_id, row.due_on, first_on, last_on, float(minutes), who, site)


def spread(
    *, moves: Sequence[tuple[uuid.UUID, dt.date]], reason: str, actor: Person, at: dt.datetime
) -> None:
    """Move several due days for one reason, all of them or none. A leaf ``check.due_moved`` for each.

    Refused: nothing chosen (``due_day.none_chosen``), and as moving each of them is.
    """
    if not moves:
        raise Invalid("due_day.none_chosen", field="moves")
    with transaction.atomic():
        for check, to_on in moves:
            due_days.move(check=check, to_on=to_on, reason=reason, actor=actor, at=at)
