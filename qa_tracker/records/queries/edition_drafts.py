"""Editions of procedures for those who write the next one: drafts, the editions before, and what codes stand for."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from dataclasses import dataclass
from typing import Any

from qa_tracker.records.models import Edition, EditionDraft, Measurand, Procedure


@dataclass(frozen=True)
class DraftRow:
    """A draft as it is kept; ``content`` is what ``core.edition_draft.from_json`` reads."""

    id: int
    procedure_id: int
    procedure_uid: uuid.UUID
    code: str
    title: str
    revision: int
    saved_at: dt.datetime
    content: dict[str, Any]


@dataclass(frozen=True)
class EditionName:
    """A published edition by number and day, without its content."""

    uid: uuid.UUID
    number: int
    published_at: dt.datetime


def find_draft(procedure: uuid.UUID, person_id: int) -> DraftRow | None:
    """A person's draft of a procedure."""
    found = EditionDraft.objects.filter(procedure__uid=procedure, person_id=person_id)
    row = found.select_related("procedure").first()
    return _row(row) if row else None


def drafts_of(person_id: int) -> list[DraftRow]:
    """A person's drafts, that kept last first."""
    found = EditionDraft.objects.filter(person_id=person_id).select_related("procedure")
    return [_row(each) for each in found.order_by("-saved_at")]


def _row(draft: EditionDraft) -> DraftRow:
    of = draft.procedure
    content = json.loads(draft.content)
    return DraftRow(draft.id, of.id, of.uid, of.code, of.title, draft.revision, draft.saved_at, content)


def editions_of(procedure: uuid.UUID) -> list[EditionName]:
    """Every published edition of a procedure, the highest number first."""
    found = Edition.objects.filter(procedure__uid=procedure).order_by("-number")
    return [EditionName(*each) for each in found.values_list("uid", "number", "published_at")]


def newest_document(procedure: uuid.UUID) -> dict[str, Any] | None:
    """The document of the edition with the highest number."""
    found = Edition.objects.filter(procedure__uid=procedure).order_by("-number")
    content = found.values_list("content", flat=True).first()
    return json.loads(content) if content is not None else None


def edition_document(uid: uuid.UUID) -> dict[str, Any] | None:
    """The document of an edition."""
    content = Edition.objects.filter(uid=uid).values_list("content", flat=True).first()
    return json.loads(content) if content is not None else None


def procedure_id(uid: uuid.UUID) -> int | None:
    """The key of a procedure."""
    return Procedure.objects.filter(uid=uid).values_list("id", flat=True).first()


def measurand_kinds() -> dict[str, tuple[str, str]]:
    """Kind and unit of every measurand that was ever published, by code."""
    return {code: (kind, unit) for code, kind, unit in Measurand.objects.values_list("code", "kind", "unit")}
