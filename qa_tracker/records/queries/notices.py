"""Notices owed, the mail that carries them, and the pulse of the sweep."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from django.db.models import Q
from django.db.models.functions import Now

from qa_tracker.records.models import Digest, Heartbeat, Notice, NoticeSeen


@dataclass(frozen=True)
class NoticeRow:
    """One message to one person about one check."""

    uid: uuid.UUID
    check_uid: uuid.UUID
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


def _row(notice: Notice) -> NoticeRow:
    check, mail = notice.check_of, getattr(notice, "mail", None)
    digest = mail.digest if mail else None
    device = check.device
    return NoticeRow(
        notice.uid, check.uid, f"{device.maker} {device.model} {device.serial}", check.procedure.title,
        check.site.code if check.site else "", check.due_on, notice.person.name, notice.level,
        notice.channel, notice.at, notice.skipped, digest.state if digest else "",
        digest.sent_at if digest else None, digest.reply if digest else "",
    )  # fmt: skip


_JOINS = ("check_of__device", "check_of__procedure", "check_of__site", "person", "mail__digest")


def notices_for(person_id: int, most: int = 100) -> list[NoticeRow]:
    """A person's in-app notices, newest first."""
    found = Notice.objects.filter(person_id=person_id, channel="in_app").select_related(*_JOINS)
    return [_row(notice) for notice in found.order_by("-id")[:most]]


def unseen_count(person_id: int) -> int:
    """How many in-app notices came since the person last looked."""
    seen = NoticeSeen.objects.filter(person_id=person_id).values_list("seen_at", flat=True).first()
    found = Notice.objects.filter(person_id=person_id, channel="in_app")
    return found.filter(at__gt=seen).count() if seen else found.count()


def notices_of_check(check_id: int) -> list[NoticeRow]:
    """Every notice about a check, oldest first."""
    found = Notice.objects.filter(check_of_id=check_id).select_related(*_JOINS)
    return [_row(notice) for notice in found.order_by("id")]


def notices_in(digest_id: int) -> list[NoticeRow]:
    """What a digest carries, by site, due day and device."""
    found = Notice.objects.filter(mail__digest_id=digest_id).select_related(*_JOINS)
    return [_row(each) for each in found.order_by("check_of__site__code", "check_of__due_on", "id")]


def waiting_digests() -> list[int]:
    """Keys of digests to deliver now: waiting and due, or claimed with the lease run out."""
    ready = Q(state="waiting", due_at__lte=Now()) | Q(state="claimed", lease_until__lt=Now())
    return list(Digest.objects.filter(ready).order_by("due_at", "id").values_list("id", flat=True))


def oldest_waiting_mail() -> dt.datetime | None:
    """Since when the oldest digest that is due has been waiting."""
    found = Digest.objects.filter(state__in=("waiting", "claimed"), due_at__lte=Now())
    return found.order_by("due_at").values_list("due_at", flat=True).first()


def failed_mail_count() -> int:
    """How many digests were given up."""
    return Digest.objects.filter(state="failed").count()


def last_sweep() -> dt.datetime | None:
    """When a sweep last ran to its end."""
    return Heartbeat.objects.filter(name="sweep").values_list("beat_at", flat=True).first()
