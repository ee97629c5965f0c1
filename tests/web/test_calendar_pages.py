"""The calendar's page and the feed at its secret address."""

from __future__ import annotations

import io
import logging
import re

import pytest
from django.test import Client
from gunicorn.config import Config

from config.gunicorn import QuietLogger
from config.logging import QuietFormatter
from tests import builders

pytestmark = pytest.mark.django_db
ADDRESS = re.compile(r"/calendar/([0-9a-f]{32})\.ics")


@pytest.fixture
def ward():
    return builders.ward()


@pytest.fixture
def address(ward):
    return ADDRESS.search(builders.signed_in(ward.technician).post("/calendar/").content.decode())[0]


def test_address_is_shown_once_when_issued(ward, address):
    page = builders.signed_in(ward.technician).get("/calendar/").content.decode()
    assert address not in page
    assert "Replace the address" in page


def test_feed_is_served_without_signing_in_when_the_address_is_right(address):
    answer = Client().get(address)
    assert answer.status_code == 200
    assert answer["Content-Type"] == "text/calendar; charset=utf-8"
    assert (answer["Cache-Control"], answer["Referrer-Policy"]) == ("private", "no-referrer")
    assert answer.content.startswith(b"BEGIN:VCALENDAR\r\n")


def test_feed_is_not_sent_again_when_it_is_known(address):
    etag = Client().get(address)["ETag"]
    answer = Client().get(address, headers={"If-None-Match": etag})
    assert (answer.status_code, answer.content, answer["ETag"]) == (304, b"", etag)


def test_wrong_address_answers_as_an_unknown_one(address):
    wrong, unknown = Client().get(f"/calendar/{'0' * 32}.ics"), Client().get("/nowhere/")
    assert (wrong.status_code, wrong.content) == (404, unknown.content)


def test_feed_is_not_there_when_revoked(ward, address):
    assert builders.signed_in(ward.technician).post("/calendar/end/").status_code == 302
    assert Client().get(address).status_code == 404


def test_no_line_names_the_secret_when_logged(address):
    stream = io.StringIO()
    handler = logging.StreamHandler(stream)
    handler.setFormatter(QuietFormatter("%(message)s"))
    logging.getLogger("django.request").addHandler(handler)
    wrong = address.replace("/calendar/", "/calendar/0")
    try:
        Client().get(wrong)
    finally:
        logging.getLogger("django.request").removeHandler(handler)
    assert "/calendar/[cut]" in stream.getvalue()
    assert not re.search(r"[0-9a-f]{32}", stream.getvalue())


def test_every_handler_of_gunicorn_cuts_when_set_up():
    told = Config()
    told.set("accesslog", "-")
    logger = QuietLogger(told)
    handlers = [*logger.error_log.handlers, *logger.access_log.handlers]
    assert len(handlers) == 2
    assert all(isinstance(each.formatter, QuietFormatter) for each in handlers)
    for log in (logger.error_log, logger.access_log):
        log.handlers.clear()
