"""How the program itself is: whether the sweep beats and mail goes out."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from django.db import DatabaseError

from qa_tracker.records.queries import mail, notices

SWEEP_LATE_AFTER = dt.timedelta(minutes=3)
MAIL_LATE_AFTER = dt.timedelta(minutes=5)
START = "start"
"""The heart that beats once: when the program was first served."""


@dataclass(frozen=True)
class Health:
    """``status`` is ``starting``, ``healthy`` or ``unhealthy``; ``reasons`` are codes."""

    status: str
    reasons: tuple[str, ...]
    last_sweep: dt.datetime | None
    mail_waiting_since: dt.datetime | None


def health(*, at: dt.datetime) -> Health:
    """How the program is at a moment.

    Red when the database does not answer, the last sweep (or, before the first, the start) is older than 3 minutes,
    mail waits longer than 5, or mail was given up.
    """
    try:
        return _health(at)
    except DatabaseError:
        return Health("unhealthy", ("database",), None, None)


def _health(at: dt.datetime) -> Health:
    swept, waiting = notices.last_sweep(), mail.waiting_since()
    reasons = []
    if swept is not None and at - swept > SWEEP_LATE_AFTER:
        reasons.append("sweep_late")
    if swept is None and _older(notices.beat_of(START), at, SWEEP_LATE_AFTER):
        reasons.append("sweep_never")
    if _older(waiting, at, MAIL_LATE_AFTER):
        reasons.append("mail_late")
    if mail.failed_mail_count():
        reasons.append("mail_failed")
    status = "unhealthy" if reasons else "healthy" if swept else "starting"
    return Health(status, tuple(reasons), swept, waiting)


def _older(moment: dt.datetime | None, at: dt.datetime, limit: dt.timedelta) -> bool:
    return moment is not None and at - moment > limit
