"""The Celery application: small idempotent tasks, JSON only, nothing kept that the database does not know.

A task that is held by a worker that was killed is given out again after ``visibility_timeout``. A claim made
in the database lasts ``LEASE_S``; a task is ended before its lease ends, and its message is not given out a
second time before that.
"""

from __future__ import annotations

import logging.config
import os
from typing import Any

os.environ.setdefault("DJANGO_SETTINGS_MODULE", "config.settings")

from celery import Celery, signals
from django.conf import settings
from kombu import Exchange, Queue

from config.parent import die_with_parent
from qa_tracker.tasks.beat import EVERY_MINUTE, SWEEP

LEASE_S = 240
TIME_LIMIT_S = 200
SOFT_TIME_LIMIT_S = 180
VISIBILITY_TIMEOUT_S = int(os.environ.get("LEADLINE_VISIBILITY_TIMEOUT", "300"))
SOFT_SHUTDOWN_S = 5.0
# A line of its own, so that a sweep never stands behind a thousand mails: a worker takes from the two in turn.
LINES = ("celery", "sweep")
TASK_MODULES = ("qa_tracker.tasks.sweep", "qa_tracker.tasks.mail", "qa_tracker.tasks.dossiers")

app = Celery("leadline")
app.conf.update(
    broker_url=settings.CELERY_BROKER_URL,
    broker_connection_retry_on_startup=True,
    broker_transport_options={
        "visibility_timeout": VISIBILITY_TIMEOUT_S,
        # Look for held tasks at least each 10 s; by default only each tenth look is a real one.
        "unacked_restore_interval": min(10, VISIBILITY_TIMEOUT_S),
        "unacked_restore_throttle": 1,
    },
    # The same figure in every place that is read: with several, the shortest would win.
    visibility_timeout=VISIBILITY_TIMEOUT_S,
    result_backend_transport_options={"visibility_timeout": VISIBILITY_TIMEOUT_S},
    result_backend=None,
    task_ignore_result=True,
    accept_content=["json"],
    task_serializer="json",
    result_serializer="json",
    imports=TASK_MODULES,
    task_acks_late=True,
    task_reject_on_worker_lost=True,
    task_time_limit=TIME_LIMIT_S,
    task_soft_time_limit=SOFT_TIME_LIMIT_S,
    task_create_missing_queues=True,
    task_queues=[Queue(line, Exchange(line), routing_key=line) for line in LINES],
    task_routes={SWEEP: {"queue": "sweep", "routing_key": "sweep"}},
    worker_pool="prefork",
    worker_prefetch_multiplier=1,
    worker_soft_shutdown_timeout=SOFT_SHUTDOWN_S,
    # What loses the broker goes on: cut off, a mail that the server took would be sent again. Its message comes back,
    # and finds the claim.
    worker_cancel_long_running_tasks_on_connection_loss=False,
    worker_max_tasks_per_child=1000,
    worker_send_task_events=False,
    timezone="UTC",
    enable_utc=True,
    beat_schedule=EVERY_MINUTE,
)


@signals.setup_logging.connect
def keep_our_logging(**_: Any) -> None:
    """Celery leaves the loggers as the settings say."""
    logging.config.dictConfig(settings.LOGGING)


@signals.worker_process_init.connect
def end_with_the_worker(**_: Any) -> None:
    """A pool process ends with its worker, even when that is killed outright."""
    die_with_parent()


@signals.worker_ready.connect
def sweep_at_once(**_: Any) -> None:
    """What came due while nothing ran is not left for the first minute of the timetable."""
    app.send_task(SWEEP, ignore_result=True, expires=60)
