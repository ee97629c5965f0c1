"""Mail under way: what waits for a digest, every digest with its tries, and the pauses of the sweep."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Collection
from dataclasses import dataclass

from django.db.models import Case, F, Min, QuerySet, When

from qa_tracker.records.models import Digest, DigestTry, NoticeMail, SweepGap
from qa_tracker.records.queries.scope import Scope

AWAITED = ("waiting", "claimed")


@dataclass(frozen=True)
class PendingRow:
    """One mail notice that no digest carries yet; ``round_the_clock`` tells of the room of the check's device."""

    id: int
    notice_uid: uuid.UUID
    level: str
    person_id: int
    check_id: int | None
    procedure_id: int | None
    site_id: int | None
    round_the_clock: bool


@dataclass(frozen=True)
class TryRow:
    """One try to hand a mail to the server: ``begun`` (and cut off), ``sent``, ``put_off`` or ``given_up``."""

    at: dt.datetime
    outcome: str
    reply: str


@dataclass(frozen=True)
class DigestRow:
    """One mail with all its tries."""

    id: int
    key: str
    message_id: str
    person: str
    person_uid: uuid.UUID
    email: str
    site_id: int | None
    day_on: dt.date
    state: str
    created_at: dt.datetime
    due_at: dt.datetime
    sent_at: dt.datetime | None
    reply: str
    notices: int
    tries: tuple[TryRow, ...]

    @property
    def kind(self) -> str:
        """``digest``, or what an immediate mail is about."""
        return self.key.partition("/")[0]


@dataclass(frozen=True)
class GapRow:
    """A time in which nothing swept."""

    began_at: dt.datetime
    ended_at: dt.datetime
    notices: int
    skipped: int


def pending_mail() -> list[PendingRow]:
    """Mail notices of active people that no digest carries yet, oldest first."""
    found = NoticeMail.objects.filter(digest=None, notice__person__is_active=True).order_by("id")
    columns = found.values_list(
        "id", "notice__uid", "notice__level", "notice__person_id", "notice__check_of_id",
        "notice__check_of__procedure_id",
        "notice__check_of__site_id", "notice__check_of__device__location__round_the_clock",
    )  # fmt: skip
    return [PendingRow(*row[:7], round_the_clock=bool(row[7])) for row in columns]


def tries_of(digest_ids: Collection[int]) -> dict[int, tuple[TryRow, ...]]:
    """Every try of some digests, in order."""
    tries: dict[int, list[TryRow]] = {}
    for each in DigestTry.objects.filter(digest_id__in=digest_ids).order_by("id"):
        tries.setdefault(each.digest_id, []).append(TryRow(each.at, each.outcome, each.reply))
    return {key: tuple(found) for key, found in tries.items()}


def list_digests(scope: Scope, *states: str, digest_id: int | None = None, most: int = 50) -> list[DigestRow]:
    """Mails to people whose duties are at a site in sight, newest first; of every state where none is named."""
    found = digests_in(scope)
    if states:
        found = found.filter(state__in=states)
    if digest_id is not None:
        found = found.filter(pk=digest_id)
    digests = list(found.select_related("person").prefetch_related("notices").order_by("-id")[:most])
    tries = tries_of([digest.pk for digest in digests])
    return [_row(digest, tries.get(digest.pk, ())) for digest in digests]


def count_digests(scope: Scope, *states: str) -> int:
    """How many mails in sight are in one of these states."""
    return digests_in(scope).filter(state__in=states).count()


def count_pending(scope: Scope) -> int:
    """How many mail notices wait for the letter of a person whose duties are at a site in sight."""
    found = NoticeMail.objects.filter(digest=None, notice__person__is_active=True)
    if not scope.whole_group:
        found = found.filter(notice__person__duties_site_id__in=scope.site_ids())
    return found.count()


def digests_in(scope: Scope) -> QuerySet[Digest]:
    """Mails to people whose duties are at a site in sight; of people without one only for the whole group."""
    if scope.whole_group:
        return Digest.objects.all()
    return Digest.objects.filter(person__duties_site_id__in=scope.site_ids())


def _row(digest: Digest, tries: tuple[TryRow, ...]) -> DigestRow:
    person = digest.person
    return DigestRow(
        digest.id, digest.key, digest.message_id, person.name, person.uid, person.email, person.duties_site_id,
        digest.day_on, digest.state, digest.created_at, digest.due_at, digest.sent_at, digest.reply,
        len(digest.notices.all()), tries,
    )  # fmt: skip


def waiting_since() -> dt.datetime | None:
    """Since when the mail that has waited longest is on its way: a try that was put off keeps it waiting."""
    # A mail that is sent again waits from then on, though it was made long before.
    since = Min(Case(When(attempts=0, then=F("due_at")), default=F("created_at")))
    moment: dt.datetime | None = Digest.objects.filter(state__in=AWAITED).aggregate(since=since)["since"]
    return moment


def failed_mail_count() -> int:
    """How many digests were given up."""
    return Digest.objects.filter(state="failed").count()


def list_gaps(*, since: dt.datetime | None = None, most: int = 20) -> list[GapRow]:
    """Times in which nothing swept, the latest first; ``since``: those that ended then or later."""
    found = SweepGap.objects.filter(ended_at__gte=since) if since else SweepGap.objects.all()
    return [
        GapRow(each.began_at, each.ended_at, each.notices, each.skipped)
        for each in found.order_by("-began_at")[:most]
    ]
