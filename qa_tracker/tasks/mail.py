"""Delivering one digest as a task."""

from __future__ import annotations

from celery import shared_task
from django.utils.timezone import now

from qa_tracker.services import mail
from qa_tracker.tasks.beat import DELIVER_DIGEST


@shared_task(name=DELIVER_DIGEST)
def deliver_digest(digest_id: int) -> None:
    """Claim, send and mark one digest. A second message about the same digest finds it claimed or sent."""
    mail.deliver(digest_id=digest_id, at=now())
