"""Entering a check in a real browser: verdicts while typing, and nothing typed is lost on the way."""

from __future__ import annotations

import threading
import time
from collections.abc import Callable, Iterator
from concurrent.futures import ThreadPoolExecutor
from socketserver import ThreadingMixIn
from typing import Any
from wsgiref.simple_server import WSGIRequestHandler, WSGIServer, make_server

import pytest
from django.contrib.staticfiles.handlers import StaticFilesHandler
from django.core.handlers.wsgi import WSGIHandler
from django.db import connections
from playwright.sync_api import BrowserContext, Page, sync_playwright

import builders
from qa_tracker.records.models import Draft, Submission
from tests.journeys.conftest import FLAGS

pytestmark = pytest.mark.journey
DEPTH = "input[name^='reverberation_depth']"
TROUBLE = "#trouble:not([hidden])"


class Server(ThreadingMixIn, WSGIServer):
    daemon_threads = True


class Quiet(WSGIRequestHandler):
    def log_message(self, *_: object) -> None:
        """Nothing: a test's output is its own."""


class Closing(WSGIHandler):
    """Gives the thread's connection back with each answer."""

    def __call__(self, environ, start_response):
        try:
            return super().__call__(environ, start_response)
        finally:
            connections.close_all()


@pytest.fixture
def served(committed_db) -> Iterator[str]:
    server = make_server(
        "127.0.0.1", 0, StaticFilesHandler(Closing()), server_class=Server, handler_class=Quiet
    )
    threading.Thread(target=server.serve_forever, daemon=True).start()
    yield f"http://127.0.0.1:{server.server_port}"
    server.shutdown()
    server.server_close()


@pytest.fixture
def ward(served):
    return builders.ward()


@pytest.fixture
def browser(served, chromium_path) -> Iterator[BrowserContext]:
    with sync_playwright() as driver:
        chromium = driver.chromium.launch(executable_path=chromium_path, args=FLAGS)
        yield chromium.new_context(viewport={"width": 390, "height": 844}, base_url=served)
        chromium.close()


def sign_in(page: Page, username: str = "castellane") -> None:
    page.fill("#id_username", username)
    page.fill("#id_password", builders.PASSWORD)
    page.click("main button")
    page.wait_for_load_state()


@pytest.fixture
def page(ward, browser) -> Page:
    page = browser.new_page()
    page.goto("/sign-in/")
    sign_in(page)
    page.goto(f"/checks/{ward.check.uid}/enter/")
    return page


def asked(question: Callable[[], Any]) -> Any:
    """What the database answers; the driver keeps an event loop in the test's own thread."""

    def ask() -> Any:
        try:
            return question()
        finally:
            connections.close_all()

    with ThreadPoolExecutor(1) as thread:
        return thread.submit(ask).result()


def drafted(text: str) -> bool:
    """Whether the draft comes to hold a text within five seconds."""
    until = time.monotonic() + 5
    while time.monotonic() < until:
        if any(
            text in draft for draft in asked(lambda: list(Draft.objects.values_list("content", flat=True)))
        ):
            return True
        time.sleep(0.1)
    return False


def saved(page: Page) -> None:
    page.wait_for_selector('#saved:text-matches("^Saved [0-9]")')


def test_a_verdict_stands_beside_the_field_soon_after_typing(page):
    page.check("input[name^='case_grade'][value=amber]")
    page.wait_for_selector("[data-key^='case_grade'] .verdict:has-text('remedial')", timeout=5000)
    assert "lead sonographer" in page.inner_text("[data-key^='case_grade'] .do-now")


def test_a_refusal_comes_and_goes_with_what_is_typed(page):
    page.fill(DEPTH, "1e999")
    page.wait_for_selector("[data-key^='reverberation_depth'] .refusal")
    page.fill(DEPTH, "42,5")
    page.wait_for_selector("[data-key^='reverberation_depth'] .refusal", state="detached")
    saved(page)


def test_what_is_typed_without_a_network_is_sent_when_it_is_back(page, browser):
    browser.set_offline(True)
    page.fill(DEPTH, "43")
    page.wait_for_selector(TROUBLE)
    assert "no connection" in page.inner_text("#trouble")
    browser.set_offline(False)
    saved(page)
    assert drafted('"43"')


def test_what_is_typed_survives_leaving_the_page_at_once(page, ward):
    page.fill("#id_remark", "typed and gone")
    page.goto("/")
    assert drafted("typed and gone")
    page.goto(f"/checks/{ward.check.uid}/enter/")
    assert page.input_value("#id_remark") == "typed and gone"


def test_what_is_typed_survives_an_ended_web_session(page, browser):
    page.fill(DEPTH, "42")
    saved(page)
    browser.clear_cookies(name="sessionid")
    page.fill(DEPTH, "45,5")
    with browser.expect_page() as opened:
        page.click("#trouble a")
    sign_in(opened.value)
    page.wait_for_selector("#trouble", state="hidden")
    assert drafted('"45,5"')


def test_two_windows_ask_which_value_is_right(page, browser, ward):
    page.fill(DEPTH, "42")
    saved(page)
    other = browser.new_page()
    other.goto(f"/checks/{ward.check.uid}/enter/")
    other.fill(DEPTH, "44")
    saved(other)
    page.fill(DEPTH, "45")
    page.wait_for_selector(TROUBLE)
    assert "in the other window: 44" in page.inner_text("#trouble")
    page.click("#trouble button >> nth=0")
    saved(page)
    assert drafted('"45"')


def test_a_double_click_on_sign_records_once(page, ward):
    for each in page.locator("fieldset.item").all():
        each.locator("input[type=radio]").first.check()
    for name, value in (
        ("reverberation_depth", "42,5"),
        ("reverberation_bands", "4"),
        ("dark_elements", "0"),
    ):
        page.fill(f"input[type=text][name^='{name}.']", value)
    page.fill("#id_cleaned_how", "disinfectant wipe")
    page.click("button[value=sign]")
    page.fill("#id_password", builders.PASSWORD)
    page.dblclick(".signing button.act")
    page.wait_for_url("**signed=1")
    assert asked(Submission.objects.count) == 1
    assert "conforming" in page.inner_text(".overall >> nth=0")


def test_enter_leads_from_field_to_field(page):
    page.focus("#id_cleaned_how")
    page.keyboard.press("Enter")
    assert page.evaluate("document.activeElement.id") == "id_cleaned_by"
