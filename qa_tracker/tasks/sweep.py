"""The sweep as a task: idempotent, and safe in any number at once."""

from __future__ import annotations

from celery import shared_task
from django.utils.timezone import now

from qa_tracker.records.queries.dossiers import waiting
from qa_tracker.records.queries.notices import waiting_digests
from qa_tracker.services import beats, checkpoints, dossiers, mail
from qa_tracker.services import sweep as sweeping
from qa_tracker.tasks.beat import DELIVER_DIGEST, RENDER_DOSSIER, SWEEP
from qa_tracker.tasks.hints import send_hint


@shared_task(name=SWEEP)
def sweep() -> None:
    """Move what is due, make digests, sign a checkpoint, and hint at all that waits for a worker.

    1. Checks whose stored moment has come move, and their notices are owed.
    2. Digests whose hour has come are made.
    3. Dossiers whose drawing stopped are given back.
    4. A checkpoint is signed if the ledger grew.
    5. Whatever waits for a worker is hinted at, by one of the sweeps that come together; a lost hint is made up for
       by the next.
    """
    at = now()
    sweeping.sweep(at=at)
    made = mail.make_digests(at=at)
    dossiers.release_stuck(at=at)
    checkpoints.make(at=at)
    if not (beats.first_to_hint(at=at) or made):
        return
    for digest_id in waiting_digests():
        send_hint(DELIVER_DIGEST, digest_id)
    for dossier_id in waiting():
        send_hint(RENDER_DOSSIER, dossier_id)
