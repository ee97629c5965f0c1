"""The demonstration as its visitors see it: every page of three people, in both widths, and the five stories.

With LEADLINE_SHOTS naming a folder it keeps the pictures of the README.
"""

from __future__ import annotations

import os
import re
from collections.abc import Iterator
from pathlib import Path

import pytest
from playwright.sync_api import Page

from tests.journeys.conftest import clean_environment, standalone

pytestmark = [pytest.mark.journey, pytest.mark.xdist_group("demo in a browser")]
WIDE, NARROW = {"width": 1280, "height": 900}, {"width": 390, "height": 844}
PAGES = {
    "castellane": (
        "/",
        "/checks/",
        "/register/",
        "/faults/",
        "/notices/",
        "/dossiers/",
        "/ledger/",
        "/criteria/",
    ),
    "oduya": (
        "/",
        "/checks/",
        "/register/",
        "/criteria/procedures/",
        "/criteria/differences/",
        "/criteria/uncertainties/",
        "/criteria/uncertainties/new/",
        "/figures/",
        "/register/test-objects/",
        "/faults/",
    ),
    "fairweather": ("/register/", "/checks/", "/dossiers/", "/dossiers/verify/", "/ledger/", "/criteria/"),
    "moss": ("/people/", "/sites/", "/mail/", "/mailbox/", "/tokens/"),
}


@pytest.fixture(scope="module")
def demo(chromium_path: str, tmp_path_factory: pytest.TempPathFactory) -> Iterator[dict[str, object]]:
    with standalone(clean_environment(tmp_path_factory.mktemp("demo")), "--demo") as ready:
        yield ready


@pytest.fixture
def visit(demo, chromium):
    """Sign in as somebody; what the page asked of other hosts, or complained of, is kept with it."""
    password = {person["username"]: person["password"] for person in demo["people"]}

    def signed_in(username: str, viewport: dict[str, int] = WIDE) -> Page:
        page = chromium.new_context(base_url=demo["address"], viewport=viewport).new_page()
        page.set_default_timeout(15_000)
        page.troubles = []  # type: ignore[attr-defined]
        page.on("console", lambda said: said.type == "error" and page.troubles.append(said.text))
        page.on(
            "request", lambda asked: asked.url.startswith(demo["address"]) or page.troubles.append(asked.url)
        )
        page.goto("/sign-in/")
        page.fill("#id_username", username)
        page.fill("#id_password", password[username])
        page.press("#id_password", "Enter")
        page.wait_for_url(lambda url: "/sign-in/" not in url)
        return page

    return signed_in


def shot(page: Page, name: str) -> None:
    folder = os.environ.get("LEADLINE_SHOTS")
    if folder:
        page.evaluate("window.scrollTo(0, 0)")
        page.screenshot(path=str(Path(folder) / f"{name}.png"))


def device_page(page: Page, serial: str) -> str:
    page.goto(f"/register/?text={serial}")
    page.locator("main a[href*='/devices/']").filter(has_text=serial).first.click()
    page.wait_for_load_state()
    return page.inner_text("main")


@pytest.mark.parametrize("viewport", [WIDE, NARROW], ids=["1280", "390"])
@pytest.mark.parametrize("username", PAGES)
def test_every_page_fits_and_asks_no_other_host(visit, username, viewport):
    page = visit(username, viewport)
    for address in PAGES[username]:
        answer = page.goto(address)
        assert answer is not None
        assert answer.status == 200, address
        wider = page.evaluate("document.documentElement.scrollWidth - window.innerWidth")
        assert wider <= 0, f"{address} is {wider} px wider than the window"
        policy = answer.headers["content-security-policy"]
        assert "unsafe" not in policy
    assert page.troubles == []


VERDICTS = ("conforming", "remedial", "suspension", "indeterminate", "not_assessable")


@pytest.mark.parametrize("viewport", [WIDE, NARROW], ids=["1280", "390"])
def test_a_check_of_every_verdict_fits_and_says_why(visit, viewport):
    page = visit("oduya", viewport)
    for verdict in VERDICTS:
        page.goto(f"/checks/?verdict={verdict}")
        page.locator("main ul.rows a[href*='/checks/']").last.click()
        page.wait_for_load_state()
        assert page.evaluate("document.documentElement.scrollWidth - window.innerWidth") <= 0, verdict
        assert page.locator(".sentence").count() > 0
        assert ("made by:" in page.inner_text("main")) == (verdict != "conforming"), verdict
    assert page.troubles == []


@pytest.mark.parametrize(
    ("serial", "words"),
    [
        ("C-4102", ["Penetration follow-up", "suspension", "Replaced by C-4109"]),
        ("L-5204", ["suspension", "Elements 61-62 dead"]),
        ("T-5501", ["Sheath"]),
        ("WH-0042", ["Lost", "Not found twice"]),
    ],
    ids=["A slow loss", "B cable", "E bite", "wireless not found"],
)
def test_story_is_told_on_the_devices_page(visit, serial, words):
    text = device_page(visit("oduya"), serial)
    for word in words:
        assert re.search(re.escape(word), text, re.IGNORECASE), word


def test_formula_shows_what_it_gives_and_where_it_is_wrong_as_one_types(visit):
    page = visit("oduya", NARROW)
    page.goto("/criteria/procedures/")
    page.locator("main a").filter(has_text="After repair, software, move or swap").first.click()
    page.get_by_role("button", name="Write the next edition").click()
    page.get_by_role("link", name="Depth of penetration, difference", exact=True).click()
    page.fill("#id_formula", "penetration - depht")
    page.get_by_text("“depht” is nothing a formula here may name").wait_for()
    assert page.locator("pre.caret").inner_text().endswith("\n              ^^^^^")
    page.fill("#id_formula", "penetration - penetration_before")
    page.fill("[name='sample.penetration']", "146,4")
    page.fill("[name='sample.penetration_before']", "152")
    page.get_by_text("= -6\N{NO-BREAK SPACE}mm").wait_for()
    assert page.evaluate("document.documentElement.scrollWidth - window.innerWidth") <= 0
    page.reload()
    assert page.input_value("[name='sample.penetration']") == "146,4"
    assert page.troubles == []


def test_pictures_for_the_readme(visit):
    page = visit("castellane", NARROW)
    shot(page, "due-390")
    page.locator("main li, main article, main tr").filter(has_text="Monthly in-air").locator(
        "a[href*='/enter/']"
    ).first.click()
    page.locator("main input[name^='lens_grade'][value=amber]").check()
    page.get_by_text("The grade is “amber”: remedial.").first.wait_for()
    page.locator("main input[name^='lens_grade']").first.scroll_into_view_if_needed()
    if folder := os.environ.get("LEADLINE_SHOTS"):
        page.screenshot(path=str(Path(folder) / "enter-390.png"))
    page = visit("oduya")
    device_page(page, "C-4102")
    shot(page, "device-1280")
    page.locator("main a").filter(has_text="Penetration follow-up").nth(1).click()
    page.wait_for_load_state()
    assert "Performed by" in page.inner_text("main")
    page.get_by_text("Depth of penetration").first.scroll_into_view_if_needed()
    if folder:
        page.mouse.wheel(0, 500)
        page.wait_for_timeout(300)
        page.screenshot(path=str(Path(folder) / "check-1280.png"))
    page.goto("/ledger/")
    shot(page, "ledger-1280")
    assert page.troubles == []
