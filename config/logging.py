"""Where log lines go: standard error, one line each, no tokens and no names."""

from __future__ import annotations

import logging
import re
from pathlib import Path

SECRET_PATH = re.compile(r"/calendar/[^\s\"'<>]+")


class QuietFormatter(logging.Formatter):
    """Cuts what follows ``/calendar/`` out of the finished line, tracebacks included: it is a secret."""

    def format(self, record: logging.LogRecord) -> str:
        """The line without the secret."""
        return SECRET_PATH.sub("/calendar/[cut]", super().format(record))


def logging_for(data_dir: Path) -> dict[str, object]:
    """Django's LOGGING dictionary; ``data_dir`` is named so that a place may add a file handler."""
    return {
        "version": 1,
        "disable_existing_loggers": False,
        "formatters": {
            "line": {"()": QuietFormatter, "fmt": "%(asctime)s %(levelname)s %(name)s: %(message)s"}
        },
        "handlers": {"stderr": {"class": "logging.StreamHandler", "formatter": "line"}},
        "root": {"handlers": ["stderr"], "level": "INFO"},
        "loggers": {"axes": {"level": "WARNING"}},
    }
