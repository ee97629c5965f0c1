"""A page as it was known at the end of a past day."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from django.http import HttpRequest

from qa_tracker.core.schedule import local_day_bounds


@dataclass(frozen=True)
class Known:
    """The moment a page speaks of; ``moment`` is None for now, ``wrong`` holds what was no day."""

    day_on: dt.date | None = None
    moment: dt.datetime | None = None
    wrong: str = ""

    @property
    def query(self) -> str:
        """What keeps the day in the addresses of a page."""
        return f"?as_of={self.day_on.isoformat()}" if self.day_on else ""


def known(request: HttpRequest, zone: str, at: dt.datetime) -> Known:
    """The end of the day asked for, by a site's clock; a day not yet over is now."""
    asked = request.GET.get("as_of", "").strip()
    if not asked:
        return Known()
    try:
        day_on = dt.date.fromisoformat(asked)
        ended_at = local_day_bounds(day_on, zone)[1]
    except (ValueError, OverflowError):
        return Known(wrong=asked)
    return Known(day_on, ended_at) if ended_at <= at else Known()
