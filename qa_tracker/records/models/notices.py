"""Notices owed to people, the mail that carries them, and the heartbeat of the sweep."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import Fact
from qa_tracker.records.models.checks import Check
from qa_tracker.records.models.people import Person


class Notice(Fact):
    """One message owed to one person about one check at one level; the key makes it exactly once."""

    LEDGER_FORMS = {1: ("id", "uid", "check_id", "person_id", "level", "channel", "at", "skipped")}

    uid = models.UUIDField(unique=True)
    check_of = models.ForeignKey(
        Check, on_delete=models.DO_NOTHING, related_name="notices", db_column="check_id"
    )
    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="notices")
    level = models.CharField(max_length=12)
    channel = models.CharField(max_length=6)
    at = models.DateTimeField()
    skipped = models.CharField(
        max_length=60, blank=True, help_text="levels passed while nothing was sweeping"
    )

    class Meta:
        constraints = [
            models.UniqueConstraint(fields=["check_of", "level", "person", "channel"], name="notice_once")
        ]


class Digest(models.Model):
    """One mail to one person for one local day; claimed by compare-and-set with a lease."""

    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="digests")
    key = models.CharField(max_length=120, unique=True)
    message_id = models.CharField(max_length=200, unique=True)
    day_on = models.DateField()
    state = models.CharField(max_length=8, default="waiting")
    created_at = models.DateTimeField()
    due_at = models.DateTimeField()
    lease_until = models.DateTimeField(null=True)
    attempts = models.PositiveIntegerField(default=0)
    sent_at = models.DateTimeField(null=True)
    reply = models.CharField(max_length=300, blank=True)

    class Meta:
        indexes = [models.Index(fields=["state", "due_at"], name="digest_by_state")]


class NoticeMail(models.Model):
    """Which digest carries which mail notice; empty until a digest is made."""

    notice = models.OneToOneField(Notice, on_delete=models.DO_NOTHING, related_name="mail")
    digest = models.ForeignKey(Digest, null=True, on_delete=models.DO_NOTHING, related_name="notices")


class NoticeSeen(models.Model):
    """When a person last opened their in-app notices."""

    person = models.OneToOneField(Person, on_delete=models.DO_NOTHING, related_name="+")
    seen_at = models.DateTimeField()


class Heartbeat(models.Model):
    """When the sweep last ran to its end, by name of the heart."""

    name = models.CharField(max_length=20, unique=True)
    beat_at = models.DateTimeField()
    detail = models.TextField(blank=True)
