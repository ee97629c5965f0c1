"""The append-only log. Only ``records/ledger.py`` writes here."""

from __future__ import annotations

from django.db import models


class Leaf(models.Model):
    """One command, as the exact bytes that were hashed."""

    seq = models.BigIntegerField(primary_key=True)
    uid = models.UUIDField(unique=True)
    kind = models.CharField(max_length=60)
    subject_type = models.CharField(max_length=40)
    subject_uid = models.UUIDField(null=True)
    device_uid = models.UUIDField(null=True)
    site_uid = models.UUIDField(null=True)
    actor_uid = models.UUIDField(null=True)
    at = models.DateTimeField()
    content = models.TextField(help_text="RFC 8785 JSON, UTF-8: the hashed bytes")
    leaf_hash = models.BinaryField(max_length=32)

    class Meta:
        indexes = [
            models.Index(fields=["device_uid", "seq"], name="leaf_by_device"),
            models.Index(fields=["subject_uid", "seq"], name="leaf_by_subject"),
        ]


class LedgerHead(models.Model):
    """The one row whose lock orders appends: size and the roots of the complete subtrees."""

    size = models.BigIntegerField(default=0)
    frontier = models.BinaryField(default=bytes(8))

    class Meta:
        constraints = [models.CheckConstraint(condition=models.Q(id=1), name="ledger_has_one_head")]


class Checkpoint(models.Model):
    """A signed statement of size and root (open signed-note text)."""

    size = models.BigIntegerField(unique=True)
    root = models.BinaryField(max_length=32)
    at = models.DateTimeField()
    note = models.TextField()
