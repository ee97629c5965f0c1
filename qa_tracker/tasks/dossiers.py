"""Drawing one dossier as a task."""

from __future__ import annotations

from celery import shared_task
from django.utils.timezone import now

from qa_tracker.services import dossiers
from qa_tracker.tasks.beat import RENDER_DOSSIER


@shared_task(name=RENDER_DOSSIER)
def render_dossier(dossier_id: int) -> None:
    """Draw, seal and issue a frozen dossier. A second message about the same one finds it taken."""
    dossiers.render(dossier_id=dossier_id, at=now())
