"""Delivering mail through a real SMTP server on loopback: once, with one Message-ID, retried when refused."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Digest, DigestTry
from qa_tracker.services import mail, sweep
from qa_tracker.services.mail_server import NotTaken, hand_over
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


def outcomes(digest):
    return list(DigestTry.objects.filter(digest=digest).order_by("id").values_list("outcome", flat=True))


def try_again(digest, times):
    """Deliver as often as this, each time when the mail may be tried again; what each try led to."""
    waits = []
    for _attempt in range(times):
        at = now()
        assert not mail.deliver(digest_id=digest.pk, at=at)
        digest.refresh_from_db()
        waits.append((digest.due_at - at).total_seconds() / 60 if digest.state == "waiting" else digest.state)
        Digest.objects.filter(pk=digest.pk).update(due_at=at)
    return waits


def test_refused_mail_is_retried_after_1_5_15_60_minutes_then_given_up(server, digest):
    server.answer = "451 4.3.0 try again later"
    assert try_again(digest, 5) == [1, 5, 15, 60, "failed"]
    assert outcomes(digest) == ["put_off"] * 4 + ["given_up"]
    assert set(DigestTry.objects.values_list("reply", flat=True)) == {"451 4.3.0 try again later"}


@pytest.mark.parametrize("place", ["answer", "to_addressee"])
def test_mail_refused_for_good_is_given_up_at_once(server, digest, place):
    setattr(server, place, "550 5.1.1 no such mailbox")
    assert try_again(digest, 1) == ["failed"]
    assert outcomes(digest) == ["given_up"]
    assert digest.reply == "550 5.1.1 no such mailbox"


def test_connection_that_drops_after_the_data_is_tried_again_with_the_same_message_id(server, digest):
    server.dropping = True
    assert try_again(digest, 1) == [1]
    server.dropping = False
    assert mail.deliver(digest_id=digest.pk, at=now())
    assert (server.seen, server.message_ids) == (2, {digest.message_id})
    assert outcomes(digest) == ["put_off", "sent"]


@pytest.mark.parametrize("address", ["x@y.invalid\r\nRCPT TO:<z@y.invalid>", "nürse@tarnwater.invalid"])
def test_address_that_can_not_be_written_is_given_up_and_sends_nothing(server, digest, address):
    digest.person.email = address
    with pytest.raises(NotTaken) as refused:
        hand_over(mail._letter(digest), address)
    assert (refused.value.for_good, server.seen) == (True, 0)


def test_domain_beyond_ascii_is_written_in_its_idna_form(server, digest):
    digest.person.email = "castellane@bräunung.invalid"
    assert hand_over(mail._letter(digest), digest.person.email).startswith("250")
    assert server.addressees == ["castellane@xn--brunung-6wa.invalid"]


def test_try_that_was_cut_off_is_kept_and_counts_as_none(server, digest):
    for _kill in range(6):
        assert mail.claim(digest_id=digest.pk)
        DigestTry.objects.create(digest=digest, at=now(), outcome="begun")
        Digest.objects.filter(pk=digest.pk).update(lease_until=now() - dt.timedelta(seconds=1))
    server.answer = "451 4.3.0 try again later"
    assert try_again(digest, 1) == [1]
    assert outcomes(digest) == ["begun"] * 6 + ["put_off"]


def test_late_refusal_leaves_alone_a_mail_that_someone_else_has_claimed(server, digest, monkeypatch):
    server.answer = "451 4.3.0 try again later"
    stolen = mail._put_off

    def late(*given):
        Digest.objects.filter(pk=digest.pk).update(lease_until=now() - dt.timedelta(seconds=1))
        assert mail.claim(digest_id=digest.pk)
        stolen(*given)

    monkeypatch.setattr(mail, "_put_off", late)
    assert not mail.deliver(digest_id=digest.pk, at=now())
    digest.refresh_from_db()
    assert (digest.state, digest.attempts) == ("claimed", 2)


def test_unreachable_server_loses_nothing(settings, digest):
    settings.EMAIL_BACKEND = "django.core.mail.backends.smtp.EmailBackend"
    settings.EMAIL_HOST, settings.EMAIL_PORT = "127.0.0.1", 9
    assert not mail.deliver(digest_id=digest.pk, at=now())
    digest.refresh_from_db()
    assert (digest.state, outcomes(digest)) == ("waiting", ["put_off"])


@pytest.mark.parametrize(("port", "tried"), [(9, 1), (None, 2)], ids=["unreachable", "refusing"])
def test_letters_after_one_wait_for_the_next_heart_only_where_the_server_is_unreachable(
    server, settings, digest, port, tried
):
    other = {"person": digest.person, "created_at": now(), "due_at": now(), "day_on": digest.day_on}
    Digest.objects.create(**other, key="digest/other", message_id="<other>")
    server.answer, settings.EMAIL_PORT = "451 4.3.0 later", port or server.port
    assert mail.deliver_waiting(at=now()) == 0
    assert DigestTry.objects.count() == tried
