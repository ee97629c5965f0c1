"""Writing the next edition of a procedure: the draft as typed, what is wrong with it, and publishing it.

Drafts are no records: no leaf (see ``records/exempt.py``). One person has one draft of a procedure.
"""

from __future__ import annotations

import datetime as dt
import json
import uuid
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from django.db import transaction

from qa_tracker.core import edition_draft as writing_of
from qa_tracker.core.canonical import canonical
from qa_tracker.core.edition_draft import Writing
from qa_tracker.core.edition_refusals import Found, Published, read_whole
from qa_tracker.core.errors import Conflict, Invalid, NotFound, SeveralInvalid
from qa_tracker.core.procedure_differences import procedure_differences
from qa_tracker.records.models import Edition, EditionDraft, Person
from qa_tracker.records.queries import edition_drafts as rows
from qa_tracker.records.queries import library as published_rows
from qa_tracker.records.queries.edition_drafts import DraftRow, EditionName
from qa_tracker.services import cautions, library
from qa_tracker.services.guards import check_may

MOST_TRIES = 5
LONGEST_DOCUMENT = 500_000


@dataclass(frozen=True)
class Kept:
    """A draft as it is kept. ``newest`` is the number of the newest published edition."""

    procedure: uuid.UUID
    code: str
    title: str
    revision: int
    saved_at: dt.datetime
    newest: int
    writing: Writing

    @property
    def is_overtaken(self) -> bool:
        """Whether an edition of its number, or a later one, was published meanwhile."""
        return self.newest >= self.writing.number


def find(*, procedure: uuid.UUID, actor: Person, at: dt.datetime) -> Kept | None:
    """The actor's draft of a procedure, if there is one. Refused: role."""
    check_may(actor, "procedure.adopt", None, at)
    row = rows.find_draft(procedure, actor.pk)
    return _kept(row) if row else None


def get(*, procedure: uuid.UUID, actor: Person, at: dt.datetime) -> Kept:
    """The actor's draft of a procedure. Refused: role, ``edition_draft.unknown``."""
    found = find(procedure=procedure, actor=actor, at=at)
    if found is None:
        raise NotFound("edition_draft.unknown")
    return found


def start(*, procedure: uuid.UUID, actor: Person, at: dt.datetime) -> Kept:
    """Begin the edition after the newest one, or go on with the draft there is. Writes EditionDraft.

    Refused: role, ``edition.unknown`` where the procedure has no edition.
    """
    check_may(actor, "procedure.adopt", None, at)
    document, of = rows.newest_document(procedure), rows.procedure_id(procedure)
    if document is None or of is None:
        raise NotFound("edition.unknown")
    begun = writing_of.begin(document, document["edition"] + 1)
    EditionDraft.objects.get_or_create(
        procedure_id=of, person=actor, defaults={"content": _content(begun), "saved_at": at}
    )
    return get(procedure=procedure, actor=actor, at=at)


def keep(
    *,
    procedure: uuid.UUID,
    part: str,
    typed: Mapping[str, str],
    seen: int,
    actor: Person,
    at: dt.datetime,
) -> Kept:
    """Keep what was typed in one part, valid or not. Writes EditionDraft.

    Parameters
    ----------
    part
        ``head``, ``steps`` or a measurand's key.
    seen
        The revision the page was opened with or last told.

    Refused: role, ``edition_draft.unknown``, ``edition_draft.no_such_part``; what another page kept in this part
    meanwhile is not written over (``edition_draft.kept_meanwhile``).
    """
    return _change(
        procedure,
        lambda writing, revision: writing_of.kept(writing, part, typed, seen=seen, revision=revision),
        actor=actor,
        at=at,
    )


def add_measurand(*, procedure: uuid.UUID, actor: Person, at: dt.datetime) -> str:
    """Add a measurand at the end, and give its key. Writes EditionDraft."""
    kept = _change(procedure, writing_of.with_new_measurand, actor=actor, at=at)
    return kept.writing.measurands[-1].key


def move_measurand(*, procedure: uuid.UUID, key: str, by: int, actor: Person, at: dt.datetime) -> Kept:
    """Move a measurand up or down in the order it is asked in. Writes EditionDraft."""
    return _change(procedure, lambda writing, _: writing_of.moved(writing, key, by), actor=actor, at=at)


def remove_measurand(*, procedure: uuid.UUID, key: str, seen: int, actor: Person, at: dt.datetime) -> Kept:
    """Take a measurand out. Writes EditionDraft.

    Refused: as :func:`keep`; also where it was typed in since the page was opened.
    """

    def without(writing: Writing, _: int) -> Writing:
        if writing.part(key).revision > seen:
            raise Conflict("edition_draft.kept_meanwhile")
        return writing_of.without_measurand(writing, key)

    return _change(procedure, without, actor=actor, at=at)


def follow_newest(*, procedure: uuid.UUID, actor: Person, at: dt.datetime) -> Kept:
    """Let the draft be the edition after the newest one, where it was overtaken. Writes EditionDraft."""
    newest = get(procedure=procedure, actor=actor, at=at).newest
    return _change(procedure, lambda writing, _: writing_of.following(writing, newest), actor=actor, at=at)


