"""The program's workers with the claim taken away: every delivery sends. Only to show that the storm notices."""

from __future__ import annotations

from importlib import import_module
from typing import Any

from celery import signals

from config.celery import app

__all__ = ["app"]


@signals.worker_init.connect
def always_claim(**_: Any) -> None:
    # The models are there only now.
    import_module("qa_tracker.services.mail").claim = lambda *, digest_id: True
