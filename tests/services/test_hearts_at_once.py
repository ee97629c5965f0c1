"""The beat and the second heart at the same moment: every notice in one mail, every mail once, given up once."""

from __future__ import annotations

import threading
from concurrent.futures import ThreadPoolExecutor

import pytest
from django.db import connections
from django.utils.timezone import now
from notice_ground import moment, owe

from qa_tracker.records.models import Digest, DigestTry, Notice, NoticeMail
from qa_tracker.records.models.ledger import Leaf
from qa_tracker.services import digests, mail, sweep
from tests import builders
from tests.mail_server import serving

HEARTS = 4


@pytest.fixture
def server(settings):
    with serving() as running:
        settings.EMAIL_BACKEND = "django.core.mail.backends.smtp.EmailBackend"
        settings.EMAIL_HOST, settings.EMAIL_PORT = "127.0.0.1", running.port
        yield running


def beat_at_once():
    """Every heart sweeps, makes the mails and delivers them, all at the same moment."""
    together = threading.Barrier(HEARTS)

    def beat(_number: int) -> None:
        together.wait(10)
        try:
            sweep.sweep(at=now())
            digests.make_digests(at=now(), as_if=moment(9))
            mail.deliver_waiting(at=now())
        finally:
            connections.close_all()

    with ThreadPoolExecutor(HEARTS) as threads:
        list(threads.map(beat, range(HEARTS)))


def test_hearts_that_beat_at_once_send_each_person_one_mail(committed_db, server):
    ward = builders.ward()
    for person in (ward.technician, ward.physicist, ward.user):
        owe(ward.check, person, "late")
        owe(ward.check, person, "suspension", "physicist")
    beat_at_once()
    letters = [(letter["To"], letter["Message-ID"]) for letter in server.accepted]
    assert len(letters) == len(set(letters)) == Digest.objects.filter(state="sent").count() == 6
    assert NoticeMail.objects.filter(digest=None).count() == 0


def test_hearts_that_beat_at_once_give_a_mail_up_once(committed_db, server):
    ward = builders.ward()
    owe(ward.check, ward.technician, "late")
    server.answer = "550 5.1.1 no such mailbox"
    beat_at_once()
    assert DigestTry.objects.filter(digest__person=ward.technician, outcome="given_up").count() == 1
    assert Notice.objects.filter(level="mail_failed").count() == 1
    assert Leaf.objects.filter(kind="mail.given_up").count() == 1
