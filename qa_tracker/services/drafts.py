"""What a person has typed and not yet signed, kept so that a closed page or a lost network loses nothing.

Drafts are no records: no leaf (see ``records/exempt.py``). One person has one draft of a check.
"""

from __future__ import annotations

import datetime as dt
import json
import uuid
from collections.abc import Mapping
from dataclasses import dataclass

from qa_tracker.core.canonical import canonical
from qa_tracker.core.errors import Conflict
from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records.models import Check, Draft, Person
from qa_tracker.services import finding


@dataclass(frozen=True)
class Kept:
    """A draft as it was last kept; ``typed`` holds the inputs by name, just as typed."""

    form_uid: uuid.UUID
    revision: int
    saved_at: dt.datetime
    typed: dict[str, str]


class KeptMeanwhile(Conflict):
    """Another page kept something else since this one was opened; ``kept`` is what it kept."""

    def __init__(self, kept: Kept) -> None:
        super().__init__("draft.kept_meanwhile")
        self.kept = kept


def find(*, check: uuid.UUID, actor: Person, at: dt.datetime) -> Kept | None:
    """The actor's draft of a check in sight, if there is one."""
    row = finding.check(actor, check, at)
    found = Draft.objects.filter(check_of=row, person=actor).first()
    return _kept(found) if found else None


def keep(
    *, check: uuid.UUID, typed: Mapping[str, str], revision: int, actor: Person, at: dt.datetime
) -> Kept:
    """Keep what was typed. Writes Draft.

    Parameters
    ----------
    typed
        Inputs by name. ``page`` and ``turn`` may be among them: what one page sends overtakes itself by turns.
    revision
        The one the page was opened with or last told, 0 for none. What another page kept meanwhile is not
        written over: :class:`KeptMeanwhile` brings it, and its revision to go on with.

    Refused: out of sight (``check.unknown``), a check that takes no submission now (``check.wrong_state``).
    """
    row = finding.check(actor, check, at)
    if row.state not in CHECK_AWAITED:
        raise Conflict("check.wrong_state", state=row.state, verb="submit")
    content = canonical(dict(typed)).decode()
    found, is_new = Draft.objects.get_or_create(
        check_of=row,
        person=actor,
        defaults={"form_uid": uuid.uuid4(), "content": content, "saved_at": at},
    )
    if not is_new and found.content != content:
        before = json.loads(found.content)
        if not _is_same_page(before, typed):
            _replace(found, content, revision, at)
        elif _turn(before) < _turn(typed):
            _replace(found, content, found.revision, at)
    return _kept(found)


def _is_same_page(before: Mapping[str, str], typed: Mapping[str, str]) -> bool:
    return bool(typed.get("page")) and before.get("page") == typed.get("page")


def _turn(typed: Mapping[str, str]) -> int:
    text = typed.get("turn", "")
    return int(text) if text.isascii() and text.isdigit() and len(text) < 10 else 0


def _replace(found: Draft, content: str, revision: int, at: dt.datetime) -> None:
    """Write over the revision that was seen, and no other."""
    changed = Draft.objects.filter(pk=found.pk, revision=revision).update(
        content=content, revision=revision + 1, saved_at=at
    )
    found.refresh_from_db()
    if not changed:
        raise KeptMeanwhile(_kept(found))


def drop(*, check: uuid.UUID, actor: Person, at: dt.datetime) -> None:
    """Throw the actor's draft of a check away."""
    row: Check = finding.check(actor, check, at)
    Draft.objects.filter(check_of=row, person=actor).delete()


def _kept(draft: Draft) -> Kept:
    return Kept(draft.form_uid, draft.revision, draft.saved_at, json.loads(draft.content))
