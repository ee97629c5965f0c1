"""The browser of the journeys, and the whole program in processes of its own."""

from __future__ import annotations

import json
import os
import shutil
import signal
import subprocess
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

import pytest
from playwright.sync_api import Browser, sync_playwright

from config.env import BASE_DIR

FLAGS = ["--no-sandbox", "--disable-gpu", "--disable-background-networking"]
# What would lead the program away from the folder and the parts a test gives it.
ELSEWHERE = ("DATABASE_URL", "REDIS_URL", "SECRET_KEY", "BASE_URL", "EMAIL_HOST", "EMAIL_PORT")


@pytest.fixture(scope="session")
def chromium_path() -> str:
    """Where Chromium is; without it the journeys are left out, save in CI, where that is a failure."""
    found = shutil.which("chromium") or shutil.which("chromium-browser")
    if found is None and os.environ.get("CI") == "true":
        pytest.fail("Chromium is missing in CI: .ci/run installs it")
    if found is None:
        pytest.skip("Chromium is missing: install Debian's package chromium to walk the browser journeys")
    return found


@pytest.fixture(scope="module")
def chromium(chromium_path: str) -> Iterator[Browser]:
    """One browser for the tests of a file; each person gets a context of their own."""
    with sync_playwright() as driver:
        browser = driver.chromium.launch(executable_path=chromium_path, args=FLAGS)
        yield browser
        browser.close()


def clean_environment(data_dir: Path, **more: str) -> dict[str, str]:
    """The environment of a program that knows its data folder and nothing else of this run."""
    kept = {
        name: value
        for name, value in os.environ.items()
        if not name.startswith("DJANGO_") and name not in ELSEWHERE
    }
    return {**kept, "DATA_DIR": str(data_dir), **more}


@contextmanager
def standalone(env: dict[str, str], *options: str) -> Iterator[dict[str, object]]:
    """The whole program, from ready to ended; what it said when it was ready."""
    argv = (sys.executable, str(BASE_DIR / "manage.py"), "standalone", "--bind", "127.0.0.1:0", "--json")
    with (
        (Path(env["DATA_DIR"]) / "standalone.err").open("w+") as said,
        subprocess.Popen((*argv, *options), env=env, stdout=subprocess.PIPE, stderr=said, text=True) as child,
    ):
        line = child.stdout.readline() if child.stdout else ""
        if not line:
            said.seek(0)
            pytest.fail(said.read())
        yield json.loads(line)
        child.send_signal(signal.SIGTERM)
        child.wait(60)
