"""The two kinds of audited row, and how a row is written for hashing.

A *fact* is written once. A *noun* has a current row that commands change, and each change also inserts a
``Version`` (a fact). Every audited row names the leaf of the command that wrote it; the leaf is inserted
last, and its ``rows`` hold a digest of the facts, taken over the columns of ``LEDGER_FORMS``. A form, once
used, is never edited: a new column makes a new form.
"""

from __future__ import annotations

from typing import ClassVar

from django.db import models

from qa_tracker.records.ids import uuid7


class Audited(models.Model):
    """A row that no command may write without its leaf."""

    leaf = models.ForeignKey(
        "leadline.Leaf", to_field="uid", on_delete=models.DO_NOTHING, related_name="+", db_index=True
    )

    class Meta:
        abstract = True


class Fact(Audited):
    """An insert-only row. ``LEDGER_FORMS`` maps a form's number to the columns its digest covers."""

    LEDGER_FORMS: ClassVar[dict[int, tuple[str, ...]]]

    class Meta:
        abstract = True


class Noun(Audited):
    """A thing that changes: current row here, history in ``Version``."""

    uid = models.UUIDField(unique=True, default=uuid7, editable=False)
    version = models.PositiveIntegerField(default=1)

    class Meta:
        abstract = True


class ExactField(models.BigIntegerField):
    """The integer part of an exact decimal: value = scaled / 10**places."""
