"""How gunicorn serves the pages: one process with threads, since most of a request is waiting for the database."""

from __future__ import annotations

import os

from gunicorn.arbiter import Arbiter
from gunicorn.workers.base import Worker

from config.parent import die_with_parent

wsgi_app = "config.wsgi"
worker_class = "gthread"
threads = 8
timeout = 60
graceful_timeout = 5
keepalive = 5
# A sign of life is written to a file; in memory it can't be held up by a slow disk.
worker_tmp_dir = "/dev/shm" if os.access("/dev/shm", os.W_OK) else None
control_socket_disable = True
errorlog = "-"


def post_fork(server: Arbiter, worker: Worker) -> None:
    """A serving process ends with the one that started it, even when that is killed outright."""
    die_with_parent()
