"""Worker and broker killed between "overdue" and "sent": one notice, one digest, one Message-ID."""

from __future__ import annotations

import datetime as dt
import os
import shutil
import sys
import time
from collections.abc import Callable
from contextlib import contextmanager

import pytest
from django.utils.timezone import now

from config.celery import app
from config.env import BASE_DIR
from qa_tracker.ops.broker import broker_child, celery_url, socket_address
from qa_tracker.ops.interruptions import Interruptions
from qa_tracker.ops.processes import Child
from qa_tracker.ops.supervisor import Supervisor
from qa_tracker.records.models import Digest, Notice
from qa_tracker.records.queries.notices import waiting_digests
from qa_tracker.services import mail, sweep
from qa_tracker.tasks.beat import DELIVER_DIGEST, SWEEP
from qa_tracker.tasks.workers import worker_answers
from tests import builders
from tests.mail_server import serving

pytestmark = [pytest.mark.journey, pytest.mark.both_engines]
NODE = "leadline@kill"
LEASE_S = 2


def wait_until(true: Callable[[], bool], what: str, limit_s: float = 40) -> None:
    """Wait in short steps, and say what did not come."""
    until = time.monotonic() + limit_s
    while not true():
        assert time.monotonic() < until, f"waited {limit_s} s for: {what}"
        time.sleep(0.05)


class Runtime:
    """A broker and a worker on the test's database, each to be killed and begun again."""

    def __init__(self, folder, address, database_url, mail_port):
        self.folder, self.address, self.url = folder, address, celery_url(address)
        self.env = {
            **os.environ,
            "PYTHONPATH": str(BASE_DIR),
            "DJANGO_SETTINGS_MODULE": "config.settings",
            "DATABASE_URL": database_url,
            "DATA_DIR": str(folder),
            "REDIS_URL": self.url,
            "EMAIL_HOST": "127.0.0.1",
            "EMAIL_PORT": str(mail_port),
            "LEADLINE_MAIL_LEASE_S": str(LEASE_S),
            "LEADLINE_VISIBILITY_TIMEOUT": "1",
            "CELERY_SKIP_CHECKS": "1",
        }

    @contextmanager
    def running(self):
        with Interruptions() as interruptions, Supervisor(self.folder, interruptions) as supervisor:
            self._start(supervisor)
            yield supervisor

    def _start(self, supervisor):
        supervisor.start(broker_child(self.folder, self.address))
        supervisor.wait_ready("broker", limit_s=20)
        argv = (sys.executable, "-m", "celery", "-A", "config.celery", "worker", "-n", NODE, "-c", "1")
        options = ("--without-mingle", "--without-gossip", "--without-heartbeat")
        ready = lambda: worker_answers(self.url, NODE)  # noqa: E731
        supervisor.start(Child("worker", (*argv, *options), env=self.env, ready=ready))
        supervisor.wait_ready("worker", limit_s=40)

    def send(self, name, *args):
        with app.connection_for_write(url=self.url) as connection:
            app.send_task(name, args=args, connection=connection)


def kill_all(supervisor, folder):
    """kill -9 worker and broker with their groups, and wipe what the broker kept."""
    for name in ("worker", "broker"):
        os.killpg(supervisor.children[name].process.handle.pid, 9)
        supervisor.children.pop(name).process.bury()
    shutil.rmtree(folder / "broker")


def owe_overdue():
    """A check nobody did becomes overdue, on a working morning; its digest is made and not yet sent."""
    ward = builders.ward()
    moment = ward.check.overdue_at + dt.timedelta(hours=9)
    while moment.weekday() > 4:
        moment += dt.timedelta(days=1)
    sweep.sweep(at=now(), as_if=moment)
    mail.make_digests(at=now(), as_if=moment)
    return ward


@pytest.mark.parametrize("phase", ["before the worker takes it", "while the server holds the data"])
def test_one_notice_and_one_message_id_when_worker_and_broker_die(committed_db, tmp_path, phase):
    owe_overdue()
    digest_id = Digest.objects.get().pk
    with serving() as server, socket_address(tmp_path) as address:
        runtime = Runtime(tmp_path, address, committed_db.url, server.port)
        server.holding = True
        with runtime.running() as supervisor:
            if phase.startswith("while"):
                runtime.send(DELIVER_DIGEST, digest_id)
                wait_until(lambda: server.held > 0, "the server to hold the data")
            kill_all(supervisor, tmp_path)
        server.holding = False
        time.sleep(LEASE_S + 0.5)
        with runtime.running():
            for _ in range(3):
                runtime.send(SWEEP)
            wait_until(lambda: Digest.objects.get().state == "sent", "the digest to be sent")
            for _ in range(3):
                runtime.send(SWEEP)
            time.sleep(1)
        digest = Digest.objects.get()
        assert server.message_ids == {digest.message_id}
        assert len(server.accepted) == 1
    overdue = Notice.objects.filter(level="overdue")
    assert sorted(overdue.values_list("channel", flat=True)) == ["in_app", "mail"]
    assert waiting_digests() == []


def test_two_digests_go_out_when_the_claim_is_taken_away(committed_db):
    """The harness can fail: without the claim two deliveries of one digest are two mails."""
    owe_overdue()
    digest = Digest.objects.get()
    with serving() as server, pytest.MonkeyPatch.context() as patch:
        patch.setattr(mail.settings, "EMAIL_BACKEND", "django.core.mail.backends.smtp.EmailBackend")
        patch.setattr(mail.settings, "EMAIL_PORT", server.port)
        patch.setattr(mail, "claim", lambda *, digest_id: True)
        for _ in range(2):
            mail.deliver(digest_id=digest.pk, at=now())
        assert len(server.accepted) == 2
        assert server.message_ids == {digest.message_id}
