"""Notices owed to people, the mail that carries them, and the heartbeat of the sweep."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import Fact, Noun
from qa_tracker.records.models.checks import Check
from qa_tracker.records.models.people import Person
from qa_tracker.records.models.sites import Site


class Notice(Fact):
    """One message owed to one person about one check, or another thing, at one level; the key makes it once."""

    LEDGER_FORMS = {
        1: ("id", "uid", "check_id", "person_id", "level", "channel", "at", "skipped"),
        2: (
            "id", "uid", "check_id", "about", "person_id", "recipient", "level", "channel", "at", "skipped",
        ),
    }  # fmt: skip

    uid = models.UUIDField(unique=True)
    check_of = models.ForeignKey(
        Check, null=True, on_delete=models.DO_NOTHING, related_name="notices", db_column="check_id"
    )
    about = models.CharField(max_length=120, blank=True, help_text="what it is about, where not a check")
    recipient = models.CharField(max_length=14, blank=True, help_text="the rung by which the person was told")
    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="notices")
    level = models.CharField(max_length=12)
    channel = models.CharField(max_length=6)
    at = models.DateTimeField()
    skipped = models.CharField(
        max_length=60, blank=True, help_text="levels passed while nothing was sweeping"
    )

    class Meta:
        constraints = [
            models.UniqueConstraint(
                models.functions.Coalesce("check_of", 0),
                models.F("about"),
                models.F("level"),
                models.F("person"),
                models.F("channel"),
                name="notice_once",
            ),
        ]


class LadderRung(Noun):
    """Who is told at a level, at one site or (site empty) where the site has no ladder of its own.

    Levels are upcoming, due, late, overdue, and t1, t2 ... so many days after overdue.
    """

    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="rungs")
    level = models.CharField(max_length=12)
    after_days = models.PositiveSmallIntegerField(default=0, help_text="days after overdue, for t1, t2 ...")
    recipient = models.CharField(max_length=14)
    ended_at = models.DateTimeField(null=True)


class NoticeHold(Noun):
    """Someone knows, until a moment: ``acknowledged`` keeps the ladder from climbing, ``snoozed`` their own notices.

    It never changes how the check stands.
    """

    check_of = models.ForeignKey(
        Check, on_delete=models.DO_NOTHING, related_name="holds", db_column="check_id"
    )
    person = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="+")
    kind = models.CharField(max_length=12)
    reason = models.CharField(max_length=300)
    held_at = models.DateTimeField()
    until_at = models.DateTimeField()
    ended_at = models.DateTimeField(null=True)


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


class DigestTry(models.Model):
    """One try to hand a digest to the mail server, and what it answered."""

    digest = models.ForeignKey(Digest, on_delete=models.CASCADE, related_name="tries")
    at = models.DateTimeField()
    outcome = models.CharField(max_length=8)
    reply = models.CharField(max_length=300, blank=True)


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


class SweepGap(models.Model):
    """A time in which nothing swept, and how many levels were passed over when sweeping went on."""

    began_at = models.DateTimeField(unique=True)
    ended_at = models.DateTimeField()
    notices = models.PositiveIntegerField(default=0)
    skipped = models.PositiveIntegerField(default=0)
