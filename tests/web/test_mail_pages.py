"""Mail under way: what was given up is red and sent again by one action; the header and the notices lead there."""

from __future__ import annotations

import datetime as dt

import pytest
from django.urls import reverse
from django.utils.timezone import now

from qa_tracker.core.ladder import Owed
from qa_tracker.records import ledger
from qa_tracker.records.models import Digest, DigestTry, Heartbeat, SweepGap
from qa_tracker.services import digests, mail, owed
from tests import builders

pytestmark = pytest.mark.django_db
MORNING = dt.datetime(2026, 6, 3, 9, tzinfo=dt.UTC)
NO_ONE = "550 5.1.1 no such mailbox"


@pytest.fixture
def ward():
    made = builders.ward()
    with ledger.command("notices.owed", actor=None, at=now()) as act:
        owed.owe(act, made.check.pk, made.check.uid, Owed(made.technician.pk, "responsible", "due", ()))
    digests.make_digests(at=now(), as_if=MORNING)
    return made


@pytest.fixture
def failed(ward):
    """The technician's mail, given up as ``deliver`` gives it up."""
    digest = Digest.objects.get()
    assert mail.claim(digest_id=digest.pk)
    digest.refresh_from_db()
    DigestTry.objects.create(digest=digest, at=now(), outcome="given_up", reply=NO_ONE)
    mail._give_up(digest, NO_ONE, now())
    return digest


def content(person, name, *args):
    return builders.signed_in(person).get(reverse(name, args=args)).content.decode()


def test_mail_given_up_is_shown_with_its_tries_and_what_to_do(ward, failed):
    shown = content(ward.admin, "mails")
    given_up = shown.partition('id="given-up"')[2].partition("</section>")[0]
    for words in ("Ifeoma Castellane", "castellane@tarnwater.invalid", NO_ONE, "Send it again", failed.message_id.strip("<>")):  # fmt: skip
        assert words in given_up, words
    assert "<svg" in given_up


def test_header_leads_the_administrator_to_the_mail_and_tells_everyone(ward, failed):
    assert "Some mail was given up" in content(ward.technician, "due")
    assert reverse("mails") not in content(ward.technician, "due")
    assert reverse("mails") in content(ward.admin, "due")


def test_administrator_is_told_among_the_notices(ward, failed):
    shown = content(ward.admin, "notices")
    assert "A mail to Ifeoma Castellane was given up." in shown
    assert reverse("mails") in shown


def test_mail_is_sent_again_by_one_action(ward, failed):
    browser = builders.signed_in(ward.admin)
    answer = browser.post(reverse("mail-send-again", args=[failed.pk]))
    assert answer.headers["Location"] == reverse("mails")
    failed.refresh_from_db()
    assert failed.state == "waiting"
    assert (
        "is not given up"
        in browser.post(reverse("mail-send-again", args=[failed.pk]), follow=True).content.decode()
    )


def test_all_mail_is_sent_again_by_one_action(ward, failed):
    builders.signed_in(ward.admin).post(reverse("mails-send-again"))
    assert Digest.objects.get().state == "waiting"


def test_mail_is_left_unsent_with_a_reason(ward, failed):
    browser, address = builders.signed_in(ward.admin), reverse("mail-leave-unsent", args=[failed.pk])
    assert "castellane@tarnwater.invalid" in browser.get(address).content.decode()
    assert browser.post(address, {"reason": ""}).status_code == 422
    assert browser.post(address, {"reason": "Has left"}).status_code == 302
    assert Digest.objects.get().state == "unsent"


@pytest.mark.parametrize("name", ["mails", "mail-send-again", "mails-send-again", "mail-leave-unsent"])
def test_mail_is_no_matter_of_other_roles(ward, failed, name):
    args = [failed.pk] if name.startswith("mail-") else []
    method = "get" if name == "mails" else "post"
    for person in (ward.user, ward.technician, ward.physicist):
        answer = getattr(builders.signed_in(person), method)(reverse(name, args=args))
        assert answer.status_code == 403


def test_mail_of_another_site_is_not_there(ward, failed):
    far_site = builders.site(ward.admin, "KB", "Kestrel Bay")
    far = builders.signed_in(builders.person(ward.admin, "far", "administrator", far_site))
    assert "Castellane" not in far.get(reverse("mails")).content.decode()
    assert far.post(reverse("mail-send-again", args=[failed.pk])).status_code == 404
    assert far.get(reverse("mail-leave-unsent", args=[failed.pk])).status_code == 404


def test_pauses_of_the_sweep_are_listed(ward):
    SweepGap.objects.create(began_at=MORNING, ended_at=MORNING + dt.timedelta(days=3), notices=41, skipped=77)
    shown = content(ward.admin, "mails").partition('id="pauses"')[2]
    for words in ("3 June 2026, 09:00 UTC", "6 June 2026, 09:00 UTC", ">41<", ">77<"):
        assert words in shown, words


def test_header_says_when_the_sweep_last_ran(ward):
    Heartbeat.objects.create(name="sweep", beat_at=now())
    assert f"swept {now():%H:}" in content(ward.technician, "due")


def test_address_is_changed_and_what_is_sent_again_goes_there(ward, failed):
    address = reverse("address-set", args=[ward.technician.uid])
    assert address in content(ward.admin, "mails")
    browser = builders.signed_in(ward.admin)
    for typed, status in [("no address", 422), ("castellane@tarnwater.invalid", 422), ("ifeoma@tarnwater.invalid", 302)]:  # fmt: skip
        assert browser.post(address, {"email": typed}).status_code == status
    ward.technician.refresh_from_db()
    assert ward.technician.email == "ifeoma@tarnwater.invalid"
    failed.refresh_from_db()
    assert mail._letter(failed).to == ["ifeoma@tarnwater.invalid"]
