"""What stands around every page: page names by role, the health line, the strict content policy."""

from __future__ import annotations

import datetime as dt

import pytest
from django.test import Client
from django.utils.timezone import now

import builders
from qa_tracker.records.models import Heartbeat

pytestmark = pytest.mark.django_db


def test_an_administrator_sees_people_and_no_procedures_to_enter():
    page = builders.signed_in(builders.first_administrator()).get("/").content.decode()
    assert ">Due</a>" in page
    assert "Benedikta Moss" in page


def test_a_user_sees_no_ledger():
    admin = builders.first_administrator()
    user = builders.person(admin, "penhallow", "user", builders.site(admin))
    page = builders.signed_in(user).get("/").content.decode()
    assert ">Checks</a>" in page
    assert ">Ledger</a>" not in page
    assert ">People</a>" not in page


def test_the_content_policy_allows_nothing_unsafe():
    policy = Client().get("/sign-in/")["Content-Security-Policy"]
    assert "unsafe" not in policy
    assert "script-src 'self'" in policy
    assert "default-src 'none'" in policy


def test_pages_are_kept_by_no_cache():
    assert "no-store" in Client().get("/sign-in/")["Cache-Control"]


def test_the_header_says_in_words_when_the_sweep_is_late():
    client = builders.signed_in(builders.first_administrator())
    Heartbeat.objects.create(name="sweep", beat_at=now() - dt.timedelta(minutes=9))
    page = client.get("/").content.decode()
    assert 'class="unhealthy"' in page


def test_health_answers_without_sign_in_while_starting():
    answer = Client().get("/health")
    assert (answer.status_code, answer.json()["status"]) == (200, "starting")


def test_health_answers_503_when_the_sweep_is_late():
    Heartbeat.objects.create(name="sweep", beat_at=now() - dt.timedelta(minutes=4))
    answer = Client().get("/health")
    assert (answer.status_code, answer.json()["reasons"]) == (503, ["sweep_late"])


def test_an_unknown_address_says_what_to_do():
    answer = builders.signed_in(builders.first_administrator()).get("/checks/none-such/")
    assert answer.status_code == 404
    assert "Nothing here" in answer.content.decode()
