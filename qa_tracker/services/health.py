"""How the program itself is: whether the sweep beats and mail goes out."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from qa_tracker.records.queries import notices

SWEEP_LATE_AFTER = dt.timedelta(minutes=3)
MAIL_LATE_AFTER = dt.timedelta(minutes=5)


@dataclass(frozen=True)
class Health:
    """``status`` is ``starting``, ``healthy`` or ``unhealthy``; ``reasons`` are codes."""

    status: str
    reasons: tuple[str, ...]
    last_sweep: dt.datetime | None
    mail_waiting_since: dt.datetime | None


def health(*, at: dt.datetime) -> Health:
    """Red when the last sweep is older than 3 minutes, mail waits longer than 5, or mail was given up."""
    swept, mail = notices.last_sweep(), notices.oldest_waiting_mail()
    reasons = []
    if swept is not None and at - swept > SWEEP_LATE_AFTER:
        reasons.append("sweep_late")
    if mail is not None and at - mail > MAIL_LATE_AFTER:
        reasons.append("mail_late")
    if notices.failed_mail_count():
        reasons.append("mail_failed")
    status = "unhealthy" if reasons else "healthy" if swept else "starting"
    return Health(status, tuple(reasons), swept, mail)
