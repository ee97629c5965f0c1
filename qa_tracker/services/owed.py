"""Owing notices: the rows that say who must be told what, each exactly once."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import Check, Notice, NoticeMail, NoticeSeen, Person
from qa_tracker.records.queries.people import holders

CHANNELS = {
    "upcoming": ("in_app",),
    "due": ("in_app", "mail"),
    "late": ("in_app", "mail"),
    "overdue": ("in_app", "mail"),
    "suspension": ("in_app", "mail"),
}


def owe(act: ledger.Act, check: Check, person_id: int, level: str, skipped: Sequence[str] = ()) -> list[str]:
    """Insert the notices of one level to one person that aren't there yet, and return their keys."""
    keys = []
    known = set(
        Notice.objects.filter(check_of=check, level=level, person_id=person_id).values_list(
            "channel", flat=True
        )
    )
    for channel in CHANNELS[level]:
        if channel in known:
            continue
        notice = act.insert(
            Notice(
                uid=uuid7(),
                check_of=check,
                person_id=person_id,
                level=level,
                channel=channel,
                at=act.at,
                skipped=",".join(skipped),
            )
        )
        if channel == "mail":
            act.writer.insert(NoticeMail(notice=notice))
        keys.append(f"{check.uid}/{level}/{person_id}/{channel}")
    return keys


def owe_suspension(act: ledger.Act, check: Check, *, performed_by: Person) -> None:
    """Tell the physicists of the site at once that a check gave the suspension verdict."""
    for person_id in holders("physicist", check.site_id, act.at.date()):
        if person_id != performed_by.pk:
            owe(act, check, person_id, "suspension")


def mark_seen(*, actor: Person, at: dt.datetime) -> None:
    """Remember that the actor looked at their notices. A reading mark: no leaf (see ``records/exempt.py``)."""
    NoticeSeen.objects.update_or_create(person=actor, defaults={"seen_at": at})
