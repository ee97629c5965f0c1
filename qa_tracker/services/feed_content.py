"""What stands in a person's calendar feed: the checks they are on duty for, to a year ahead."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator

from django.utils.translation import gettext as _

from qa_tracker.core import forecast, schedule
from qa_tracker.core.forecast import Course
from qa_tracker.core.schedule import SiteDays, Window
from qa_tracker.exchange.calendar_feed import Occurrence, render
from qa_tracker.records.models import Person, Site
from qa_tracker.records.queries.feeds import FeedRow, feed_rows
from qa_tracker.records.queries.forecast import PlannedRow
from qa_tracker.records.queries.scope import scope_of
from qa_tracker.services import on_duty, plans
from qa_tracker.services.on_duty import Duties
from qa_tracker.services.wording_words import day_words

AHEAD = dt.timedelta(days=366)
MOMENT = dt.timedelta(microseconds=1)


class _Ground:
    """What is read once for all plans: the days of sites, and who is on duty on each day."""

    def __init__(self, today: dt.date) -> None:
        self.today = today
        self.until_on = today + AHEAD
        self.sites: dict[int | None, SiteDays] = {}
        self.duties: dict[dt.date, Duties] = {}

    def days(self, site_id: int | None) -> SiteDays:
        if site_id not in self.sites:
            self.sites[site_id] = plans.site_days(
                Site.objects.filter(id=site_id).first() if site_id else None
            )
        return self.sites[site_id]

    def has_duty(self, person: Person, row: PlannedRow, day: dt.date) -> bool:
        """Whether a check due on a day is the person's; who has an old one today counts, not who had it then."""
        day = max(day, self.today)
        if day not in self.duties:
            self.duties[day] = on_duty.load(day)
        return person.pk in self.duties[day].of(row.responsible_id, row.team_id)


def as_file(person: Person, base_url: str, at: dt.datetime) -> bytes:
    """The feed of a person as iCalendar bytes: the same while nothing changes."""
    return render(_("Checks due"), content(person, base_url, at))


def content(person: Person, base_url: str, at: dt.datetime) -> list[Occurrence]:
    """The awaited checks of a person, however old, and their plans' occurrences up to a year ahead.

    Only what is in the person's sight today. Done, missed and excused checks are left out.
    """
    ground = _Ground(at.date())
    rows = feed_rows(scope_of(person.pk, at.date()), ground.until_on)
    return [
        _occurrence(each, day, ground.days(each.row.site_id), base_url)
        for each in rows
        for day in _due(each.row, ground)
        if ground.has_duty(person, each.row, day)
    ]


def _due(row: PlannedRow, ground: _Ground) -> Iterator[dt.date]:
    window = Window(row.before_days, row.grace_days, row.roll)
    course = Course(row.rule, row.basis, row.anchor_on, window, row.due_on, row.slot_on or row.due_on)
    days = forecast.due_days(course, ground.days(row.site_id), ground.until_on)
    # Days that passed unasked are not owed: one check of a plan is awaited at a time.
    yield from (day for day in days if day == row.due_on or day >= ground.today)


def _occurrence(each: FeedRow, day: dt.date, site: SiteDays, base_url: str) -> Occurrence:
    row = each.row
    device = " ".join(part for part in (row.maker, row.model, row.serial) if part)
    awaited = day == row.due_on
    last_on = day + dt.timedelta(days=row.grace_days)
    if awaited:
        last_on = schedule.local_day(row.overdue_at - MOMENT, site.zone)
    return Occurrence(
        plan_uid=str(each.plan_uid),
        slot_on=(row.slot_on or day) if awaited else day,
        due_on=day,
        revised_at=each.revised_at,
        revision=each.revision if awaited else 0,
        summary=_("%(procedure)s: %(device)s") % {"procedure": row.procedure, "device": device},
        description=_("Due on %(due)s. Last day of grace: %(last)s.")
        % {"due": day_words(day), "last": day_words(last_on)},
        location=each.place,
        url=f"{base_url}/checks/{row.check_uid}/" if awaited else f"{base_url}/devices/{each.device_uid}/",
    )
