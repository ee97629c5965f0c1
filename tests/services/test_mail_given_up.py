"""Mail that was given up: every administrator is told once, and can send it again or leave it unsent."""

from __future__ import annotations

import pytest
from django.utils.timezone import now
from notice_ground import make, moment, owe

from qa_tracker.core.errors import Conflict, Forbidden, Invalid, NotFound
from qa_tracker.records.models import Digest, Notice
from qa_tracker.records.queries.ledger import list_leaves
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.services import mail
from qa_tracker.services.health import health
from tests import builders
from tests.mail_server import serving

pytestmark = pytest.mark.django_db


@pytest.fixture(scope="module")
def running():
    with serving() as server:
        yield server


@pytest.fixture
def server(settings, running):
    settings.EMAIL_BACKEND = "django.core.mail.backends.smtp.EmailBackend"
    settings.EMAIL_HOST, settings.EMAIL_PORT = "127.0.0.1", running.port
    running.accepted.clear()
    running.answer = "550 5.1.1 no such mailbox"
    return running


@pytest.fixture
def ward(server, db):
    made = builders.ward()
    owe(made.check, made.technician, "due")
    make(moment(7))
    return made


def give_up(at=None):
    digest = Digest.objects.get()
    assert not mail.deliver(digest_id=digest.pk, at=at or now())
    digest.refresh_from_db()
    assert digest.state == "failed"
    return digest


def refused(call, **given):
    with pytest.raises((Conflict, Forbidden, Invalid, NotFound)) as error:
        call(**given, at=now())
    return error.value.code


def test_every_administrator_here_is_told_once(ward):
    near = builders.person(ward.admin, "near", "administrator", ward.site)
    builders.person(ward.admin, "far", "administrator", builders.site(ward.admin, "KB", "Kestrel Bay"))
    digest = give_up()
    told = Notice.objects.filter(about=digest.key)
    assert {each.person_id for each in told} == {ward.admin.pk, near.pk}
    assert {(each.level, each.channel, each.recipient, each.check_of_id) for each in told} == {
        ("mail_failed", "in_app", "administrator", None)
    }
    (leaf,) = list_leaves(EVERYTHING, most=1)
    assert leaf.kind == "mail.given_up"
    assert "mailbox" not in leaf.content


def test_mail_given_up_a_second_time_is_told_no_second_time(ward):
    digest = give_up()
    mail.send_again(digest_id=digest.pk, actor=ward.admin, at=now())
    give_up()
    assert Notice.objects.filter(about=digest.key).count() == 1


def test_mail_sent_again_keeps_its_message_id_and_all_its_tries(ward, server):
    digest = give_up()
    assert health(at=now()).reasons == ("mail_failed",)
    server.answer = "250 2.0.0 kept as 7F3A"
    mail.send_again(digest_id=digest.pk, actor=ward.admin, at=now())
    assert mail.deliver(digest_id=digest.pk, at=now())
    assert server.message_ids == {digest.message_id}
    assert [each.outcome for each in digest.tries.order_by("id")] == ["given_up", "sent"]
    assert health(at=now()).reasons == ()


def test_mail_sent_again_is_retried_as_often_as_before(ward, server):
    digest = give_up()
    mail.send_again(digest_id=digest.pk, actor=ward.admin, at=now())
    server.answer = "451 4.3.0 later"
    mail.deliver(digest_id=digest.pk, at=now())
    digest.refresh_from_db()
    assert digest.state == "waiting"


def test_all_given_up_mail_is_sent_again_by_one_action(ward):
    give_up()
    assert mail.send_all_again(actor=ward.admin, at=now()) == 1
    assert Digest.objects.get().state == "waiting"
    assert refused(mail.send_all_again, actor=ward.admin) == "mail.not_given_up"


def test_mail_that_need_not_be_sent_is_left_unsent_with_a_reason(ward):
    digest = give_up()
    assert (
        refused(mail.leave_unsent, digest_id=digest.pk, reason=" ", actor=ward.admin) == "mail.reason_missing"
    )
    mail.leave_unsent(digest_id=digest.pk, reason="Has left", actor=ward.admin, at=now())
    assert health(at=now()).reasons == ()
    assert refused(mail.send_again, digest_id=digest.pk, actor=ward.admin) == "mail.not_given_up"


def test_only_an_administrator_of_the_site_sends_again(ward):
    digest = give_up()
    far_site = builders.site(ward.admin, "KB", "Kestrel Bay")
    far = builders.person(ward.admin, "far", "administrator", far_site)
    assert refused(mail.send_again, digest_id=digest.pk, actor=ward.physicist) == "role.not_allowed"
    assert refused(mail.send_again, digest_id=digest.pk, actor=far) == "mail.unknown"
    assert refused(mail.send_all_again, actor=far) == "mail.not_given_up"
