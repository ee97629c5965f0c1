"""Procedures and criteria as published, and who adopted them."""

from __future__ import annotations

from django.db import models

from qa_tracker.records.models.base import Fact, Noun
from qa_tracker.records.models.people import Person
from qa_tracker.records.models.sites import Site


class Measurand(Fact):
    """A quantity to be measured. Codes are global, so that one series runs through several procedures."""

    LEDGER_FORMS = {1: ("id", "code", "kind", "unit")}

    code = models.CharField(max_length=60, unique=True)
    kind = models.CharField(max_length=12)
    unit = models.CharField(max_length=12, blank=True)


class Procedure(Noun):
    """A written list of measurands; its content is in its editions."""

    code = models.CharField(max_length=60, unique=True)
    title = models.CharField(max_length=160)


class Edition(Fact):
    """A published edition of a procedure: frozen, with its whole content as canonical JSON."""

    LEDGER_FORMS = {1: ("id", "uid", "procedure_id", "number", "published_at", "content", "content_sha256")}

    uid = models.UUIDField(unique=True)
    procedure = models.ForeignKey(Procedure, on_delete=models.DO_NOTHING, related_name="editions")
    number = models.PositiveIntegerField()
    published_at = models.DateTimeField()
    content = models.TextField()
    content_sha256 = models.CharField(max_length=64)

    class Meta:
        constraints = [models.UniqueConstraint(fields=["procedure", "number"], name="edition_once")]


class CriteriaSet(Fact):
    """A published set of limits, one edition, with its source."""

    LEDGER_FORMS = {1: ("id", "uid", "code", "edition", "title", "source", "note", "published_at")}

    uid = models.UUIDField(unique=True)
    code = models.CharField(max_length=60)
    edition = models.CharField(max_length=30)
    title = models.CharField(max_length=200)
    source = models.TextField()
    note = models.TextField(blank=True)
    published_at = models.DateTimeField()

    class Meta:
        constraints = [models.UniqueConstraint(fields=["code", "edition"], name="criteria_set_once")]


class Criterion(Fact):
    """One limit of a set; ``content`` is its canonical JSON with source and standing."""

    LEDGER_FORMS = {1: ("id", "uid", "criteria_set_id", "code", "content")}

    uid = models.UUIDField(unique=True)
    criteria_set = models.ForeignKey(CriteriaSet, on_delete=models.DO_NOTHING, related_name="criteria")
    code = models.CharField(max_length=60)
    content = models.TextField()

    class Meta:
        constraints = [models.UniqueConstraint(fields=["criteria_set", "code"], name="criterion_once")]


class Adoption(Noun):
    """A named physicist's decision to work by an edition or a set, for the group or one site."""

    edition = models.ForeignKey(Edition, null=True, on_delete=models.DO_NOTHING, related_name="adoptions")
    criteria_set = models.ForeignKey(
        CriteriaSet, null=True, on_delete=models.DO_NOTHING, related_name="adoptions"
    )
    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="+")
    adopted_by = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="+")
    adopted_at = models.DateTimeField()
    remark = models.TextField(blank=True)
    ended_at = models.DateTimeField(null=True)

    class Meta:
        constraints = [
            models.CheckConstraint(
                condition=models.Q(edition=None, criteria_set__isnull=False)
                | models.Q(edition__isnull=False, criteria_set=None),
                name="adoption_of_one_thing",
            )
        ]


class StatedUncertainty(Noun):
    """How well a measurand is measured, and by which decision rule it is judged, for the group or one site.

    ``entered`` is a standard uncertainty, or an expanded one with its ``coverage_factor``; with ``repeats`` it
    was estimated from the readings kept there, and with kind ``repeats_of_check`` from each check's own.
    """

    measurand = models.ForeignKey(Measurand, on_delete=models.DO_NOTHING, related_name="+")
    site = models.ForeignKey(Site, null=True, on_delete=models.DO_NOTHING, related_name="+")
    kind = models.CharField(max_length=16)
    entered = models.CharField(max_length=40, blank=True)
    coverage_factor = models.CharField(max_length=10, blank=True)
    repeats = models.TextField(blank=True, help_text="RFC 8785 JSON: readings as entered")
    rule = models.CharField(max_length=10, blank=True, help_text="empty: the default of the criterion")
    source = models.TextField()
    stated_by = models.ForeignKey(Person, on_delete=models.DO_NOTHING, related_name="+")
    stated_at = models.DateTimeField()
    ended_at = models.DateTimeField(null=True)

    class Meta:
        constraints = [
            models.UniqueConstraint(
                models.F("measurand"),
                models.functions.Coalesce("site", 0),
                condition=models.Q(ended_at=None),
                name="one_stated_uncertainty",
            )
        ]


class EditionDraft(models.Model):
    """A next edition being written, not yet published; outside the ledger, as nothing is judged by it."""

    procedure = models.ForeignKey(Procedure, on_delete=models.CASCADE, related_name="drafts")
    person = models.ForeignKey(Person, on_delete=models.CASCADE, related_name="edition_drafts")
    content = models.TextField()
    revision = models.PositiveIntegerField(default=1)
    saved_at = models.DateTimeField()

    class Meta:
        constraints = [models.UniqueConstraint(fields=["procedure", "person"], name="edition_draft_once")]
