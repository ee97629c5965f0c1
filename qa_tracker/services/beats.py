"""Which of many sweeps at once hints at what waits: a thousand old messages must not become a million hints."""

from __future__ import annotations

import datetime as dt

from qa_tracker.records.models import Heartbeat

HINTS = "hints"
HINTED_FOR = dt.timedelta(seconds=5)
"""How long hints are left to be taken before a sweep gives them again; well below the time between two beats."""


def first_to_hint(*, at: dt.datetime) -> bool:
    """Whether no sweep gave hints just before this one; by compare-and-set, so that one of many is told yes."""
    Heartbeat.objects.get_or_create(name=HINTS, defaults={"beat_at": at - 2 * HINTED_FOR})
    free = Heartbeat.objects.filter(name=HINTS, beat_at__lte=at - HINTED_FOR)
    return free.update(beat_at=at) == 1
