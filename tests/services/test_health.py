"""How the program is: when it is unwell, and what it says to do."""

from __future__ import annotations

import datetime as dt

import pytest
from django.db import OperationalError
from django.utils.timezone import now

from qa_tracker.records.models import Digest, Heartbeat
from qa_tracker.records.queries import mail
from qa_tracker.services import health as healths
from qa_tracker.services.health import Health, health
from qa_tracker.services.start import note_start
from qa_tracker.services.wording import health_sentence
from qa_tracker.services.wording_health import REASONS
from tests import builders

AT = dt.datetime(2025, 3, 9, 7, tzinfo=dt.UTC)
MINUTE = dt.timedelta(minutes=1)
TABLE = [
    (
        "starting",
        Health("starting", (), None, None),
        "The program has started; the first sweep is still to come.",
    ),
    (
        "well",
        Health("healthy", (), AT, None),
        "All is well; the sweep last ran on 9 March 2025 at 07:00 UTC.",
    ),
    (
        "a late sweep",
        Health("unhealthy", ("sweep_late",), AT, None),
        "The sweep last ran on 9 March 2025 at 07:00 UTC, so no check moves and nobody is told. Start the worker "
        "and the beat again, or run the sweep by hand: manage.py sweep.",
    ),
    (
        "mail late and given up",
        Health("unhealthy", ("mail_late", "mail_failed"), AT, AT),
        "Mail has been waiting since 9 March 2025 at 07:00 UTC. Check that the worker runs and that the mail server "
        "answers; it is tried again by itself. Some mail was given up. An administrator finds the server's answers "
        "under Mail, mends the cause and sends it again.",
    ),
]


@pytest.mark.parametrize(("health", "sentence"), [row[1:] for row in TABLE], ids=[row[0] for row in TABLE])
def test_health_reads(health, sentence):
    assert health_sentence(health) == sentence


def test_every_reason_says_what_to_do():
    assert set(REASONS) == {"database", "sweep_never", "sweep_late", "mail_late", "mail_failed"}


@pytest.fixture
def beaten(db):
    Heartbeat.objects.create(name="sweep", beat_at=AT)


@pytest.mark.parametrize(("minutes", "reasons"), [(3, ()), (3.1, ("sweep_late",))])
def test_sweep_is_late_after_three_minutes(beaten, minutes, reasons):
    assert health(at=AT + minutes * MINUTE).reasons == reasons


def test_sweep_that_never_came_is_late_three_minutes_after_the_start(db):
    assert health(at=AT).status == "starting"
    note_start(at=AT)
    note_start(at=AT + 9 * MINUTE)
    assert health(at=AT + 3 * MINUTE).status == "starting"
    assert health(at=AT + 3.1 * MINUTE).reasons == ("sweep_never",)


def waiting(**given):
    """A mail made at AT, in this state."""
    person = builders.first_administrator()
    told = {"created_at": AT, "due_at": AT, "day_on": AT.date(), "key": "k", "message_id": "m"}
    return Digest.objects.create(person=person, **told | given)


@pytest.mark.parametrize(("minutes", "reasons"), [(5, ()), (5.1, ("mail_late",))])
def test_mail_is_late_after_five_minutes(beaten, minutes, reasons):
    waiting()
    Heartbeat.objects.update(beat_at=AT + minutes * MINUTE)
    assert health(at=AT + minutes * MINUTE).reasons == reasons


def test_mail_that_was_put_off_goes_on_waiting(beaten):
    waiting(attempts=3, due_at=AT + 15 * MINUTE)
    assert mail.waiting_since() == AT


def test_mail_that_is_sent_again_waits_from_then_on(beaten):
    waiting(attempts=0, due_at=AT + 90 * MINUTE)
    assert mail.waiting_since() == AT + 90 * MINUTE


def test_database_that_does_not_answer_is_a_reason(monkeypatch):
    def silent(_at):
        raise OperationalError("could not connect")

    monkeypatch.setattr(healths, "_health", silent)
    assert health(at=now()).reasons == ("database",)
