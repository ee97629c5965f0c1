"""Owing notices: the rows that say who must be told what, each exactly once."""

from __future__ import annotations

import datetime as dt
import uuid

from qa_tracker.core.ladder import Owed
from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import Check, Notice, NoticeMail, NoticeSeen, Person
from qa_tracker.records.queries.people import holders
from qa_tracker.records.writers import new_row

IN_APP_ALONE = ("in_app",)
BY_MAIL_TOO = ("in_app", "mail")


def channels_of(level: str) -> tuple[str, ...]:
    """Where a level is told: that a window opened is worth no mail, everything after it is."""
    return IN_APP_ALONE if level == "upcoming" else BY_MAIL_TOO


def owe(act: ledger.Act, check_id: int, check_uid: uuid.UUID, owed: Owed) -> list[str]:
    """Insert the notices of one level to one person, one for each channel, and return their keys."""
    keys = []
    for channel in channels_of(owed.level):
        notice = act.insert(
            new_row(
                Notice,
                uid=uuid7(),
                check_of_id=check_id,
                person_id=owed.person,
                recipient=owed.recipient,
                level=owed.level,
                channel=channel,
                at=act.at,
                skipped=",".join(owed.skipped),
            )
        )
        if channel == "mail":
            act.writer.insert(new_row(NoticeMail, notice_id=notice.pk))
        keys.append(f"{check_uid}/{owed.level}/{owed.person}/{channel}")
    return keys


def owe_suspension(act: ledger.Act, check: Check, *, performed_by: Person) -> None:
    """Tell the physicists of the site at once that a check gave the suspension verdict; each once for a check."""
    told = set(Notice.objects.filter(check_of=check, level="suspension").values_list("person_id", flat=True))
    for person_id in holders("physicist", check.site_id, act.at.date()):
        if person_id != performed_by.pk and person_id not in told:
            owe(act, check.pk, check.uid, Owed(person_id, "physicist", "suspension", ()))


def mark_seen(*, actor: Person, at: dt.datetime) -> None:
    """Remember that the actor looked at their notices. A reading mark: no leaf (see ``records/exempt.py``)."""
    NoticeSeen.objects.update_or_create(person=actor, defaults={"seen_at": at})
