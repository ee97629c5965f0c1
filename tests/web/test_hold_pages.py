"""Saying until when a check is known of, from its page; and the page that shows who was told, and by what mail."""

from __future__ import annotations

import datetime as dt

import pytest
from django.urls import reverse
from django.utils.timezone import now

from qa_tracker.core.ladder import Owed
from qa_tracker.records import ledger
from qa_tracker.records.models import Digest, DigestTry, NoticeHold
from qa_tracker.services import digests, holds, owed
from tests import builders

pytestmark = pytest.mark.django_db
MORNING = dt.datetime(2026, 6, 3, 9, tzinfo=dt.UTC)


@pytest.fixture
def ward():
    return builders.ward()


def in_days(days):
    return (dt.datetime.now(builders.LONDON).date() + dt.timedelta(days=days)).isoformat()


def page(person, check):
    return builders.signed_in(person).get(reverse("check", args=[check.uid])).content.decode()


def post(person, name, check, *more, **typed):
    return builders.signed_in(person).post(reverse(name, args=[check.uid, *more]), typed)


def told(ward, level="late", recipient="responsible", skipped=()):
    """The technician's notices of a level, and the mail that carries them."""
    person = ward.technician
    with ledger.command("notices.owed", actor=None, at=now()) as act:
        owed.owe(act, ward.check.pk, ward.check.uid, Owed(person.pk, recipient, level, skipped))
    digests.make_digests(at=now(), as_if=MORNING)
    return Digest.objects.get()


def test_acknowledging_from_the_page_is_shown_there_with_reason_and_end(ward):
    answer = post(ward.technician, "check-acknowledge", ward.check, reason="Away", until_on=in_days(3))
    assert answer.headers["Location"] == reverse("check", args=[ward.check.uid])
    shown = page(ward.technician, ward.check)
    assert "Acknowledged</span> by <bdi>Ifeoma Castellane</bdi>" in shown
    assert "Away" in shown
    assert "until the morning of" in shown


def test_snoozing_is_offered_to_who_may_enter_and_acknowledging_to_who_answers_for_it(ward):
    other = builders.person(ward.admin, "dragic", "technician", ward.site)
    for person, offered in [
        (ward.technician, {"acknowledge", "snooze"}),
        (ward.physicist, {"acknowledge", "snooze"}),
        (other, {"snooze"}),
        (ward.admin, set()),
    ]:
        shown = page(person, ward.check)
        assert {name for name in ("acknowledge", "snooze") if f"/{name}/" in shown} == offered


@pytest.mark.parametrize(
    "typed", [{}, {"reason": "Away"}, {"reason": "Away", "until_on": in_days(32)}], ids=str
)
def test_hold_that_is_refused_comes_again_as_it_was_typed(ward, typed):
    answer = post(ward.technician, "check-snooze", ward.check, **typed)
    assert answer.status_code == 422
    assert typed.get("reason", "") in answer.content.decode()
    assert not NoticeHold.objects.exists()


@pytest.mark.parametrize("method", ["get", "post"])
def test_who_may_not_acknowledge_is_told_so_before_typing_anything(ward, method):
    address = reverse("check-acknowledge", args=[ward.check.uid])
    assert getattr(builders.signed_in(ward.user), method)(address).status_code == 403


def test_hold_is_ended_from_the_page(ward):
    until_on = dt.date.fromisoformat(in_days(3))
    hold = holds.acknowledge(
        check=ward.check.uid, reason="Away", until_on=until_on, actor=ward.technician, at=now()
    )
    assert reverse("hold-end", args=[ward.check.uid, hold.uid]) in page(ward.technician, ward.check)
    post(ward.technician, "hold-end", ward.check, hold.uid, reason="Back")
    hold.refresh_from_db()
    assert hold.ended_at is not None
    assert "/end/" not in page(ward.technician, ward.check)


def test_page_shows_who_was_told_as_whom_and_the_servers_answer_to_every_try(ward):
    digest = told(ward, "t1", "lead", ("late", "overdue"))
    for outcome, reply in [("put_off", "451 4.3.0 later"), ("begun", ""), ("sent", "250 2.0.0 kept")]:
        DigestTry.objects.create(digest=digest, at=now(), outcome=outcome, reply=reply)
    Digest.objects.update(state="sent", sent_at=now())
    shown = page(ward.physicist, ward.check)
    for words in (
        "told as lead sonographer", "Overdue, step 1", "Not told before: late and overdue", "by mail: sent",
        "here in the program", "put off", "451 4.3.0 later", "cut off before the server answered", "250 2.0.0 kept",
    ):  # fmt: skip
        assert words in shown, words


def test_page_says_that_a_mail_waits_for_the_days_letter(ward):
    with ledger.command("notices.owed", actor=None, at=now()) as act:
        owed.owe(act, ward.check.pk, ward.check.uid, Owed(ward.technician.pk, "responsible", "due", ()))
    assert "by mail: waits for the day&#x27;s letter" in page(ward.technician, ward.check)


def test_due_says_who_knows_of_a_check_and_until_when(ward):
    client = builders.signed_in(ward.technician)
    assert "#known" in client.get("/").content.decode()
    post(ward.technician, "check-acknowledge", ward.check, reason="Away", until_on=in_days(3))
    shown = client.get("/").content.decode()
    assert "Acknowledged by <bdi>Ifeoma Castellane</bdi> until" in shown
    assert "due today" in shown.lower()
    assert "#known" not in shown
