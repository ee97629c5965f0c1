"""How a check's due day was moved by hand: by whom, and why; the ledger's leaves of it."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from qa_tracker.records.queries.ledger import leaves_about


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
    moves = []
    for leaf in leaves_about(check_uid, "check.due_moved"):
        said = leaf.said
        from_on, to_on = (dt.date.fromisoformat(said[each]["due"]) for each in ("old", "new"))
        moves.append(DueMove(from_on, to_on, leaf.actor, leaf.at, str(said.get("reason") or "")))
    return moves
