"""The history of every noun: one insert-only row for each change, with all its columns as text."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import Fact


class Version(Fact):
    """Noun ``subject_id`` of table ``noun`` as it was from ``recorded_at`` until its next version."""

    LEDGER_FORMS = {1: ("id", "noun", "subject_id", "number", "recorded_at", "columns")}

    noun = models.CharField(max_length=40)
    subject_id = models.BigIntegerField()
    number = models.PositiveIntegerField()
    recorded_at = models.DateTimeField()
    columns = models.TextField(help_text="RFC 8785 JSON: column name to text")

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["noun", "subject_id", "number"], name="version_once"),
        ]
        indexes = [models.Index(fields=["noun", "recorded_at"], name="version_by_moment")]
