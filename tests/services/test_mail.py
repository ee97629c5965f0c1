"""Delivering mail through a real SMTP server on loopback: once, with one Message-ID, retried when refused."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Digest
from qa_tracker.services import mail, sweep
from tests import builders
from tests.mail_server import serving

pytestmark = pytest.mark.django_db


@pytest.fixture
def server(settings):
    with serving() as running:
        settings.EMAIL_BACKEND = "django.core.mail.backends.smtp.EmailBackend"
        settings.EMAIL_HOST, settings.EMAIL_PORT = "127.0.0.1", running.port
        yield running


@pytest.fixture
def digest(db):
    ward = builders.ward()
    moment = ward.check.overdue_at + dt.timedelta(hours=9)
    while moment.weekday() > 4:
        moment += dt.timedelta(days=1)
    sweep.sweep(at=now(), as_if=moment)
    mail.make_digests(at=now(), as_if=moment)
    return Digest.objects.get()


def test_digest_is_sent_with_its_message_id_and_the_servers_reply_is_kept(server, digest):
    assert mail.deliver(digest_id=digest.pk, at=now())
    digest.refresh_from_db()
    assert (digest.state, digest.reply) == ("sent", "250 2.0.0 kept as 7F3A")
    (letter,) = server.accepted
    assert letter["Message-ID"] == digest.message_id
    assert "Monthly in-air and visual" in letter.get_content()
    assert letter["To"] == "castellane@tarnwater.invalid"


def test_sent_digest_is_not_sent_again(server, digest):
    mail.deliver(digest_id=digest.pk, at=now())
    assert not mail.deliver(digest_id=digest.pk, at=now())
    assert len(server.accepted) == 1


def test_claimed_digest_is_left_to_its_worker_until_the_lease_ends(server, digest):
    assert mail.claim(digest_id=digest.pk)
    assert not mail.deliver(digest_id=digest.pk, at=now())
    Digest.objects.filter(pk=digest.pk).update(lease_until=now() - dt.timedelta(seconds=1))
    assert mail.deliver(digest_id=digest.pk, at=now())


def test_refused_mail_is_retried_after_1_5_15_60_minutes_then_given_up(server, digest):
    server.answer = "451 4.3.0 try again later"
    waits = []
    for _attempt in range(5):
        at = now()
        assert not mail.deliver(digest_id=digest.pk, at=at)
        digest.refresh_from_db()
        waits.append((digest.due_at - at).total_seconds() / 60 if digest.state == "waiting" else digest.state)
        Digest.objects.filter(pk=digest.pk).update(due_at=at)
    assert waits == [1, 5, 15, 60, "failed"]
    assert "451" in digest.reply


def test_unreachable_server_loses_nothing(settings, digest):
    settings.EMAIL_BACKEND = "django.core.mail.backends.smtp.EmailBackend"
    settings.EMAIL_HOST, settings.EMAIL_PORT = "127.0.0.1", 9
    assert not mail.deliver(digest_id=digest.pk, at=now())
    digest.refresh_from_db()
    assert digest.state == "waiting"
