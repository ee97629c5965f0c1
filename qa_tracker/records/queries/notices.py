"""Notices owed, the mail that carries them, and the pulse of the sweep."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Iterable
from dataclasses import dataclass, replace

from django.db.models import Q
from django.db.models.functions import Now

from qa_tracker.records.models import Check, Digest, Heartbeat, Notice, NoticeSeen
from qa_tracker.records.queries.mail import TryRow, tries_of


@dataclass(frozen=True)
class NoticeRow:
    """One message to one person about one check, or (``check_uid`` empty) about what ``about`` names.

    ``recipient`` is the rung by which the person was told; ``mail_kind`` is ``digest``, or what a mail sent at once
    is about; ``addressee`` is whose mail an administrator's notice is about.
    """

    uid: uuid.UUID
    check_uid: uuid.UUID | None
    device_label: str
    procedure: str
    site_code: str
    due_on: dt.date | None
    person: str
    level: str
    channel: str
    at: dt.datetime
    skipped: str
    digest_state: str
    sent_at: dt.datetime | None
    reply: str
    about: str = ""
    recipient: str = ""
    location: str = ""
    responsible: str = ""
    check_state: str = ""
    mail_kind: str = ""
    addressee: str = ""
    tries: tuple[TryRow, ...] = ()

    @property
    def skipped_levels(self) -> tuple[str, ...]:
        """Levels that passed without a notice before this one."""
        return tuple(level for level in self.skipped.split(",") if level)


_JOINS = (
    "check_of__device__location", "check_of__procedure", "check_of__site", "check_of__plan__responsible",
    "check_of__plan__team", "person", "mail__digest",
)  # fmt: skip


def _rows(notices: Iterable[Notice], *, with_tries: bool = False) -> list[NoticeRow]:
    found = list(notices)
    digests = {notice.pk: _digest(notice) for notice in found}
    keys = {digest.pk for digest in digests.values() if digest} if with_tries else set()
    tries, addressees = tries_of(keys) if keys else {}, _addressees(found)
    rows = []
    for notice in found:
        digest = digests[notice.pk]
        rows.append(
            replace(
                _row(notice, digest),
                addressee=addressees.get(notice.about, ""),
                tries=tries.get(digest.pk, ()) if digest else (),
            )
        )
    return rows


def _digest(notice: Notice) -> Digest | None:
    mail = getattr(notice, "mail", None)
    return mail.digest if mail else None


def _row(notice: Notice, digest: Digest | None) -> NoticeRow:
    row = NoticeRow(
        notice.uid, None, "", "", "", None, notice.person.name, notice.level, notice.channel, notice.at,
        notice.skipped, digest.state if digest else "", digest.sent_at if digest else None,
        digest.reply if digest else "", notice.about, notice.recipient,
        mail_kind=digest.key.partition("/")[0] if digest else "",
    )  # fmt: skip
    return _about_check(row, notice.check_of) if notice.check_of else row


def _about_check(row: NoticeRow, check: Check) -> NoticeRow:
    device, plan = check.device, check.plan
    who = (plan.responsible or plan.team) if plan else None
    return replace(
        row,
        check_uid=check.uid,
        device_label=f"{device.maker} {device.model} {device.serial}",
        procedure=check.procedure.title,
        site_code=check.site.code if check.site else "",
        due_on=check.due_on,
        location=device.location.name if device.location else "",
        responsible=who.name if who else "",
        check_state=check.state,
    )


def _addressees(notices: Iterable[Notice]) -> dict[str, str]:
    """Whose mail each notice about a mail is about, by the mail's key."""
    keys = {notice.about for notice in notices if notice.about}
    if not keys:
        return {}
    return dict(Digest.objects.filter(key__in=keys).values_list("key", "person__name"))


def notices_for(person_id: int, most: int = 100) -> list[NoticeRow]:
    """A person's in-app notices, newest first."""
    found = Notice.objects.filter(person_id=person_id, channel="in_app").select_related(*_JOINS)
    return _rows(found.order_by("-id")[:most])


def unseen_count(person_id: int) -> int:
    """How many in-app notices came since the person last looked."""
    seen = NoticeSeen.objects.filter(person_id=person_id).values_list("seen_at", flat=True).first()
    found = Notice.objects.filter(person_id=person_id, channel="in_app")
    return found.filter(at__gt=seen).count() if seen else found.count()


def notices_of_check(check_id: int) -> list[NoticeRow]:
    """Every notice about a check, oldest first, each mail with its tries."""
    found = Notice.objects.filter(check_of_id=check_id).select_related(*_JOINS)
    return _rows(found.order_by("id"), with_tries=True)


def notices_in(digest_id: int) -> list[NoticeRow]:
    """What a digest carries, by site, due day and device."""
    found = Notice.objects.filter(mail__digest_id=digest_id).select_related(*_JOINS)
    return _rows(found.order_by("check_of__site__code", "check_of__due_on", "id"))


def waiting_digests() -> list[int]:
    """Keys of digests to deliver now: waiting and due, or claimed with the lease run out."""
    ready = Q(state="waiting", due_at__lte=Now()) | Q(state="claimed", lease_until__lt=Now())
    return list(Digest.objects.filter(ready).order_by("due_at", "id").values_list("id", flat=True))


def beat_of(heart: str) -> dt.datetime | None:
    """When a heart last beat."""
    return Heartbeat.objects.filter(name=heart).values_list("beat_at", flat=True).first()


def last_sweep() -> dt.datetime | None:
    """When a sweep last ran to its end."""
    return beat_of("sweep")
