"""Mail: one digest a person and local day, claimed with a lease, sent with a fixed Message-ID.

A crash between sending and marking repeats the mail with the same Message-ID; nothing is lost.
"""

from __future__ import annotations

import datetime as dt
import hashlib
import smtplib
import zoneinfo

from django.conf import settings
from django.core.mail import EmailMessage, get_connection
from django.core.mail.backends.smtp import EmailBackend
from django.db import transaction
from django.db.models import F, Q
from django.db.models.functions import Now

from qa_tracker.records.models import Digest, Notice, NoticeMail, Person, Site
from qa_tracker.records.queries.notices import notices_in, waiting_digests
from qa_tracker.services import plans, wording

RETRY_AFTER_MIN = (1, 5, 15, 60)
IMMEDIATE = ("suspension",)


def make_digests(*, at: dt.datetime, as_if: dt.datetime | None = None) -> int:
    """Make the digests whose hour has come and the immediate mails; return how many.

    The mail's state is no record (see ``records/exempt.py``); the notices it carries have their leaf.
    """
    made = 0
    pending = NoticeMail.objects.filter(digest=None)
    for mail in pending.filter(notice__level__in=IMMEDIATE).select_related("notice__person"):
        notice = mail.notice
        key = f"immediate/{notice.uid}"
        made += _make(key, notice.person, at, (as_if or at).date(), Q(notice=notice))
    people = pending.exclude(notice__level__in=IMMEDIATE).values_list("notice__person_id", flat=True)
    for person in Person.objects.filter(pk__in=set(people)):
        day_on = _digest_day(person, as_if or at)
        if day_on is not None:
            wanted = Q(notice__person=person) & ~Q(notice__level__in=IMMEDIATE)
            made += _make(f"digest/{person.uid}/{day_on}", person, at, day_on, wanted)
    return made


def _digest_day(person: Person, moment: dt.datetime) -> dt.date | None:
    """The person's local day, if its digest hour has come and the site works that day."""
    site: Site | None = person.duties_site
    days = plans.site_days(site)
    local = moment.astimezone(zoneinfo.ZoneInfo(days.zone))
    hour = site.digest_hour if site else 7
    return local.date() if local.hour >= hour and days.is_working(local.date()) else None


def _make(key: str, person: Person, at: dt.datetime, day_on: dt.date, wanted: Q) -> int:
    name = hashlib.sha256(key.encode()).hexdigest()[:32]
    with transaction.atomic():
        digest, created = Digest.objects.get_or_create(
            key=key,
            defaults={
                "person": person,
                "message_id": f"<{name}@{settings.MAIL_DOMAIN}>",
                "day_on": day_on,
                "created_at": at,
                "due_at": at,
            },
        )
        if created:
            NoticeMail.objects.filter(wanted, digest=None).update(digest=digest)
    return int(created)


def claim(*, digest_id: int) -> bool:
    """Take a digest to send, by compare-and-set on the database's clock; no one else has it until the lease ends."""
    free = Q(state="waiting", due_at__lte=Now()) | Q(state="claimed", lease_until__lt=Now())
    taken = Digest.objects.filter(free, pk=digest_id).update(
        state="claimed",
        lease_until=Now() + dt.timedelta(seconds=settings.MAIL_LEASE_S),
        attempts=F("attempts") + 1,
    )
    return taken == 1


def deliver(*, digest_id: int, at: dt.datetime) -> bool:
    """Claim, send and mark one digest; return whether the server took it.

    A refusal or an unreachable server is retried after 1, 5, 15 and 60 minutes, then given up in red.
    """
    if not claim(digest_id=digest_id):
        return False
    digest = Digest.objects.select_related("person").get(pk=digest_id)
    try:
        reply = _send(digest)
    except (OSError, smtplib.SMTPException) as error:
        _put_off(digest, at, str(error))
        return False
    Digest.objects.filter(pk=digest_id).update(state="sent", sent_at=at, reply=reply[:300], lease_until=None)
    return True


def deliver_waiting(*, at: dt.datetime) -> int:
    """Deliver every digest that waits; return how many the server took. For the second heart and the command."""
    return sum(deliver(digest_id=digest_id, at=at) for digest_id in waiting_digests())


def _put_off(digest: Digest, at: dt.datetime, why: str) -> None:
    late = digest.attempts > len(RETRY_AFTER_MIN)
    columns: dict[str, object] = {"state": "failed"}
    if not late:
        columns = {
            "state": "waiting",
            "due_at": at + dt.timedelta(minutes=RETRY_AFTER_MIN[digest.attempts - 1]),
        }
    Digest.objects.filter(pk=digest.pk, state="claimed").update(reply=why[:300], lease_until=None, **columns)


def _send(digest: Digest) -> str:
    """Hand the mail to the server and return its reply to the data."""
    subject, body = wording.digest_letter(digest.person.name, notices_in(digest.pk), settings.BASE_URL)
    message = EmailMessage(
        subject,
        body,
        settings.DEFAULT_FROM_EMAIL,
        [digest.person.email],
        headers={"Message-ID": digest.message_id, "Auto-Submitted": "auto-generated"},
    )
    backend = get_connection()
    if not isinstance(backend, EmailBackend):
        return f"handed over: {backend.send_messages([message])}"
    backend.open()
    try:
        return _transact(backend, message, digest.person.email)
    finally:
        backend.close()


def _transact(backend: EmailBackend, message: EmailMessage, to: str) -> str:
    """One SMTP transaction, kept by hand because Django's own drops the server's reply."""
    server = backend.connection
    if server is None:
        raise smtplib.SMTPServerDisconnected("no connection to the mail server")
    server.ehlo_or_helo_if_needed()
    refused = server.mail(settings.DEFAULT_FROM_EMAIL)
    if refused[0] != 250:
        raise smtplib.SMTPResponseException(*refused)
    refused = server.rcpt(to)
    if refused[0] not in (250, 251):
        raise smtplib.SMTPResponseException(*refused)
    code, reply = server.data(_with_crlf(message.message().as_bytes()))
    if code != 250:
        raise smtplib.SMTPDataError(code, reply)
    return f"{code} {reply.decode('utf-8', 'replace')}"


def _with_crlf(data: bytes) -> bytes:
    return data.replace(b"\r\n", b"\n").replace(b"\n", b"\r\n")


def pending_notices() -> int:
    """How many mail notices wait for a digest."""
    return Notice.objects.filter(mail__digest=None, channel="mail").count()
