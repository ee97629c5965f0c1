"""Two sweeps in processes of their own at once, a worker killed with a mail in its hands, and the second heart."""

from __future__ import annotations

import datetime as dt
import subprocess
import sys
import time
from collections import Counter

import pytest
from django.utils.timezone import now

from config.env import BASE_DIR
from qa_tracker.records.models import Digest, Heartbeat, Notice
from qa_tracker.services import mail, sweep
from qa_tracker.services.health import health
from tests import builders
from tests.journeys.conftest import clean_environment
from tests.journeys.storm import HOST
from tests.mail_server import serving

pytestmark = [pytest.mark.journey, pytest.mark.both_engines]
LEASE_S = 1


def working_morning(ward):
    """A moment at which the ward's check is overdue and mail may go."""
    moment = ward.check.overdue_at + dt.timedelta(hours=9)
    while moment.weekday() > 4:
        moment += dt.timedelta(days=1)
    return moment


def heart(folder, database, port, *options):
    """The second heart, begun."""
    told = {"DATABASE_URL": database.url, "EMAIL_HOST": HOST, "EMAIL_PORT": str(port)}
    env = clean_environment(folder, **told, LEADLINE_MAIL_LEASE_S=str(LEASE_S))
    return subprocess.Popen((sys.executable, str(BASE_DIR / "manage.py"), "sweep", *options), env=env)


def ended_well(*hearts):
    return [each.wait(60) for each in hearts] == [0] * len(hearts)


def wait_until(true, limit_s=40):
    until = time.monotonic() + limit_s
    while not true():
        assert time.monotonic() < until
        time.sleep(0.02)


def test_two_sweeps_in_two_processes_give_each_notice_once(committed_db, tmp_path):
    moment = working_morning(builders.ward()).isoformat()
    with serving() as server:
        assert ended_well(*(heart(tmp_path, committed_db, server.port, "--at", moment) for _ in range(2)))
    told = Counter(Notice.objects.values_list("check_of_id", "person_id", "channel"))
    assert set(told.values()) == {1}
    assert len(server.accepted) == len(server.message_ids) == Digest.objects.filter(state="sent").count() == 1


def test_mail_of_a_killed_heart_goes_by_another_with_the_same_message_id_when_its_lease_ends(
    committed_db, tmp_path
):
    moment = working_morning(builders.ward())
    sweep.sweep(at=now(), as_if=moment)
    mail.make_digests(at=now(), as_if=moment)
    with serving() as server:
        server.holding = True
        with heart(tmp_path, committed_db, server.port) as killed:
            wait_until(lambda: server.held)
            killed.kill()
        server.holding = False
        assert Digest.objects.get().state == "claimed"
        wait_until(mail.waiting_digests)
        assert ended_well(heart(tmp_path, committed_db, server.port))
    digest = Digest.objects.get()
    assert (digest.state, server.message_ids, len(server.accepted)) == ("sent", {digest.message_id}, 1)


def test_health_turns_red_without_a_beat_and_the_second_heart_takes_over(committed_db, tmp_path):
    ward, beat_at = builders.ward(), now() - dt.timedelta(minutes=3, seconds=1)
    Heartbeat.objects.create(name="sweep", beat_at=beat_at)
    assert health(at=beat_at + dt.timedelta(minutes=3)).status == "healthy"
    assert health(at=now()).reasons == ("sweep_late",)
    with serving() as server:
        assert ended_well(heart(tmp_path, committed_db, server.port))
    assert health(at=now()).status == "healthy"
    assert Notice.objects.filter(check_of=ward.check, channel="in_app").exists()
