"""Where log lines go: standard error, one line each, no tokens and no names."""

from __future__ import annotations

from pathlib import Path


def logging_for(data_dir: Path) -> dict[str, object]:
    """Django's LOGGING dictionary; ``data_dir`` is named so that a place may add a file handler."""
    return {
        "version": 1,
        "disable_existing_loggers": False,
        "formatters": {"line": {"format": "%(asctime)s %(levelname)s %(name)s: %(message)s"}},
        "handlers": {"stderr": {"class": "logging.StreamHandler", "formatter": "line"}},
        "root": {"handlers": ["stderr"], "level": "INFO"},
        "loggers": {"axes": {"level": "WARNING"}},
    }
