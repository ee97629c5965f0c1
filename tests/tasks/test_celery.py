"""The figures of the Celery application that keep a task from being done twice, or never."""

from __future__ import annotations

import pytest

from config.celery import LEASE_S, app
from qa_tracker.tasks.beat import SWEEP


@pytest.mark.parametrize(
    "place",
    [
        pytest.param(lambda conf: conf.visibility_timeout, id="application"),
        pytest.param(lambda conf: conf.broker_transport_options["visibility_timeout"], id="broker"),
        pytest.param(lambda conf: conf.result_backend_transport_options["visibility_timeout"], id="results"),
    ],
)
def test_held_task_stays_hidden_longer_than_its_lease_in_every_place(place) -> None:
    assert place(app.conf) == 300 > LEASE_S


def test_task_is_ended_before_its_lease_when_it_hangs() -> None:
    assert app.conf.task_soft_time_limit < app.conf.task_time_limit < LEASE_S


def test_timetable_has_one_line_when_read() -> None:
    (entry,) = app.conf.beat_schedule.values()

    assert (entry["task"], entry["schedule"]) == ("leadline.sweep", 60.0)


@pytest.mark.parametrize("name", ["task_acks_late", "task_reject_on_worker_lost", "enable_utc"])
def test_task_is_kept_until_done_when_configured(name: str) -> None:
    assert app.conf[name] is True


def test_sweep_has_a_line_of_its_own_when_mails_wait() -> None:
    lines = {queue.name: (queue.exchange.name, queue.routing_key) for queue in app.conf.task_queues}

    assert lines == {"celery": ("celery", "celery"), "sweep": ("sweep", "sweep")}
    assert app.conf.task_routes[SWEEP]["queue"] == "sweep"


def test_task_goes_on_when_the_broker_is_lost() -> None:
    assert app.conf.worker_cancel_long_running_tasks_on_connection_loss is False


def test_application_takes_json_only_and_keeps_no_results_when_configured() -> None:
    assert app.conf.accept_content == ["json"]
    assert app.conf.task_always_eager is False
    assert app.conf.result_backend is None
