"""How a check's due day was moved by hand: by whom, and why; the ledger's leaves of it."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from dataclasses import dataclass

from qa_tracker.records.models import Person
from qa_tracker.records.models.ledger import Leaf


@dataclass(frozen=True)
class DueMove:
    """One move of a due day."""

    from_on: dt.date
    to_on: dt.date
    by: str
    at: dt.datetime
    reason: str


def due_moves(check_uid: uuid.UUID) -> list[DueMove]:
    """The moves of a check's due day, oldest first."""
    leaves = list(Leaf.objects.filter(subject_uid=check_uid, kind="check.due_moved").order_by("seq"))
    people = dict(Person.objects.filter(uid__in={x.actor_uid for x in leaves}).values_list("uid", "name"))
    moves = []
    for leaf in leaves:
        said = json.loads(leaf.content)
        days = (dt.date.fromisoformat(said[each]["due"]) for each in ("old", "new"))
        by = people.get(leaf.actor_uid, "") if leaf.actor_uid else ""
        moves.append(DueMove(*days, by, leaf.at, str(said.get("reason") or "")))
    return moves
