"""The whole job in a real browser, on the whole program: from the first account to a verified dossier.

The pictures it takes are those of the README (``fixtures/images``, with LEADLINE_SHOTS naming the folder).
"""

from __future__ import annotations

import datetime as dt
import os
import re
import subprocess
import sys
import time
import zoneinfo
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path

import pytest
from playwright.sync_api import Browser, Page

from config.env import BASE_DIR
from tests.journeys.conftest import clean_environment, standalone
from tests.mail_server import MailServer, serving

pytestmark = pytest.mark.journey
PASSWORD = "plumb line and water bath"
LONDON = "Europe/London"
WIDE, NARROW = {"width": 1280, "height": 900}, {"width": 390, "height": 844}


@dataclass
class Program:
    """The running program and what it was told."""

    address: str
    data_dir: Path
    env: dict[str, str]
    mail: MailServer

    def command(self, *words: str) -> subprocess.CompletedProcess[str]:
        argv = (sys.executable, str(BASE_DIR / "manage.py"), *words)
        return subprocess.run(argv, env=self.env, capture_output=True, text=True, timeout=120, check=False)


@pytest.fixture
def program(chromium_path: str, tmp_path: Path) -> Iterator[Program]:
    with serving() as mail:
        env = clean_environment(tmp_path, EMAIL_HOST="127.0.0.1", EMAIL_PORT=str(mail.port))
        with standalone(env) as ready:
            yield Program(str(ready["address"]), tmp_path, env, mail)


class Someone:
    """A person at a browser of their own."""

    def __init__(self, browser: Browser, program: Program, username: str, viewport: dict[str, int]) -> None:
        self.page: Page = browser.new_context(base_url=program.address, viewport=viewport).new_page()
        self.page.set_default_timeout(10_000)
        self.username = username

    def sign_in(self) -> Someone:
        self.page.goto("/sign-in/")
        self.page.fill("#id_username", self.username)
        self.page.fill("#id_password", PASSWORD)
        self.page.press("#id_password", "Enter")
        self.page.wait_for_url(lambda url: "/sign-in/" not in url)
        return self

    def fill(self, **given: str) -> None:
        for name, text in given.items():
            self.page.fill(f"main [name='{name}']", text)

    def tick(self, name: str, value: str) -> None:
        self.page.check(f"main input[name='{name}'][value='{value}']")

    def choose(self, name: str, words: str) -> None:
        """Choose the option that holds these words."""
        field = self.page.locator(f"main select[name='{name}']")
        field.select_option(
            label=next(each for each in field.locator("option").all_inner_texts() if words in each)
        )

    def act(self) -> None:
        """Press the page's one button that acts."""
        self.page.locator("main form button.act").first.click()
        self.page.wait_for_load_state()
        trouble = self.page.locator("main [role=alert]").all_inner_texts()
        assert not trouble, f"{self.page.url}: {trouble}"

    def follow(self, words: str) -> None:
        self.page.locator("main a").filter(has_text=re.compile(words)).first.click()
        self.page.wait_for_load_state()

    def text(self) -> str:
        return self.page.inner_text("main")

    def shot(self, name: str) -> None:
        """Keep a picture of the page, in both widths, where pictures are asked for."""
        folder = os.environ.get("LEADLINE_SHOTS")
        if not folder:
            return
        kept = self.page.viewport_size or WIDE
        for viewport in (WIDE, NARROW):
            self.page.set_viewport_size(viewport)  # type: ignore[arg-type]
            self.page.screenshot(path=f"{folder}/{name}-{viewport['width']}.png", full_page=True)
        self.page.set_viewport_size(kept)


def wait_until(true: Callable[[], bool], what: str, limit_s: float = 90) -> None:
    until = time.monotonic() + limit_s
    while not true():
        assert time.monotonic() < until, f"waited {limit_s} s for: {what}"
        time.sleep(0.2)


