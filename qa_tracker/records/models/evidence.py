"""Signatures, faults and dossiers."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import Fact, Noun
from qa_tracker.records.models.checks import Check, Submission
from qa_tracker.records.models.devices import Device
from qa_tracker.records.models.people import Person
from qa_tracker.records.models.sites import Site


class Signature(Fact):
    """Who, when, meaning: bound to the hash of exactly what was shown."""

    LEDGER_FORMS = {
        1: ("id", "uid", "person_id", "role", "meaning", "at", "subject_type", "subject_uid",
            "submission_id", "shown_sha256", "remark")
    }  # fmt: skip

    uid = models.UUIDField(unique=True)
    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="+")
    role = models.CharField(max_length=20)
    meaning = models.CharField(max_length=20)
    at = models.DateTimeField()
    subject_type = models.CharField(max_length=40)
    subject_uid = models.UUIDField()
    submission = models.ForeignKey(
        Submission, null=True, on_delete=models.DO_NOTHING, related_name="signatures"
    )
    shown_sha256 = models.CharField(max_length=64)
    remark = models.TextField(blank=True)

    class Meta:
        indexes = [models.Index(fields=["subject_uid"], name="signature_by_subject")]


class Fault(Noun):
    """A departure with grade, actions and downtime."""

    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="faults")
    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="+")
    grade = models.CharField(max_length=12)
    state = models.CharField(max_length=16)
    seen = models.TextField()
    place = models.CharField(max_length=60, blank=True)
    told = models.CharField(max_length=300, blank=True)
    instruction = models.TextField(blank=True)
    opened_by = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="+")
    opened_at = models.DateTimeField()
    submission = models.ForeignKey(Submission, null=True, on_delete=models.DO_NOTHING, related_name="faults")
    proving_check = models.ForeignKey(Check, null=True, on_delete=models.DO_NOTHING, related_name="+")
    look_back = models.TextField(blank=True)
    closed_at = models.DateTimeField(null=True)
    close_remark = models.TextField(blank=True)


class FaultAction(Fact):
    """Something done about a fault."""

    LEDGER_FORMS = {1: ("id", "fault_id", "kind", "text", "job_number", "by_id", "at")}

    fault = models.ForeignKey(Fault, on_delete=models.DO_NOTHING, related_name="actions")
    kind = models.CharField(max_length=20)
    text = models.TextField()
    job_number = models.CharField(max_length=60, blank=True)
    by = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="+")
    at = models.DateTimeField()


class Dossier(Noun):
    """A sealed audit document: frozen content, then drawn, then sealed outside any transaction."""

    device = models.ForeignKey(Device, on_delete=models.DO_NOTHING, related_name="dossiers")
    state = models.CharField(max_length=10)
    requested_by = models.ForeignKey(
        Person, null=True, on_delete=models.DO_NOTHING, related_name="+", help_text="empty: the command line"
    )
    requested_at = models.DateTimeField()
    content_sha256 = models.CharField(max_length=64)
    ledger_size = models.BigIntegerField()
    ledger_root = models.CharField(max_length=64)
    file_sha256 = models.CharField(max_length=64, blank=True, db_index=True)
    pages = models.PositiveIntegerField(default=0)
    issued_at = models.DateTimeField(null=True)
    failure = models.CharField(max_length=300, blank=True)
