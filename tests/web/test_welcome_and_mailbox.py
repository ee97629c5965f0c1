"""The first account of an empty database, and the demonstration's mailbox."""

from __future__ import annotations

import pytest
from django.urls import reverse

from qa_tracker.records.models import CriteriaSet, Edition, Person, RoleGrant
from qa_tracker.services import mailbox, shipped
from tests import builders

pytestmark = pytest.mark.django_db
FIRST = {
    "name": "Benedikta Moss",
    "username": "Moss",
    "email": "moss@tarnwater.invalid",
    "password": builders.PASSWORD,
    "again": builders.PASSWORD,
}
LETTER = (
    b"To: ifeoma@tarnwater.invalid\r\nSubject: =?utf-8?q?Two_checks_are_due_=E2=80=93_today?=\r\n"
    b"\r\nDear Ifeoma,\r\n<script>alert(1)</script>\r\n"
)


def test_welcome_when_nobody_exists_makes_an_administrator_and_publishes_the_library(client):
    assert client.get("/sign-in/").headers["Location"] == "/welcome/"
    assert client.post("/welcome/", FIRST).headers["Location"] == "/sign-in/"
    assert RoleGrant.objects.get().role == "administrator"
    assert (Edition.objects.count(), CriteriaSet.objects.count()) == (10, 9)
    assert client.get("/welcome/").status_code == 404
    assert client.post("/welcome/", FIRST | {"username": "second"}).status_code == 404


@pytest.mark.parametrize(
    "change", [{"again": "other"}, {"password": "short", "again": "short"}, {"email": "moss"}], ids=str
)
def test_welcome_when_refused_keeps_the_name_and_makes_nobody(client, change):
    answer = client.post("/welcome/", FIRST | change)
    assert (answer.status_code, 'value="Benedikta Moss"' in answer.content.decode()) == (422, True)
    assert not Person.objects.exists()


def test_library_when_published_twice_is_there_once():
    shipped.publish_shipped(at=builders.now())
    assert shipped.publish_shipped(at=builders.now()) == 19
    assert Edition.objects.count() == 10


@pytest.fixture
def letters(tmp_path, monkeypatch):
    monkeypatch.setattr(mailbox, "folder", lambda: tmp_path)
    (tmp_path / "1-a.eml").write_bytes(LETTER)
    (tmp_path / "secret.txt").write_text("no letter")
    return builders.signed_in(builders.first_administrator())


def test_mailbox_when_opened_lists_letters_and_shows_one_as_text(letters):
    assert "Two checks are due – today" in letters.get("/mailbox/").content.decode()
    page = letters.get(reverse("mail", args=["1-a.eml"])).content.decode()
    assert "&lt;script&gt;alert(1)&lt;/script&gt;" in page
    assert "<script>alert" not in page


@pytest.mark.parametrize("name", ["secret.txt", "..%2Fkeys%2Fsecret_key", "2-b.eml", ".eml"])
def test_mailbox_when_asked_for_anything_else_finds_nothing(letters, name):
    assert letters.get(f"/mailbox/{name}/").status_code == 404


def test_mailbox_where_mail_is_sent_is_not_there(letters, settings):
    settings.DEMO_MAILBOX = False
    assert letters.get("/mailbox/").status_code == 404
