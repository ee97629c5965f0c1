"""The same form sent twice at the same moment is one submission, and both senders get it."""

from __future__ import annotations

import threading
import uuid
from concurrent.futures import ThreadPoolExecutor

from django.db import connections
from django.utils.timezone import now

import builders
from qa_tracker.records.models import Submission
from qa_tracker.records.models.ledger import Leaf
from qa_tracker.services import checks
from qa_tracker.services.checks import Typed


def test_both_senders_get_the_one_submission_when_a_form_comes_twice_at_once(committed_db):
    ward, at, form_uid, together = builders.ward(), now(), uuid.uuid4(), threading.Barrier(2)
    typed = Typed(entries=builders.answers(ward.check, ward.technician), cleaned_before="Wipe, Ifeoma")
    asked = {"check": ward.check.uid, "typed": typed, "actor": ward.technician, "at": at}
    shown = checks.preview(**asked, whole=True).shown_sha256

    def send(_: int) -> uuid.UUID:
        together.wait(10)
        try:
            more = {"form_uid": form_uid, "shown_sha256": shown, "password": builders.PASSWORD}
            return checks.submit(**asked, **more).uid
        finally:
            connections.close_all()

    with ThreadPoolExecutor(2) as threads:
        got = set(threads.map(send, range(2)))
    assert got == {Submission.objects.get().uid}
    assert Leaf.objects.filter(kind="check.submitted").count() == 1
