"""The whole program by one command: it comes up, stays up, and leaves nothing behind."""

from __future__ import annotations

import contextlib
import json
import os
import select
import signal
import socket
import subprocess
import sys
import time
import urllib.request
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from pathlib import Path

import psutil
import pytest

from config.env import BASE_DIR

pytestmark = [pytest.mark.journey, pytest.mark.xdist_group("standalone")]

READY_LIMIT_S = 60
OWN_PLACE = ("LEADLINE_TEST_DIR", "DATABASE_URL", "REDIS_URL", "EMAIL_HOST", "SECRET_KEY")


@dataclass
class Standalone:
    """A started command and what it printed when it was ready."""

    process: subprocess.Popen[str]
    said: dict = field(default_factory=dict)

    def wait_ready(self) -> Standalone:
        readable, _, _ = select.select([self.process.stdout], [], [], READY_LIMIT_S)
        line = self.process.stdout.readline() if readable else ""
        assert line, self.process.communicate(timeout=30)[1]
        self.said = json.loads(line)
        return self

    def below(self) -> list[psutil.Process]:
        return psutil.Process(self.process.pid).children(recursive=True)

    def child(self, text: str) -> psutil.Process:
        return next(
            child
            for child in psutil.Process(self.process.pid).children()
            if text in " ".join(child.cmdline())
        )

    def health(self) -> int:
        address = f"{self.said['address']}/health"
        with contextlib.suppress(OSError), urllib.request.urlopen(address, timeout=5) as answer:
            return answer.status
        return 0


def start(data_dir: Path, *options: str, **env: str) -> Standalone:
    command = (sys.executable, "manage.py", "standalone", "--json", *options)
    kept = {name: value for name, value in os.environ.items() if name not in OWN_PLACE}
    place = {**kept, "DJANGO_SETTINGS_MODULE": "config.settings", "DATA_DIR": str(data_dir), **env}
    pipe = subprocess.PIPE
    return Standalone(subprocess.Popen(command, cwd=BASE_DIR, env=place, stdout=pipe, stderr=pipe, text=True))


@pytest.fixture
def standalone(tmp_path: Path) -> Iterator[Standalone]:
    """The empty program, ready, on a free port."""
    started = start(tmp_path, "--bind", "127.0.0.1:0")
    try:
        yield started.wait_ready()
    finally:
        started.process.terminate()
        started.process.communicate(timeout=40)


def eventually(condition: Callable[[], object], limit_s: float = 20) -> bool:
    limit = time.monotonic() + limit_s
    while not condition() and time.monotonic() < limit:
        time.sleep(0.1)
    return bool(condition())


def test_standalone_says_who_can_sign_in_when_the_demo_is_ready(tmp_path: Path) -> None:
    started = start(tmp_path, "--demo", "--bind", "127.0.0.1:0").wait_ready()
    started.process.terminate()
    started.process.communicate(timeout=40)

    assert set(started.said) == {"address", "people"}
    assert started.said["people"]
    assert all(
        set(person) == {"name", "username", "password", "role", "site"} for person in started.said["people"]
    )


def test_standalone_serves_pages_and_no_people_when_it_is_empty(standalone: Standalone) -> None:
    assert standalone.health() == 200
    assert standalone.said["people"] == []


def test_standalone_leaves_nothing_when_it_is_told_to_end(standalone: Standalone) -> None:
    below = standalone.below()
    standalone.process.terminate()

    assert standalone.process.wait(timeout=30) == 0
    assert len(below) >= 7
    assert psutil.wait_procs(below, timeout=0)[1] == []


def test_standalone_leaves_nothing_when_it_is_killed(standalone: Standalone) -> None:
    below = standalone.below()
    standalone.process.kill()

    assert standalone.process.wait(timeout=5) == -signal.SIGKILL
    assert psutil.wait_procs(below, timeout=5)[1] == []


@pytest.mark.parametrize("part", ["gunicorn", "celery -A config.celery worker", "valkey"])
def test_standalone_starts_a_part_again_when_it_is_killed(standalone: Standalone, part: str) -> None:
    killed = standalone.child(part)
    killed.kill()

    assert eventually(lambda: not killed.is_running() and len(standalone.below()) >= 7)
    assert eventually(lambda: standalone.health() == 200)


def test_standalone_refuses_before_anything_starts_when_the_port_is_busy(tmp_path: Path) -> None:
    with socket.create_server(("127.0.0.1", 0)) as other:
        started = start(tmp_path, "--bind", f"127.0.0.1:{other.getsockname()[1]}")
        said, told = started.process.communicate(timeout=20)

    assert started.process.returncode == 1
    assert said == ""
    assert "is in use by another program" in told
    assert not (tmp_path / "logs" / "broker.log").exists()


def test_standalone_shows_the_last_lines_when_a_part_can_not_start(tmp_path: Path) -> None:
    started = start(tmp_path, "--bind", "127.0.0.1:0", GUNICORN_CMD_ARGS="--no-such-option")
    _, told = started.process.communicate(timeout=40)

    assert started.process.returncode == 1
    assert "“web” ended as soon as it was started" in told
    assert "--no-such-option" in told
