"""Hints: a word to the worker that something waits. They may be lost, since the sweep finds what they meant."""

from __future__ import annotations

import logging

from celery.exceptions import CeleryError
from kombu.exceptions import KombuError, OperationalError
from redis.exceptions import RedisError

from config.celery import app

HINT_TIMEOUT_S = 0.2
BROKER_ERRORS = (OperationalError, KombuError, RedisError, CeleryError, OSError)

logger = logging.getLogger(__name__)


def send_hint(task_name: str, *args: str | int) -> bool:
    """Ask a worker to run a task soon; never wait for a broker that doesn't answer, and never fail.

    Parameters
    ----------
    task_name
        One of the names in ``qa_tracker.tasks.beat``.
    args
        Identifiers only.

    Returns
    -------
    bool
        Whether the broker took the hint.
    """
    try:
        with app.connection_for_write(
            connect_timeout=HINT_TIMEOUT_S,
            transport_options={
                "socket_timeout": HINT_TIMEOUT_S,
                "socket_connect_timeout": HINT_TIMEOUT_S,
                "max_retries": 0,
            },
        ) as connection:
            app.send_task(task_name, args=args, connection=connection, retry=False, ignore_result=True)
    except BROKER_ERRORS as error:
        logger.info("The broker did not take the hint %s: %s", task_name, error)
        return False
    return True
