"""The secret address of a person's calendar feed: issued, replaced, revoked, and whose it is."""

from __future__ import annotations

import datetime as dt
import hashlib
import secrets

from qa_tracker.core.errors import NotFound
from qa_tracker.records import ledger
from qa_tracker.records.models import FeedToken, Person
from qa_tracker.services import guards

TOKEN_BYTES = 16


def _digest(token: str) -> str:
    return hashlib.sha256(token.encode()).hexdigest()


def issue(*, actor: Person, at: dt.datetime) -> str:
    """Make the secret part of the actor's feed address and return it: shown once, kept as a hash.

    It replaces the one in force, which ends at once. Leaf ``feed.issued``. Refused: who may see nothing.
    """
    guards.check_may_somewhere(actor, "see", at)
    token = secrets.token_hex(TOKEN_BYTES)
    with ledger.command("feed.issued", actor=actor, at=at) as act:
        replaced = FeedToken.objects.filter(person=actor, revoked_at=None).update(revoked_at=at)
        FeedToken.objects.create(person=actor, digest=_digest(token), created_at=at)
        act.about(actor)
        act.tell({"sha256": _digest(token), "replaced": replaced > 0})
    return token


def revoke(*, actor: Person, at: dt.datetime) -> None:
    """End the address of the actor's own feed at once. Leaf ``feed.revoked``. Refused: none in force."""
    with ledger.command("feed.revoked", actor=actor, at=at) as act:
        row = FeedToken.objects.filter(person=actor, revoked_at=None).first()
        if row is None:
            raise NotFound("feed.none")
        FeedToken.objects.filter(pk=row.pk).update(revoked_at=at)
        act.about(actor)
        act.tell({"sha256": row.digest})


def owner_of(token: str) -> Person | None:
    """The active person whose feed this is, while the address is in force."""
    rows = FeedToken.objects.filter(digest=_digest(token), revoked_at=None, person__is_active=True)
    found = rows.select_related("person").first()
    return found.person if found else None


def issued_at(person: Person) -> dt.datetime | None:
    """Since when the person's address is in force; None where there is none."""
    found = FeedToken.objects.filter(person=person, revoked_at=None).values_list("created_at", flat=True)
    return found.first()
