"""Who knows of an awaited check, why, and until when."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Collection
from dataclasses import dataclass

from qa_tracker.records.models import NoticeHold


@dataclass(frozen=True)
class HoldRow:
    """One hold: ``acknowledged`` keeps the ladder from climbing, ``snoozed`` the person's own notices."""

    uid: uuid.UUID
    check_id: int
    person_id: int
    person: str
    kind: str
    reason: str
    held_at: dt.datetime
    until_at: dt.datetime
    ended_at: dt.datetime | None

    def in_force(self, at: dt.datetime) -> bool:
        """Whether it holds at a moment: at its end it holds no longer."""
        return self.ended_at is None and at < self.until_at


def _row(hold: NoticeHold) -> HoldRow:
    return HoldRow(
        hold.uid, hold.check_of_id, hold.person_id, hold.person.name, hold.kind, hold.reason, hold.held_at,
        hold.until_at, hold.ended_at,
    )  # fmt: skip


def holds_of(check_ids: Collection[int], at: dt.datetime) -> dict[int, list[HoldRow]]:
    """The holds in force at a moment, by check; a check without any is left out."""
    found = NoticeHold.objects.filter(check_of_id__in=check_ids, ended_at=None, until_at__gt=at)
    held: dict[int, list[HoldRow]] = {}
    for hold in found.select_related("person").order_by("id"):
        held.setdefault(hold.check_of_id, []).append(_row(hold))
    return held


def holds_of_check(check_id: int) -> list[HoldRow]:
    """Every hold there was of a check, oldest first."""
    found = NoticeHold.objects.filter(check_of_id=check_id).select_related("person")
    return [_row(hold) for hold in found.order_by("id")]
