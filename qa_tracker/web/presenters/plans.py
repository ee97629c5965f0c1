"""What a plan would ask for: its recurrence from the edition, its next due days, and who may answer for it."""

from __future__ import annotations

import datetime as dt

from qa_tracker.core import roles, schedule
from qa_tracker.core.roles import Grant
from qa_tracker.core.schedule import Due, SiteDays, Window
from qa_tracker.records.queries import people, sites
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.records.queries.people import PersonRow
from qa_tracker.records.queries.scope import Scope
from qa_tracker.services.plans import Recurrence

DATES_SHOWN = 6


def site_days(site_id: int | None) -> SiteDays:
    """When a site works; a pooled device goes by UTC with the usual weekend."""
    site = sites.site_by_id(site_id) if site_id else None
    if site is None:
        return SiteDays("UTC")
    return SiteDays(site.time_zone, frozenset(day - 1 for day in site.weekend), sites.holidays_of(site.id))


def next_days(recurrence: Recurrence, days: SiteDays) -> tuple[Due, ...]:
    """The next due days; counted from the last check, as if each were done on its day."""
    rule = schedule.parse_rule(recurrence.rule)
    window = Window(recurrence.before_days, recurrence.grace_days, recurrence.roll)
    schedule.check_basis(rule, recurrence.basis)
    if recurrence.basis == "calendar":
        found = [schedule.next_due(rule, "calendar", recurrence.anchor_on, None, window, days)]
    else:
        found = [schedule.due_for(recurrence.anchor_on, window, days)]
    while len(found) < DATES_SHOWN:
        last = found[-1].due_on
        anchor = recurrence.anchor_on if recurrence.basis == "calendar" else last
        found.append(schedule.next_due(rule, recurrence.basis, anchor, last, window, days))
    return tuple(found)


def fits(edition: EditionRow, device: DeviceRow) -> bool:
    """Whether a procedure is meant for a device."""
    meant = edition.spec.applies_to
    return (
        device.kind in meant.kinds
        and (not device.array_kind or meant.array_kinds is None or device.array_kind in meant.array_kinds)
        and (
            not device.contact_class
            or meant.contact_classes is None
            or device.contact_class in meant.contact_classes
        )
    )


def who_may_answer(scope: Scope, site_id: int | None, day: dt.date) -> list[PersonRow]:
    """Active people who may enter checks at a site."""
    return [
        person
        for person in people.list_people(scope)
        if person.active and roles.may(_grants(person), "check.enter_user", site_id, day)
    ]


def _grants(person: PersonRow) -> tuple[Grant, ...]:
    return tuple(Grant(each.role, each.site_id, each.from_on, each.until_on) for each in person.grants)
