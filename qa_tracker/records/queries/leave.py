"""Who is away, until when, and who stands in."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Collection
from dataclasses import dataclass

from django.db.models import Q

from qa_tracker.records.models import Leave


@dataclass(frozen=True)
class LeaveRow:
    """A leave; both days are included."""

    uid: uuid.UUID
    person_id: int
    person: str
    deputy_id: int
    deputy: str
    from_on: dt.date
    until_on: dt.date
    note: str


def leave_from(day: dt.date, person_ids: Collection[int]) -> list[LeaveRow]:
    """Leave of these people, or for which one of them stands in, that has not ended before a day; soonest first."""
    theirs = Q(person_id__in=person_ids) | Q(deputy_id__in=person_ids)
    found = Leave.objects.filter(theirs, until_on__gte=day, cancelled_at=None)
    return [
        LeaveRow(
            each.uid, each.person_id, each.person.name, each.deputy_id, each.deputy.name, each.from_on,
            each.until_on, each.note,
        )
        for each in found.select_related("person", "deputy").order_by("from_on", "id")
    ]  # fmt: skip
