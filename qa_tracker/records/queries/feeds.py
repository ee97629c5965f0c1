"""What a calendar feed shows beside the forecast's rows: names that last, places, and when a check was changed."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from qa_tracker.records.models import Check
from qa_tracker.records.queries.forecast import PlannedRow, planned
from qa_tracker.records.queries.scope import Scope


@dataclass(frozen=True)
class FeedRow:
    """An awaited check with its plan; ``revision`` counts its changes, ``revised_at`` is when it began to be awaited."""

    row: PlannedRow
    plan_uid: uuid.UUID
    device_uid: uuid.UUID
    place: str
    revised_at: dt.datetime
    revision: int


def feed_rows(scope: Scope, until_on: dt.date) -> list[FeedRow]:
    """The awaited checks in sight due by a day, however old; in two queries."""
    rows = {row.check_id: row for row in planned(scope, until_on)}
    columns = ("id", "plan__uid", "device__uid", "site__name", "device__location__name", "uid", "version")
    found = Check.objects.filter(id__in=list(rows)).order_by("id").values_list(*columns)
    return [
        FeedRow(
            rows[key],
            plan,
            device,
            ", ".join(part for part in (room, site) if part),
            _made_at(uid),
            version - 1,
        )
        for key, plan, device, site, room, uid, version in found
    ]


def _made_at(uid: uuid.UUID) -> dt.datetime:
    """The moment in a version 7 identifier (RFC 9562 5.7), to the second."""
    return dt.datetime.fromtimestamp((uid.int >> 80) // 1000, dt.UTC)
