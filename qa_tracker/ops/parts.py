"""The parts of the standalone program, from what the settings say of this place."""

from __future__ import annotations

import os
import socket
import sys
from collections.abc import Mapping
from contextlib import ExitStack

from django.conf import settings

from config.env import BASE_DIR
from qa_tracker.ops.processes import Child, nothing
from qa_tracker.ops.serving import Bind, listen, listened
from qa_tracker.ops.supervisor import Refused
from qa_tracker.tasks.workers import give_back_held_tasks, worker_answers

NODE = "leadline@standalone"
POOL_PROCESSES = 2


def environment(broker_url: str, address: str, mail: socket.socket | None) -> dict[str, str]:
    """What the children are told: the same folder, broker and mail catcher for all of them."""
    told = {
        "DJANGO_SETTINGS_MODULE": os.environ.get("DJANGO_SETTINGS_MODULE", "config.settings"),
        "DATA_DIR": str(settings.DATA_DIR),
        "REDIS_URL": broker_url,
        "BASE_URL": os.environ.get("BASE_URL") or address,
        "PYTHONUNBUFFERED": "1",
        # The checks ran in the command that starts the children; a worker need not load every page for them.
        "CELERY_SKIP_CHECKS": "1",
        # A worker told to end gives back what it can't finish soon.
        "REMAP_SIGTERM": "SIGQUIT",
    }
    if mail is not None:
        told["EMAIL_PORT"] = str(listened(mail).port)
    # The owner of the tables is needed for migrating only.
    kept = {name: value for name, value in os.environ.items() if name != "MIGRATE_DATABASE_URL"}
    return {**kept, **told}


def listen_for_mail(stack: ExitStack, demo: bool) -> socket.socket | None:
    """The mail catcher's socket: for the demo, and never beside a mail server that was configured."""
    if not (demo and settings.DEMO_MAILBOX):
        return None
    try:
        return stack.enter_context(listen(Bind("127.0.0.1", settings.EMAIL_PORT)))
    except Refused:
        return stack.enter_context(listen(Bind("127.0.0.1", 0)))


def host_header() -> str:
    """A host that the pages accept, for the supervisor's own questions."""
    named = [host for host in settings.ALLOWED_HOSTS if not host.startswith(("*", "."))]
    return named[0] if named else "127.0.0.1"


def worker_child(broker_url: str, env: Mapping[str, str], own_broker: bool) -> Child:
    """The worker; on a broker of our own no other runs, so what a killed one held is given back before a start."""
    options = ("--without-mingle", "--without-gossip", "--without-heartbeat", "--loglevel", "INFO")
    pool = ("--hostname", NODE, "--concurrency", str(POOL_PROCESSES))
    return Child(
        name="worker",
        argv=(sys.executable, "-m", "celery", "-A", "config.celery", "worker", *pool, *options),
        env=env,
        cwd=BASE_DIR,
        ready=lambda: worker_answers(broker_url, NODE),
        before=(lambda: void(give_back_held_tasks(broker_url))) if own_broker else nothing,
        stop_limit_s=12.0,
    )


def void(_: object) -> None:
    """Drop a value."""


def beat_child(env: Mapping[str, str]) -> Child:
    """The timetable; it keeps no file, since what is due is stored in the database."""
    options = ("--scheduler", "celery.beat:Scheduler", "--loglevel", "INFO")
    return Child(
        name="beat",
        argv=(sys.executable, "-m", "celery", "-A", "config.celery", "beat", *options),
        env=env,
        cwd=BASE_DIR,
        stop_limit_s=3.0,
    )
