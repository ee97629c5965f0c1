"""What is asked of workers from outside: whether one answers, and to let go of what a killed one held."""

from __future__ import annotations

import logging

from celery import Celery

from qa_tracker.tasks.hints import BROKER_ERRORS

ASKING_LIMIT_S = 2.0

logger = logging.getLogger(__name__)


def asking(broker_url: str) -> Celery:
    """An application that only asks: an application's questions go to its own broker, whatever is handed over."""
    return Celery(
        broker=broker_url,
        set_as_current=False,
        fixups=(),
        changes={
            "broker_transport_options": {
                "max_retries": 0,
                "socket_timeout": ASKING_LIMIT_S,
                "socket_connect_timeout": ASKING_LIMIT_S,
            }
        },
    )


def worker_answers(broker_url: str, node: str, limit_s: float = 0.5) -> bool:
    """Whether the worker of that node name takes tasks now."""
    try:
        with asking(broker_url) as app:
            return bool(app.control.ping([node], timeout=limit_s, limit=1))
    except BROKER_ERRORS:
        return False


def give_back_held_tasks(broker_url: str) -> int:
    """Put tasks held by killed workers back in line, and return how many.

    Only while no worker runs on this broker: a task in work would be done a second time. Without it they come
    back after the visibility timeout.
    """
    try:
        with asking(broker_url) as app, app.connection_for_write() as connection:
            held = connection.default_channel.qos
            with held.channel.conn_or_acquire() as client:
                tags = client.zrange(held.unacked_index_key, 0, -1)
                for tag in tags:
                    held.restore_by_tag(tag, client)
    except BROKER_ERRORS as error:
        logger.info("Held tasks could not be given back: %s", error)
        return 0
    return len(tags)