def administrator_makes_the_ground(admin: Someone) -> None:
    """The first account, a site that works today at this hour, a room, people and roles."""
    admin.page.goto("/")
    assert "/welcome/" in admin.page.url
    admin.fill(
        name="Benedikta Moss",
        username="moss",
        email="moss@tarnwater.invalid",
        password=PASSWORD,
        again=PASSWORD,
    )
    admin.act()
    admin.sign_in()
    admin.page.goto("/sites/new/")
    admin.fill(code="AG", name="Aldermoor General", digest_hour="0")
    admin.fill(remedial_instruction="Label the probe and tell the lead sonographer today.")
    admin.fill(suspension_instruction="Take it out of the room and phone physics on 4410.")
    admin.choose("time_zone", LONDON)
    for day in ("6", "7"):
        admin.page.uncheck(f"main input[name='weekend'][value='{day}']")
    admin.act()
    room = admin.page.locator("main form:has(input[value=room])")
    if not room.locator("[name=name]").is_visible():
        admin.page.locator("main summary").first.click()
    room.locator("[name=name]").fill("Ultrasound 2")
    room.locator("button").click()
    admin.page.wait_for_load_state()
    assert "Ultrasound 2" in admin.text()
    for name, username, role, site in (
        ("Dr Maren Oduya", "oduya", "physicist", ""),
        ("Ifeoma Castellane", "castellane", "technician", "Aldermoor"),
        ("Jory Penhallow", "penhallow", "user", "Aldermoor"),
        ("Laszlo Fairweather", "fairweather", "auditor", ""),
    ):
        make_person(admin, name, username, role, site)


def make_person(admin: Someone, name: str, username: str, role: str, site: str) -> None:
    admin.page.goto("/people/new/")
    admin.fill(name=name, username=username, email=f"{username}@tarnwater.invalid", password=PASSWORD)
    admin.choose("site", "Aldermoor")
    admin.act()
    admin.tick("role", role)
    if site:
        admin.choose("site", site)
    if role == "auditor":
        admin.fill(until_on=(dt.date.today() + dt.timedelta(days=30)).isoformat())  # noqa: DTZ011  as typed
    admin.act()


def physicist_adopts(physicist: Someone) -> None:
    for words in ("Probe condition", "Contiguous dead elements", "Real-time B-mode"):
        physicist.page.goto("/criteria/")
        physicist.follow(words)
        adopt_for_the_group(physicist)
    physicist.shot("criteria")
    physicist.page.goto("/criteria/procedures/")
    physicist.follow("Monthly in-air")
    adopt_for_the_group(physicist)


def adopt_for_the_group(physicist: Someone) -> None:
    physicist.page.locator("main form [name=place]").first.check()
    physicist.fill(remark="Compared with our own copy.")
    physicist.act()


def physicist_registers(physicist: Someone) -> tuple[str, str]:
    """A scanner and two probes in use; returns the probes' addresses."""
    page = physicist.page
    page.goto("/register/scanner/new/")
    physicist.fill(maker="Ostrigard", model="OG-70", serial="70-1188", software_version="4.2")
    physicist.choose("place", "Ultrasound 2")
    physicist.tick("protection_class", "I")
    physicist.act()
    accept(physicist)
    return register_probe(physicist, "C5-2207"), register_probe(physicist, "C5-2208")


def register_probe(physicist: Someone, serial: str) -> str:
    physicist.page.goto("/register/probe/new/")
    physicist.fill(maker="Ostrigard", model="C5", serial=serial)
    physicist.choose("place", "70-1188")
    for name, value in (("array_kind", "convex"), ("contact_class", "skin"), ("applied_part", "BF")):
        physicist.tick(name, value)
    physicist.act()
    address = physicist.page.url
    accept(physicist)
    return address


def accept(physicist: Someone) -> None:
    physicist.follow("Accept into use")
    physicist.fill(password=PASSWORD)
    physicist.act()


def physicist_sets_baselines_and_plan(physicist: Someone, device: str, due_on: dt.date) -> None:
    physicist.page.goto(f"{device}baselines/")
    physicist.page.locator("[name^='reverberation_depth']").fill("62,5")
    physicist.fill(reason="Acceptance")
    physicist.act()
    physicist.fill(password=PASSWORD)
    physicist.act()
    physicist.page.goto(f"{device}plan/")
    physicist.follow("Monthly in-air")
    physicist.fill(anchor_on=due_on.isoformat())
    physicist.choose("responsible", "Castellane")
    physicist.act()
    if "/plan/" in physicist.page.url:  # the next six due days are shown before the plan is saved
        physicist.act()
    assert "Monthly in-air and visual" in physicist.text()


