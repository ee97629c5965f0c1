"""Who is on duty on a day (stand-in until the teams are there: E4 replaces this file)."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from qa_tracker.records.models import Person


@dataclass(frozen=True)
class Duties:
    """Who is on duty on one day."""

    active: frozenset[int]

    def of(self, responsible_id: int | None, team_id: int | None) -> tuple[int, ...]:
        """Keys of the people on duty."""
        return (responsible_id,) if responsible_id in self.active and responsible_id is not None else ()


def load(on: dt.date) -> Duties:
    """Read the duties of a day."""
    return Duties(frozenset(Person.objects.filter(is_active=True).values_list("id", flat=True)))
