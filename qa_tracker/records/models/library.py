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