def technician_enters(technician: Someone) -> str:
    """Enter the month's readings, see the verdicts, sign; returns the check's address."""
    page = technician.page
    page.goto("/")
    technician.shot("due")
    row = (
        page.locator("main li, main tr, main article")
        .filter(has_text="C5-2207")
        .filter(has=page.locator("a[href*='/enter/']"))
    )
    row.first.locator("a[href*='/enter/']").click()
    address = page.url.split("enter/")[0]
    technician.fill(cleaned_how="Wipe")
    for radio in page.locator("main input[type=radio][value=green]").all():
        radio.check()
    technician.tick("lens_grade.0.0.1", "amber")
    technician.tick("in_air_photo.1.0.1", "yes")
    technician.fill(**{"reverberation_depth.1.0.1": "62,0", "dark_elements.1.0.1": "0"})
    page.locator("main summary").filter(has_text="Reverberation bands").click()
    page.select_option("main select[name='n-reverberation_bands.1.0.1']", "in_theatre")
    page.get_by_text("The grade is “amber”: remedial.").first.wait_for()
    technician.shot("enter")
    page.locator("main button.act").last.click()
    page.wait_for_url("**/sign/")
    assert "Label the probe and tell the lead sonographer today." in technician.text()
    technician.shot("sign")
    technician.fill(password=PASSWORD)
    technician.act()
    return address


def physicist_countersigns(physicist: Someone, check: str) -> None:
    physicist.page.goto("/checks/")
    physicist.follow("Monthly in-air")
    assert physicist.page.url == check
    form = physicist.page.locator("main form[action$='countersign/']")
    form.locator("[name=remark]").fill("Seen; lens to be watched.")
    form.locator("[name=password]").fill(PASSWORD)
    form.locator("button.act").click()
    physicist.page.wait_for_load_state()
    assert "Countersigned" in physicist.text() or "countersigned" in physicist.text()
    physicist.shot("check")


def user_quarantines_in_two_taps(user: Someone, device: str) -> None:
    user.page.goto(device)
    user.follow("Quarantine")
    user.page.locator("main form textarea, main form input[type=text]").first.fill(
        "Lens cracked across the middle"
    )
    user.act()
    assert "is quarantined and the fault is open" in user.text()
    user.shot("quarantined")


def auditor_downloads(auditor: Someone, device: str, folder: Path) -> Path:
    page = auditor.page
    page.goto(device)
    page.locator("main button, main a").filter(has_text="Ask for a dossier").first.click()
    page.wait_for_url("**/dossiers/**")
    address = page.url
    link = page.locator("main a[href$='/file/']")
    wait_until(lambda: bool(page.goto(address)) and link.count() > 0, "the dossier to be issued")
    auditor.shot("dossier")
    with page.expect_download() as waiting:
        link.first.click()
    waiting.value.save_as(folder / "dossier.pdf")
    return folder / "dossier.pdf"


def flipped(file: Path, place: int) -> Path:
    data = bytearray(file.read_bytes())
    data[place] ^= 1
    other = file.with_name(f"flipped-{place}.pdf")
    other.write_bytes(bytes(data))
    return other


def pdfsig(file: Path) -> str:
    found = subprocess.run(["pdfsig", str(file)], capture_output=True, text=True, check=False)
    return found.stdout + found.stderr


def test_whole_job_walks_from_first_account_to_verified_dossier(program, chromium, tmp_path):
    today = dt.datetime.now(zoneinfo.ZoneInfo(LONDON)).date()
    administrator_makes_the_ground(Someone(chromium, program, "moss", WIDE))
    physicist = Someone(chromium, program, "oduya", WIDE).sign_in()
    physicist_adopts(physicist)
    probe, forgotten = physicist_registers(physicist)
    physicist_sets_baselines_and_plan(physicist, probe, today)
    physicist_sets_baselines_and_plan(physicist, forgotten, today - dt.timedelta(days=12))
    check = technician_enters(Someone(chromium, program, "castellane", NARROW).sign_in())
    physicist_countersigns(physicist, check)
    user_quarantines_in_two_taps(Someone(chromium, program, "penhallow", NARROW).sign_in(), probe)

    wait_until(lambda: bool(program.mail.accepted), "the digest of what is overdue")
    (letter,) = program.mail.accepted
    assert letter["To"] == "castellane@tarnwater.invalid"
    assert "C5-2208" in letter.get_content()

    file = auditor_downloads(Someone(chromium, program, "fairweather", WIDE).sign_in(), probe, tmp_path)
    said = pdfsig(file)
    assert "Signature is Valid" in said
    assert "Total document signed" in said
    assert program.command("verify_dossier", str(file)).returncode == 0
    damaged = flipped(file, 2000)
    assert "Signature is Valid" not in pdfsig(damaged)
    assert program.command("verify_dossier", str(damaged)).returncode == 1
    assert program.command("verify_dossier", str(flipped(file, file.stat().st_size - 3))).returncode == 1
    assert program.command("verify_ledger").returncode == 0
    assert program.command("recheck_verdicts").returncode == 0
