"""What must hold before anything is served: the records are guarded."""

from __future__ import annotations

from django.db import connection

from qa_tracker.records import guards


def require_guards() -> None:
    """Refuse to start on a database whose guards are missing or changed (``GuardsMissing`` names them)."""
    guards.assert_installed(connection)
    connection.close()
