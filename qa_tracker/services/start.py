"""What must hold before anything is served, the records being guarded; and that the program was started."""

from __future__ import annotations

import datetime as dt

from django.db import connection

from qa_tracker.records import guards
from qa_tracker.records.models import Heartbeat
from qa_tracker.services.health import START


def require_guards() -> None:
    """Refuse to start on a database whose guards are missing or changed (``GuardsMissing`` names them)."""
    guards.assert_installed(connection)


def note_start(*, at: dt.datetime) -> None:
    """Remember when the program was first served, so that a beat that never comes is noticed too."""
    Heartbeat.objects.get_or_create(name=START, defaults={"beat_at": at})


def begin(*, at: dt.datetime) -> None:
    """Both, and let go of the connection: processes that serve open their own."""
    require_guards()
    note_start(at=at)
    connection.close()