def discard(*, procedure: uuid.UUID, actor: Person, at: dt.datetime) -> None:
    """Throw the actor's draft away. Writes EditionDraft."""
    check_may(actor, "procedure.adopt", None, at)
    EditionDraft.objects.filter(procedure__uid=procedure, person=actor).delete()


def editions(procedure: uuid.UUID) -> list[EditionName]:
    """The published editions of a procedure, the newest first."""
    return rows.editions_of(procedure)


def looked_through(writing: Writing) -> Found:
    """What a draft says as far as it can be read, and all that keeps it from being published."""
    return read_whole(writing_of.document_of(writing), published())


def published() -> Published:
    """What a new edition has to agree with."""
    criteria = [each.spec for one in published_rows.list_criteria_sets() for each in one.criteria]
    return Published(criteria, cautions.published(), rows.measurand_kinds())


def publish(*, procedure: uuid.UUID, revision: int, actor: Person, at: dt.datetime) -> Edition:
    """Publish the draft as it was looked over, and end it. Leaf ``procedure.published``.

    It has no force until it is adopted. Refused: role, ``edition_draft.unknown``, a draft that was changed since
    (``edition_draft.looked_at_another``), ``edition_draft.overtaken``, ``edition_draft.nothing_changed``, and all
    that is wrong with it at once (``SeveralInvalid``).
    """
    kept = get(procedure=procedure, actor=actor, at=at)
    if kept.revision != revision:
        raise Conflict("edition_draft.looked_at_another")
    if kept.is_overtaken:
        raise Conflict("edition_draft.overtaken", number=kept.newest)
    document = writing_of.document_of(kept.writing)
    _check_whole(document)
    with transaction.atomic():
        edition = library.publish_procedure(document=document, actor=actor, at=at)
        ended, _ = EditionDraft.objects.filter(
            procedure__uid=procedure, person=actor, revision=revision
        ).delete()
        if not ended:
            raise Conflict("edition_draft.looked_at_another")
    return edition


def publish_document(*, text: str, actor: Person, at: dt.datetime) -> Edition:
    """Publish an edition from a document of JSON, with the same checks. Leaf ``procedure.published``.

    Refused: role, ``edition_draft.no_document``, ``edition_draft.not_json``, an edition number that is published
    with other content, and all that is wrong with it at once (``SeveralInvalid``).
    """
    check_may(actor, "procedure.adopt", None, at)
    document = _parsed(text)
    _check_whole(document)
    return library.publish_procedure(document=document, actor=actor, at=at)


def _parsed(text: str) -> Any:
    if not text.strip():
        raise Invalid("edition_draft.no_document", field="document")
    if len(text) > LONGEST_DOCUMENT:
        raise Invalid("edition_draft.too_long", field="document", length=len(text), most=LONGEST_DOCUMENT)
    try:
        return json.loads(text)
    except json.JSONDecodeError as error:
        raise Invalid(
            "edition_draft.not_json", field="document", line=error.lineno, column=error.colno
        ) from error
    except RecursionError as error:
        raise Invalid("edition_draft.not_json", field="document", line=1, column=1) from error


def _check_whole(document: Any) -> None:
    """Refuse all that is wrong with a document, or one that says what the edition before it says."""
    found = read_whole(document, published())
    if found.refusals or found.spec is None:
        raise SeveralInvalid(found.refusals)
    before = _edition_before(found.spec.procedure, found.spec.edition)
    if before is not None and procedure_differences(before.spec, found.spec).none:
        raise Invalid("edition_draft.nothing_changed", number=before.number)


def _edition_before(code: str, number: int) -> published_rows.EditionRow | None:
    found = Edition.objects.filter(procedure__code=code, number__lt=number).order_by("-number").first()
    return published_rows.edition_by_id(found.pk) if found else None


def _change(
    procedure: uuid.UUID, make: Callable[[Writing, int], Writing], *, actor: Person, at: dt.datetime
) -> Kept:
    """Write the draft over the revision that was read, and no other; read again where another page was faster."""
    for _ in range(MOST_TRIES):
        before = get(procedure=procedure, actor=actor, at=at)
        after = make(before.writing, before.revision + 1)
        changed = EditionDraft.objects.filter(
            procedure__uid=procedure, person=actor, revision=before.revision
        ).update(content=_content(after), revision=before.revision + 1, saved_at=at)
        if changed:
            return get(procedure=procedure, actor=actor, at=at)
    raise Conflict("edition_draft.kept_meanwhile")


def _content(writing: Writing) -> str:
    return canonical(writing_of.to_json(writing)).decode()


def _kept(row: DraftRow) -> Kept:
    newest = max((each.number for each in rows.editions_of(row.procedure_uid)), default=0)
    writing = writing_of.from_json(row.content)
    return Kept(row.procedure_uid, row.code, row.title, row.revision, row.saved_at, newest, writing)
