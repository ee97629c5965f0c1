"""Hints never hold up the person who caused them, whatever state the broker is in."""

from __future__ import annotations

import json
import logging
import signal
import time
from collections.abc import Iterator
from pathlib import Path

import psutil
import pytest
import redis

from config.celery import app
from qa_tracker.ops.broker import broker_child, celery_url, socket_address
from qa_tracker.ops.interruptions import Interruptions
from qa_tracker.ops.supervisor import Supervisor
from qa_tracker.tasks.beat import SWEEP
from qa_tracker.tasks.hints import send_hint

PATIENCE_S = 1.0


@pytest.fixture
def broker(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[tuple[Path, psutil.Process]]:
    """A broker that hints go to: its socket and its process."""
    with (
        socket_address(tmp_path) as address,
        Interruptions() as interruptions,
        Supervisor(tmp_path, interruptions) as supervisor,
    ):
        supervisor.start(broker_child(tmp_path, address))
        supervisor.wait_ready("broker", limit_s=10)
        monkeypatch.setattr(app.conf, "broker_write_url", celery_url(address))
        yield address, psutil.Process(supervisor.children["broker"].process.handle.pid)


def test_hint_waits_in_line_with_its_identifiers_when_the_broker_runs(
    broker: tuple[Path, psutil.Process],
) -> None:
    assert send_hint(SWEEP, 41, "0190-a")

    with redis.Redis(unix_socket_path=str(broker[0])) as client:
        message = json.loads(client.lindex("sweep", 0))
    assert message["headers"]["task"] == SWEEP
    assert message["headers"]["argsrepr"] == "(41, '0190-a')"
    assert message["content-type"] == "application/json"


def test_hint_is_let_go_soon_when_the_broker_hangs(broker: tuple[Path, psutil.Process]) -> None:
    broker[1].send_signal(signal.SIGSTOP)
    begun = time.monotonic()
    taken = send_hint(SWEEP)
    waited_s = time.monotonic() - begun
    broker[1].send_signal(signal.SIGCONT)

    assert not taken
    assert waited_s < PATIENCE_S


def test_hint_is_let_go_and_logged_when_no_broker_runs(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, caplog: pytest.LogCaptureFixture
) -> None:
    monkeypatch.setattr(app.conf, "broker_write_url", celery_url(tmp_path / "none.sock"))
    # Another test's logging set-up in this process may have put the logger to sleep.
    monkeypatch.setattr(logging.getLogger("qa_tracker.tasks.hints"), "disabled", False)
    begun = time.monotonic()
    with caplog.at_level(logging.INFO, logger="qa_tracker.tasks.hints"):
        taken = send_hint(SWEEP)

    assert not taken
    assert time.monotonic() - begun < PATIENCE_S
    assert f"did not take the hint {SWEEP}" in caplog.text
