"""Frozen occurrences to an iCalendar file (RFC 5545): all-day events, the same bytes for the same rows."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable
from dataclasses import dataclass

from icalendar import Calendar, Event

PRODUCT = "-//Leadline//Calendar of due checks//EN"
NEXT_DAY = dt.timedelta(days=1)


@dataclass(frozen=True)
class Occurrence:
    """One check that is due on a local day, in the words people read.

    ``slot_on`` is the rule's own day and stays when the due day is moved, so that ``uid`` stays too. ``revised_at``
    is when it was last changed, ``revision`` how often.
    """

    plan_uid: str
    slot_on: dt.date
    due_on: dt.date
    revised_at: dt.datetime
    revision: int
    summary: str
    description: str
    location: str
    url: str

    @property
    def uid(self) -> str:
        """The name of the event for ever (RFC 5545 3.8.4.7)."""
        return f"{self.plan_uid}-{self.slot_on:%Y%m%d}@leadline"


def render(name: str, occurrences: Iterable[Occurrence]) -> bytes:
    """The calendar with one event for each occurrence, by day and then by name.

    No occurrence gives a calendar without events. Text is escaped and folded at 75 octets (RFC 5545 3.1, 3.3.11).
    """
    calendar = Calendar()
    calendar.add("prodid", PRODUCT)
    calendar.add("version", "2.0")
    calendar.add("calscale", "GREGORIAN")
    calendar.add("x-wr-calname", name)
    for each in sorted(occurrences, key=lambda one: (one.due_on, one.uid)):
        calendar.add_component(_event(each))
    content: bytes = calendar.to_ical()
    return content


def _event(each: Occurrence) -> Event:
    event = Event()
    event.add("uid", each.uid)
    event.add("dtstamp", each.revised_at.astimezone(dt.UTC))
    event.add("last-modified", each.revised_at.astimezone(dt.UTC))
    event.add("sequence", each.revision)
    event.add("dtstart", each.due_on)
    event.add("dtend", each.due_on + NEXT_DAY)
    event.add("transp", "TRANSPARENT")
    event.add("summary", each.summary)
    event.add("description", each.description)
    if each.location:
        event.add("location", each.location)
    event.add("url", each.url)
    return event
