"""Signing in: who may, what happens after too many wrong passwords, what a page shows afterwards."""

from __future__ import annotations

import pytest
from django.test import Client

import builders

pytestmark = pytest.mark.django_db
ADDRESS = "/sign-in/"


def attempt(client: Client, username: str, password: str, **more: str):
    return client.post(ADDRESS, {"username": username, "password": password, **more})


def test_sign_in_leads_to_what_is_due():
    builders.first_administrator()
    answer = attempt(Client(), "moss", builders.PASSWORD)
    assert (answer.status_code, answer["Location"]) == (302, "/")


@pytest.mark.parametrize("name", ["MOSS", " moss "])
def test_the_sign_in_name_is_taken_in_any_case(name):
    builders.first_administrator()
    assert attempt(Client(), name, builders.PASSWORD).status_code == 302


def test_sign_in_keeps_the_name_when_the_password_is_wrong():
    builders.first_administrator()
    answer = attempt(Client(), "moss", "not this one")
    assert b'value="moss"' in answer.content
    assert "not right" in answer.content.decode()


def test_sign_in_says_the_same_when_nobody_has_that_name():
    builders.first_administrator()
    wrong, unknown = (attempt(Client(), name, "x" * 14).content for name in ("moss", "nobody"))
    assert wrong.replace(b"moss", b"").count(b"not right") == unknown.count(b"not right") == 1


def test_sign_in_is_paused_after_eight_wrong_passwords():
    builders.first_administrator()
    client = Client()
    answers = [attempt(client, "moss", "wrong") for _ in range(8)]
    assert answers[-1].status_code == 429
    assert "15 minutes" in answers[-1].content.decode()
    assert attempt(client, "moss", builders.PASSWORD).status_code == 429


def test_next_is_ignored_when_it_leads_elsewhere():
    builders.first_administrator()
    answer = attempt(Client(), "moss", builders.PASSWORD, next="https://elsewhere.invalid/")
    assert answer["Location"] == "/"


def test_a_page_asks_to_sign_in_first():
    answer = Client().get("/notices/")
    assert answer["Location"] == "/sign-in/?next=/notices/"


def test_sign_out_ends_the_web_session():
    client = builders.signed_in(builders.first_administrator())
    assert client.post("/sign-out/").status_code == 302
    assert client.get("/notices/").status_code == 302
