"""How gunicorn serves the pages: one process with threads, since most of a request is waiting for the database."""

from __future__ import annotations

import os

from gunicorn.arbiter import Arbiter
from gunicorn.config import Config
from gunicorn.glogging import Logger
from gunicorn.workers.base import Worker

from config.logging import QuietFormatter
from config.parent import die_with_parent


class QuietLogger(Logger):
    """Writes neither in the access log nor in the error log what follows ``/calendar/``."""

    def setup(self, cfg: Config) -> None:
        """Give every handler a formatter that cuts."""
        super().setup(cfg)
        for handler in (*self.error_log.handlers, *self.access_log.handlers):
            told = handler.formatter
            handler.setFormatter(QuietFormatter(told._fmt if told else None, told.datefmt if told else None))


logger_class = QuietLogger
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
