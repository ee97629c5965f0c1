"""Ladders as they are stored: the rungs of a site, and those of the group."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from qa_tracker.core.ladder import Rung
from qa_tracker.records.models import LadderRung
from qa_tracker.records.queries.as_of import nouns


@dataclass(frozen=True)
class RungRow:
    """One rung in force; ``site_id`` is empty for the group's."""

    site_id: int | None
    rung: Rung


def rungs_in_force(as_of: dt.datetime | None = None) -> list[RungRow]:
    """Every rung in force now, or as known at a moment, in the order they were written."""
    found = nouns(LadderRung, as_of, ended_at=None)
    return [RungRow(row.site_id, Rung(row.level, row.recipient, row.after_days)) for row in found]
